package gate

import (
	"cmp"
	"math"
	"slices"

	"strandwise/channels"
)

// Source is a recorded take made ready for what is made from it. It may be
// shared by goroutines.
type Source struct {
	gates   *Gates
	take    *channels.Take
	sketch  []float64
	limits  limits
	bones   []Bone    // with their lengths
	bent    []float64 // deviation of each in the source
	near    []neighbour
	stray   float64 // ratio let through
	spacing float64 // distance to the nearest other take of the label, or what stands for it; 0 where nothing does
}

// neighbour is a reference at its distance from the source.
type neighbour struct {
	*reference
	distance float64
}

// Source makes a recorded take ready. It must be valid, have the channels of
// those the gates were drawn from, and not change as long as the source is in
// use.
func (g *Gates) Source(t *channels.Take) *Source {
	if t.Width() != len(g.extents) {
		panic("gate: the source has other channels than the recorded takes")
	}
	s := &Source{gates: g, take: t, sketch: sketch(nil, t, g.factor)}
	b := g.bench()
	s.limits.raise(limits{0, jerks(nil, t), b.spectrum.upper(t)})
	g.scratch.Put(b)
	s.limits.raise(limits{0, g.pooled.jerk, g.pooled.upper})
	s.limits.raise(g.labels[t.Label])
	for _, bone := range g.options.BoneList {
		bone = bone.settled(t)
		s.bones, s.bent = append(s.bones, bone), append(s.bent, bone.deviation(t))
	}
	s.rank()
	return s
}

// rank orders the references by their distance and learns how far the source
// itself strays.
func (s *Source) rank() {
	own, other := math.Inf(1), math.Inf(1)
	for i := range s.gates.references {
		r := &s.gates.references[i]
		if r.id == s.take.ID {
			continue
		}
		n := neighbour{r, math.Sqrt(within(s.sketch, r.values, math.Inf(1)))}
		if r.label == s.take.Label {
			own = min(own, n.distance)
		} else {
			other = min(other, n.distance)
		}
		s.near = append(s.near, n)
	}
	slices.SortFunc(s.near, func(a, b neighbour) int {
		return cmp.Or(cmp.Compare(a.distance, b.distance), cmp.Compare(a.id, b.id))
	})
	s.stray = s.gates.options.Stray * s.gates.stray
	if !math.IsInf(own, 1) && !math.IsInf(other, 1) && other > 0 {
		s.stray = max(s.stray, s.gates.options.Stray*own/other)
	}
	switch {
	case own > 0 && !math.IsInf(own, 1):
		s.spacing = own
	case s.gates.spacing > 0:
		s.spacing = s.gates.spacing
	case !math.IsInf(other, 1):
		s.spacing = other
	}
}

// Check holds a take made from the source against every gate. The candidate
// must have the source's channels and is not changed.
//
// A take strays when it is nearer to a recorded take of another label than to
// any of its own, its source included, by more than recorded takes are: the
// threshold is multiplied by the ratio that one in twenty recorded takes
// exceed when held against the others, or by the source's own where that is
// larger, and never by less than 1.
func (s *Source) Check(candidate *channels.Take) Result {
	if candidate.Width() != len(s.gates.extents) {
		panic("gate: the candidate has other channels than its source")
	}
	var r Result
	for g := range r.values {
		r.values[g] = math.NaN()
	}
	if r.values[Finite] = broken(candidate); r.values[Finite] == 0 {
		s.measure(candidate, &r)
	}
	for g, v := range r.values {
		gate := Gate(g)
		r.failed[g] = s.gates.options.applies(gate) && !s.gates.options.passes(gate, v, s.allowed(gate))
	}
	return r
}

