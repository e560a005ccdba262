package augment

import (
	"fmt"

	"strandwise/augment/path"
	"strandwise/channels"
)

// Maker makes synthetic takes. It is safe for use by several goroutines.
type Maker struct {
	variation Variation
	scales    *channels.Scales
	seed      uint64
}

// NewMaker returns a maker of takes that vary as v says. The scales must have
// been measured on training takes alone and are not changed any more.
func NewMaker(v Variation, scales *channels.Scales, seed uint64) (*Maker, error) {
	if err := v.Validate(); err != nil {
		return nil, err
	}
	return &Maker{variation: v, scales: scales, seed: seed}, nil
}

// Source is a recorded take made ready for drawing. It is safe for use by
// several goroutines.
type Source struct {
	maker *Maker
	take  *channels.Take
	draw  func(draw int, p map[string]float64) (time, data []float64)
}

// Source prepares a valid take, which must not change as long as the source
// is in use. The work that is the same for all draws is done here, once. A
// layout without channel groups is a mistake of the caller.
func (m *Maker) Source(t *channels.Take) *Source {
	if len(t.Layout.Groups) == 0 {
		panic("augment: the layout of a source take has no channel groups")
	}
	s := &Source{maker: m, take: t}
	if m.variation.Method == Path {
		s.draw = newPathSource(m, t).draw
	} else {
		s.draw = newTimedSource(m, t).draw
	}
	return s
}

// Draw makes the synthetic take of the given number, from 0. The same number
// always gives the same take. The take belongs to the caller.
func (s *Source) Draw(draw int) *channels.Take {
	v, t := s.maker.variation, s.take
	p := map[string]float64{"spread": v.Spread, "coupling": v.Coupling}
	time, data := s.draw(draw, p)
	return &channels.Take{
		ID: fmt.Sprintf("%s~%d", t.ID, draw), Label: t.Label, Subject: t.Subject, Session: t.Session, Split: t.Split,
		Layout: t.Layout, Skeleton: t.Skeleton, Time: time, Data: data,
		Made: &channels.Making{Source: t.ID, Draw: draw, Rank: draw, Method: string(v.Method), Parameters: p},
	}
}

// Make draws the first n synthetic takes of a source take.
func (m *Maker) Make(t *channels.Take, n int) ([]*channels.Take, error) {
	s := m.Source(t)
	out := make([]*channels.Take, n)
	for k := range out {
		out[k] = s.Draw(k)
	}
	return out, nil
}

// limbIntervals draws n−1 intervals for every limb of the take, coupled as the
// variation says. The shared draws are keyed by the empty group name, each
// limb's own by its name.
func (m *Maker) limbIntervals(t *channels.Take, draw, n int) map[string][]float64 {
	shared := path.Gaussians(make([]float64, n-1), Generator(m.seed, t.ID, draw, ""))
	out := make(map[string][]float64)
	for _, limb := range t.Layout.Limbs() {
		own := path.Gaussians(make([]float64, n-1), Generator(m.seed, t.ID, draw, limb))
		out[limb] = path.CoupledIntervals(own, m.variation.Spread, m.variation.Coupling, shared, own)
	}
	return out
}
