package job

import (
	"io"

	"strandwise/ingest"
)

// Check reports what the plan's recordings hold and what is wrong with them.
func (p *Plan) Check(in io.Reader) (*ingest.Report, error) {
	r, err := p.open(in)
	if err != nil {
		return nil, err
	}
	defer r.Close()
	report, err := r.Check()
	return report, p.asUsage(err)
}
