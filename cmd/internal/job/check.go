package job

import (
	"io"

	"strandwise/ingest"
)

// Check reports what the plan's recordings hold and what is wrong with them.
func (p *Plan) Check(in io.Reader, progress Progress) (*ingest.Report, error) {
	r, err := p.open(in, strict)
	if err != nil {
		return nil, err
	}
	defer r.Close()
	progress.Begin("checking", -1, "takes")
	defer progress.End()
	report, err := r.Check(func() { progress.Step(1) })
	return report, p.asUsage(err)
}