// allowed returns the largest figure a gate lets through. Few recorded takes
// show little of what takes of a label can be, so where there are few the gates
// stand wider, as far as held-out takes of six open sets were found to need.
func (s *Source) allowed(g Gate) float64 {
	o, n := &s.gates.options, float64(max(1, s.limits.takes))
	switch g {
	case Range:
		return o.Range * (1 + rangeWidening/float64(s.gates.pooled.takes))
	case Jerk:
		return o.Jerk * (1 + 1/n)
	case Bandwidth:
		return o.Bandwidth * (1 + 1/n)
	case Bones:
		return o.Bones
	case Stray:
		return s.stray
	}
	return 0
}

// rangeWidening is the number of training takes at which the margin of the
// range is twice what it is with very many.
const rangeWidening = 8

// broken counts what makes a take impossible to measure.
func broken(t *channels.Take) float64 {
	n := 0.0
	for _, v := range t.Data {
		if v-v != 0 {
			n++
		}
	}
	for i, v := range t.Time {
		if v-v != 0 || i > 0 && !(v > t.Time[i-1]) {
			n++
		}
	}
	if len(t.Time) < 2 {
		n++
	}
	return n
}

// measure fills in the figures of a take whose numbers are all finite.
func (s *Source) measure(t *channels.Take, r *Result) {
	b := s.gates.bench()
	defer s.gates.scratch.Put(b)
	r.values[Range] = s.gates.outside(t)
	b.jerk = jerks(b.jerk[:0], t)
	r.values[Jerk] = multiple(b.jerk, s.limits.jerk)
	if s.limits.upper > 0 {
		r.values[Bandwidth] = b.spectrum.upper(t) / s.limits.upper
	}
	for i, bone := range s.bones {
		beyond := max(0, bone.deviation(t)-s.bent[i])
		r.values[Bones] = max(beyond, zero(r.values[Bones]))
	}
	b.sketch = sketch(b.sketch[:0], t, s.gates.factor)
	r.values[Stray], r.values[Copy] = s.nearness(b.sketch)
}

func zero(v float64) float64 {
	if math.IsNaN(v) {
		return 0
	}
	return v
}

// outside returns the largest distance of a value from the recorded range of
// its channel, as a share of its group's. A group that never moved has none.
func (g *Gates) outside(t *channels.Take) float64 {
	worst, w := 0.0, t.Width()
	for c := range g.extents {
		e, low, high := &g.extents[c], t.Data[c], t.Data[c]
		for i := c; i < len(t.Data); i += w {
			low, high = min(low, t.Data[i]), max(high, t.Data[i])
		}
		if beyond := max(e.low-low, high-e.high); beyond > 0 && g.reach[c] > 0 {
			worst = max(worst, beyond/g.reach[c])
		}
	}
	return worst
}

// multiple returns the largest figure as a multiple of its limit. Where the
// limit is 0 there is nothing to compare with.
func multiple(figures, limit []float64) float64 {
	worst := math.NaN()
	for g, v := range figures {
		if limit[g] > 0 {
			worst = max(v/limit[g], zero(worst))
		}
	}
	return worst
}

// nearness returns the ratio of the distances to the nearest recorded take of
// the label and of another, and the distance to the source against its
// spacing. References come in order of their distance from the source, so that
// by the triangle inequality the first that is further from it than the
// nearest found and the candidate together ends the search.
func (s *Source) nearness(values []float64) (stray, copied float64) {
	from := math.Sqrt(within(values, s.sketch, math.Inf(1)))
	own, other := from*from, math.Inf(1)
	for _, n := range s.near {
		least := max(0, n.distance-from)
		if least*least > max(own, other) {
			break
		}
		if n.label == s.take.Label {
			own = min(own, within(values, n.values, own))
		} else {
			other = min(other, within(values, n.values, other))
		}
	}
	stray, copied = math.NaN(), math.NaN()
	if !math.IsInf(other, 1) {
		stray = math.Sqrt(own / other)
		if own == other { // both 0 as well
			stray = 1
		}
	}
	if s.spacing > 0 {
		copied = from / s.spacing
	}
	return stray, copied
}
