package job

import (
	"context"
	"io"
	"slices"

	"strandwise/channels"
	"strandwise/classify"
)

// survey is what the first pass over the recordings finds. It holds no more
// than a bounded sample of them.
type survey struct {
	layout      *channels.Layout
	takes       int
	trains      int // takes that train
	trainFrames int // in them
	frames      int
	counts      map[countKey]int // takes
	scales      channels.Scales  // of the training takes
	sample      *classify.Sample // to score on
	rest        *classify.Sample // of takes that are no gesture
}

// countKey is what takes are counted by.
type countKey struct {
	label, subject string
	split          channels.Split
}

// look reads all recordings once, which also shows whether they are sound
// before anything is written. At most so many takes of each label and split are
// held to score on; noGesture lists the labels of takes that are no gesture.
func look(ctx context.Context, takes channels.Stream, most int, seed uint64, noGesture []string) (*survey, error) {
	s := &survey{counts: make(map[countKey]int), sample: classify.NewSample(most, seed), rest: classify.NewSample(most, seed)}
	for t, err := range takes {
		if err == nil {
			err = ctx.Err()
		}
		if err != nil {
			return nil, err
		}
		s.layout = t.Layout
		s.takes++
		s.counts[countKey{t.Label, t.Subject, t.Split}]++
		s.frames += t.Frames()
		if t.Split != channels.Test {
			s.trains++
			s.trainFrames += t.Frames()
			s.scales.Add(t)
		}
		if slices.Contains(noGesture, t.Label) {
			s.rest.Add(t)
		} else {
			s.sample.Add(t)
		}
	}
	if s.takes == 0 {
		return nil, &UsageError{Problem: "the recordings hold no takes"}
	}
	return s, nil
}

// survey reads the plan's recordings once and holds at most so many takes of
// each label and split.
func (p *Plan) survey(ctx context.Context, in io.Reader, most int, progress Progress, notice func(string)) (*survey, error) {
	r, err := p.open(in, strict)
	if err != nil {
		return nil, err
	}
	defer r.Close()
	held, err := p.holdOut(r.Takes())
	if err != nil {
		return nil, p.asUsage(err)
	}
	progress.Begin("reading", -1, "takes")
	defer progress.End()
	s, err := look(ctx, counted(held.apply(r.Takes()), progress), most, p.Seed, p.NoGesture)
	if err != nil {
		return nil, p.asUsage(err)
	}
	for _, n := range r.Notices() {
		notice(n)
	}
	return s, nil
}

// training returns a bounded number of the takes that train, of each label.
func (s *survey) training() []*channels.Take {
	return slices.DeleteFunc(append(s.sample.Takes(), s.rest.Takes()...), func(t *channels.Take) bool {
		return t.Split == channels.Test
	})
}
