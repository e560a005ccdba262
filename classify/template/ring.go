package template

// ring is the envelopes of a radius around the parts of a take.
type ring struct {
	radius int
	around []envelope
}

// ringOf returns the envelopes of a radius around the parts of t. It keeps them.
func (t *series) ringOf(radius int) ring {
	for _, r := range t.rings {
		if r.radius == radius {
			return r
		}
	}
	if n := len(t.rings); n < cap(t.rings) {
		t.rings = t.rings[:n+1] // with the memory of one from before
	} else {
		t.rings = append(t.rings, ring{})
	}
	r := &t.rings[len(t.rings)-1]
	r.radius = radius
	for len(r.around) < len(t.sketches) {
		r.around = append(r.around, envelope{})
	}
	for p := range t.sketches {
		r.around[p].wrap(&t.sketches[p].segments, radius)
	}
	return *r
}

// ringOf returns the envelopes of a radius around a query.
func (s *Search) ringOf(query, radius int) ring {
	f := &s.found[query]
	f.Lock()
	defer f.Unlock()
	return s.queries[query].ringOf(radius)
}
