package augment

import (
	"context"
	"slices"

	"strandwise/channels"
)

// GrowOptions say how many takes are made of each recorded one.
type GrowOptions struct {
	PerTake int // takes made
	Keep    int // of them, the best choice, takes kept; 0 keeps all
	Workers int // sources worked on at a time; does not change what comes out

	// Report, unless nil, is told what became of the draws of each source, in the
	// order of the recordings and before its first take is yielded.
	Report func(source string, t Tally)
}

// Grow yields every recorded take followed, unless it is of the test split, by
// the synthetic takes made from it, in the order of the recordings and of their
// rank. The takes of about 2·workers sources are held at a time.
func Grow(ctx context.Context, recorded channels.Stream, m *Maker, o GrowOptions) channels.Stream {
	return func(yield func(*channels.Take, error) bool) {
		grow := func(t *channels.Take) batch { return m.batch(t, o) }
		for b, err := range ordered(ctx, recorded, max(o.Workers, 1), grow) {
			if err == nil {
				err = b.err
			}
			if err != nil {
				yield(nil, err)
				return
			}
			if o.Report != nil && b.tally.Wanted > 0 {
				o.Report(b.takes[0].ID, b.tally)
			}
			for _, t := range b.takes {
				if !yield(t, nil) {
					return
				}
			}
		}
	}
}

// batch is a recorded take with what was made from it.
type batch struct {
	takes []*channels.Take
	tally Tally
	err   error
}

func (m *Maker) batch(t *channels.Take, o GrowOptions) batch {
	if t.Split == channels.Test || o.PerTake == 0 || m.spares(t.Label) {
		return batch{takes: []*channels.Take{t}}
	}
	s, err := m.Source(t)
	if err != nil {
		return batch{err: err}
	}
	made, tally := s.Takes(o.PerTake)
	if o.Keep > 0 && len(made) > o.Keep {
		made = made[:o.Keep]
	}
	return batch{takes: append([]*channels.Take{t}, made...), tally: tally}
}

// spares tells whether takes of a label are left as recorded.
func (m *Maker) spares(label string) bool { return slices.Contains(m.variation.Spare, label) }
