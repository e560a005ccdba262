package job

import (
	"context"

	"strandwise/augment"
	"strandwise/channels"
	"strandwise/classify"
)

// survey is what the first pass over the recordings finds. It holds no more
// than a bounded sample of them.
type survey struct {
	layout   *channels.Layout
	takes    int
	training int
	frames   int
	scales   augment.Scales   // of the training takes
	sample   *classify.Sample // to score on
}

// look reads all recordings once, which also shows whether they are sound
// before anything is written.
func look(ctx context.Context, takes channels.Stream, most int, seed uint64) (*survey, error) {
	s := &survey{sample: classify.NewSample(most, seed)}
	for t, err := range takes {
		if err == nil {
			err = ctx.Err()
		}
		if err != nil {
			return nil, err
		}
		s.layout = t.Layout
		s.takes++
		s.frames += t.Frames()
		if t.Split != channels.Test {
			s.training++
			s.scales.Add(t)
		}
		s.sample.Add(t)
	}
	if s.takes == 0 {
		return nil, &UsageError{Problem: "the recordings hold no takes"}
	}
	return s, nil
}
