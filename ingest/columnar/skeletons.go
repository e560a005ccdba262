package columnar

import (
	"encoding/json"

	"strandwise/channels/body"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// skeletonsKey is the metadata key under which a table of takes keeps the
// skeletons whose joints its channels are.
const skeletonsKey = "strandwise.skeletons"

// parseSkeletons reads the skeleton of each take, by the take's id. Takes of
// one skeleton share it. The error is a fault.
func parseSkeletons(text string, in raw.Input) (map[string]*body.Skeleton, error) {
	if text == "" {
		return nil, nil
	}
	e := &fault.Error{File: in.Name, Problem: "its metadata " + skeletonsKey + " cannot be read", Remedy: "write the file again from the recordings"}
	var list []struct {
		Takes    []string
		Skeleton *body.Skeleton
	}
	if e.Err = json.Unmarshal([]byte(text), &list); e.Err != nil {
		return nil, e
	}
	out := make(map[string]*body.Skeleton)
	for _, entry := range list {
		if entry.Skeleton == nil {
			e.Problem = "its metadata " + skeletonsKey + " name takes without a skeleton"
			return nil, e
		}
		if e.Err = entry.Skeleton.Validate(); e.Err != nil {
			return nil, e
		}
		for _, id := range entry.Takes {
			out[id] = entry.Skeleton
		}
	}
	return out, nil
}
