package export

import (
	"encoding/json"

	"strandwise/export/pages"
)

// RunKey is the key of [Run] in the metadata of every Parquet file of a set and
// of a stream of grown takes.
const RunKey = "strandwise.run"

// runFormat names the form of Run.
const runFormat = "strandwise.run/1"

// Run says by what the takes were made, well enough to make them again from the
// same recordings.
type Run struct {
	Format         string          `json:"format"` // "strandwise.run/1"
	ProgramVersion string          `json:"program_version"`
	Seed           uint64          `json:"seed,string"` // a JSON string: readers lose digits of numbers above 2^53
	Plan           json.RawMessage `json:"plan"`        // by key, as it was carried out; null when none was stated
}

// Run returns the run that these options state.
func (o Options) Run() Run {
	plan := o.Plan
	if len(plan) == 0 {
		plan = json.RawMessage("null")
	}
	return Run{Format: runFormat, ProgramVersion: o.Version, Seed: o.Seed, Plan: plan}
}

func (r Run) metadata() (pages.KeyValue, error) {
	text, err := marshal(r, "")
	return pages.KeyValue{Key: RunKey, Value: string(text)}, err
}
