package augment

import (
	"context"
	"iter"

	"strandwise/channels"
)

// Grow yields every recorded take followed, unless it is of the test split, by
// perTake synthetic takes made from it, in the order of the recordings and of
// their draws. Several workers share the draws of one take, so that no more
// than about 2·workers takes are held at a time, however many draws there are.
func Grow(ctx context.Context, recorded channels.Stream, m *Maker, perTake, workers int) channels.Stream {
	put := func(d drawing) *channels.Take {
		if d.source == nil {
			return d.take
		}
		return d.source.Draw(d.draw)
	}
	return channels.Stream(ordered(ctx, drawings(recorded, m, perTake), max(workers, 1), put))
}

// drawing is one take to put out: a recorded one as it is, or a draw.
type drawing struct {
	take   *channels.Take
	source *Source // nil for a recorded take
	draw   int
}

func drawings(recorded channels.Stream, m *Maker, perTake int) iter.Seq2[drawing, error] {
	return func(yield func(drawing, error) bool) {
		for t, err := range recorded {
			if err != nil {
				yield(drawing{}, err)
				return
			}
			if t.Split == channels.Test || perTake == 0 {
				if !yield(drawing{take: t}, nil) {
					return
				}
				continue
			}
			source := m.Source(t)
			if !yield(drawing{take: t.Clone()}, nil) { // the receiver may change its take, the source must not
				return
			}
			for k := range perTake {
				if !yield(drawing{source: source, draw: k}, nil) {
					return
				}
			}
		}
	}
}
