package template

import "math"

// sieve holds lower bounds against the distance of the nearest template so far
// and throws out pairs of takes that cannot be nearer. It holds scratch and
// serves one goroutine.
type sieve struct {
	search *Search
	number int     // of the query at hand
	query  *series // the query itself
	ring   ring    // around it, of the radius asked for last
	counts Counts

	known []float64 // per part: how far apart the pair at hand is at least
	along []remainder
	table table
}

// remainder bounds what is to come along a path, from the segments of one take
// inside the envelope of the other.
type remainder struct{ query, template []uint64 }

func newSieve(s *Search) sieve {
	n := len(s.parts)
	return sieve{search: s, known: make([]float64, n), along: make([]remainder, n)}
}

// turn makes the sieve ready for a query.
func (s *sieve) turn(number int) {
	s.number, s.query, s.ring.radius = number, &s.search.queries[number], -1
}

// atLeast returns how far apart a part is at least when its sketches cost k over
// some cells.
func (s *sieve) atLeast(p int, k uint64, cells int) float64 {
	d := s.search.rulers[p].under(k, cells)
	if !s.search.metric.Distance.roots() {
		d *= d
	}
	return s.search.parts[p].weight * d
}

// atMost returns the cost over some cells that the sketches of a part do not
// pass when the part is no further apart than d.
func (s *sieve) atMost(p int, d float64, cells int) uint64 {
	d /= s.search.parts[p].weight
	if !s.search.metric.Distance.roots() {
		d = math.Sqrt(d)
	}
	return s.search.rulers[p].over(d, cells)
}

// ends bounds the distance by the first frames and the last, which every path
// holds against each other: after Kim, Park, Chu, "An index-based approach for
// similarity search supporting time warping in large sequence databases", ICDE
// (2001) 607.
func (s *sieve) ends(template *series) float64 {
	sum := 0.0
	for p := range template.sketches {
		a, b := &s.query.sketches[p], &template.sketches[p]
		sum += s.atLeast(p, a.cost(0, b, 0)+a.cost(a.frames-1, b, b.frames-1), 2)
	}
	return sum
}

// rejects says whether a template is certainly further from the query than
// bound.
func (s *sieve) rejects(template *series, bound float64) bool {
	half := s.search.metric.HalfWidth(s.query.frames, template.frames)
	r, all := radius(half), max(s.query.frames, template.frames)/segmentFrames
	clear(s.known)
	if s.aroundTemplate(template, r, r >= all) > bound {
		s.counts.TemplateEnvelope++
		return true
	}
	if s.aroundQuery(template, r, r >= all) > bound {
		s.counts.QueryEnvelope++
		return true
	}
	if s.warped(template, half, bound) > bound {
		s.counts.Sketch++
		return true
	}
	return false
}

// aroundTemplate bounds the distance by the query's segments inside the
// template's envelope, which is its range when the window is full.
func (s *sieve) aroundTemplate(template *series, radius int, full bool) float64 {
	sum := 0.0
	var ring ring
	if !full {
		ring = template.ringOf(radius)
	}
	for p := range template.sketches {
		a, b, rest := &s.query.sketches[p].segments, &template.sketches[p].segments, &s.along[p].query
		*rest = sized(*rest, a.all+1)
		var k uint64
		if full {
			k = a.yi(*rest, b)
		} else {
			k = a.keogh(*rest, &ring.around[p])
		}
		s.known[p] = s.atLeast(p, k, s.query.frames)
		sum += s.known[p]
	}
	return sum
}

// aroundQuery bounds it by the template's segments inside the query's.
func (s *sieve) aroundQuery(template *series, radius int, full bool) float64 {
	sum := 0.0
	if !full && s.ring.radius != radius {
		s.ring = s.search.ringOf(s.number, radius)
	}
	for p := range template.sketches {
		a, b, rest := &s.query.sketches[p].segments, &template.sketches[p].segments, &s.along[p].template
		*rest = sized(*rest, b.all+1)
		var k uint64
		if full {
			k = b.yi(*rest, a)
		} else {
			k = b.keogh(*rest, &s.ring.around[p])
		}
		s.known[p] = max(s.known[p], s.atLeast(p, k, template.frames))
		sum += s.known[p]
	}
	return sum
}

// warped bounds it by dynamic time warping of the sketches, part by part, and
// stops at the part with which the sum passes the bound.
func (s *sieve) warped(template *series, half int, bound float64) float64 {
	sum, cells := 0.0, s.query.frames+template.frames-1
	for _, d := range s.known {
		sum += d
	}
	for p := range template.sketches {
		a, b, rest := &s.query.sketches[p], &template.sketches[p], s.along[p].query
		if other := s.along[p].template; other[0] > rest[0] {
			a, b, rest = b, a, other
		}
		others := sum - s.known[p]
		k := s.table.warp(a, b, half, s.atMost(p, bound-others+rounding*bound, cells), rest)
		if k == endless {
			return math.Inf(1)
		}
		s.known[p] = max(s.known[p], s.atLeast(p, k, cells))
		sum = others + s.known[p]
		if sum > bound {
			break
		}
	}
	return sum
}

// take returns what was counted since the last time.
func (s *sieve) take() Counts {
	c := s.counts
	c.SketchCells = s.table.cells
	s.counts, s.table.cells = Counts{}, 0
	return c
}
