package augment

import (
	"fmt"

	"strandwise/augment/variation"
	"strandwise/channels"
)

// Maker makes synthetic takes. It is safe for use by several goroutines.
type Maker struct {
	variation Variation
	training  Training
	seed      uint64
}

// NewMaker returns a maker of takes that vary as v says.
func NewMaker(v Variation, training Training, seed uint64) (*Maker, error) {
	if err := v.Validate(); err != nil {
		return nil, err
	}
	return &Maker{variation: v, training: training, seed: seed}, nil
}

// kind returns the kind of motion that takes of a label are.
func (m *Maker) kind() Kind {
	switch {
	case m.variation.Kind != AsMeasured:
		return m.variation.Kind
	case m.training.Measured != nil && m.training.Measured.Motion("").Kind == variation.Ongoing:
		return Ongoing
	}
	return Gesture
}

// size returns a size of the variation at the maker's reach, for a label and a
// limb, channel group or channel; empty is for all of them.
func (m *Maker) size(part variation.Part, label, of string) float64 {
	return m.variation.Reach * m.plainSize(part, label, of)
}

// plainSize is size at a reach of 1.
func (m *Maker) plainSize(part variation.Part, label, of string) float64 {
	if size, ok := m.variation.Sizes[part]; ok {
		return size
	}
	if m.training.Measured == nil {
		return part.Default()
	}
	f, _ := m.training.Measured.Find(part, label, of)
	return f.Used
}

// Make makes at most n takes of a source take, the best choice first; fewer
// where too many draws fail a gate.
func (m *Maker) Make(t *channels.Take, n int) ([]*channels.Take, error) {
	if m.spares(t.Label) {
		return nil, nil
	}
	s, err := m.Source(t)
	if err != nil {
		return nil, err
	}
	takes, _ := s.Takes(n)
	return takes, nil
}

// drawer makes the values of synthetic takes of one source.
type drawer interface {
	// draw returns the clock and the values of a draw, which the caller owns, and
	// notes in p what was drawn.
	draw(draw int, p map[string]float64) (time, data []float64)
}

// Source is a recorded take made ready for drawing. It is for one goroutine at
// a time.
type Source struct {
	maker   *Maker
	take    *channels.Take
	drawers []drawer
	methods []Method // of each drawer
	pick    *pick
	refused error // why a method makes nothing of the take
}

// Source prepares a valid take, which must not change as long as the source
// is in use. The work that is the same for all draws is done here, once. A
// layout without channel groups is a mistake of the caller. A published method
// that can make nothing of the take leaves its draws to the others; where there
// are none, no draws are made.
func (m *Maker) Source(t *channels.Take) (*Source, error) {
	if len(t.Layout.Groups) == 0 {
		panic("augment: the layout of a source take has no channel groups")
	}
	s := &Source{maker: m, take: t}
	var weights []float64
	for _, share := range m.shares(t) {
		d, err := m.drawer(share.Method, t)
		if unfit(err) {
			s.refused = err
			continue
		}
		if err != nil {
			return nil, fmt.Errorf("take %s: %s: %w", t.ID, share.Method, err)
		}
		s.drawers, s.methods = append(s.drawers, d), append(s.methods, share.Method)
		weights = append(weights, share.Weight)
	}
	s.pick = newPick(weights)
	return s, nil
}

// shares returns the methods a take is made by: those of the variation, and
// Path for some of the recipe's draws where all channels are positions.
func (m *Maker) shares(t *channels.Take) []Share {
	var out []Share
	for _, s := range m.variation.Blend {
		share := m.variation.PathShare
		if s.Method != Recipe || share == 0 || m.kind() != Gesture || !placesOnly(t.Layout) {
			out = append(out, s)
			continue
		}
		if share < 1 {
			out = append(out, Share{Recipe, s.Weight * (1 - share)})
		}
		out = append(out, Share{placesByPath, s.Weight * share})
	}
	return out
}

// placesOnly tells whether all channels are positions or velocities.
func placesOnly(l *channels.Layout) bool {
	for _, c := range l.Channels {
		if c.Quantity != channels.Position && c.Quantity != channels.Velocity {
			return false
		}
	}
	return true
}

// placesByPath is Path as the recipe uses it.
const placesByPath Method = "recipe, path"

func (m *Maker) drawer(method Method, t *channels.Take) (drawer, error) {
	switch method {
	case Recipe:
		return newRecipeSource(m, t)
	case Path:
		return newPathSource(m, t, m.variation.Knots, m.variation.Spread)
	case placesByPath:
		return newPathSource(m, t, 16, 0.25)
	}
	return newPublishedSource(m, t, method)
}

// Draw makes the synthetic take of the given number, from 0, whether it passes
// the gates or not. The same number always gives the same take. The take
// belongs to the caller.
func (s *Source) Draw(draw int) *channels.Take {
	t, p := s.take, make(map[string]float64)
	by := s.pick.of(draw)
	time, data := s.drawers[by].draw(draw, p)
	return &channels.Take{
		ID: fmt.Sprintf("%s~%d", t.ID, draw), Label: t.Label, Subject: t.Subject, Session: t.Session, Split: t.Split,
		Layout: t.Layout, Skeleton: t.Skeleton, Time: time, Data: data,
		Made: &channels.Making{Source: t.ID, Draw: draw, Rank: draw, Method: string(s.methods[by]), Parameters: p},
	}
}
