package template

import (
	"math"
	"slices"
)

// steps is the number of steps of equal arc length a path is cut into.
const steps = 16

// still is the length, as a share of the arc between two cuts, below which a
// step counts as having no length: what rounding leaves of a path that comes
// back to the same point.
const still = 1e-9

// directions appends, for every group and every step of its path, the unit
// vector along the step and one more component, which is 1, with the others 0,
// where the step has no length. Half the squared distance of two such vectors
// is 1 minus the cosine between them. values are frames × width.
func (p *preparer) directions(dst []float64, groups [][]int, values []float64, width int) []float64 {
	p.from, p.to = slices.Grow(p.from[:0], width), slices.Grow(p.to[:0], width)
	for _, g := range groups {
		walk := walk{values: values, width: width, group: g}
		total := walk.measure()
		from, to := p.from[:len(g)], p.to[:len(g)]
		walk.at(from, 0)
		for k := 1; k <= steps; k++ {
			walk.at(to, total*float64(k)/steps)
			dst = appendDirection(dst, from, to, still*total/steps)
			from, to = to, from
		}
	}
	return dst
}

// appendDirection appends the unit vector from a to b and 0, or zeros and 1
// when they are no further apart than least.
func appendDirection(dst, a, b []float64, least float64) []float64 {
	length := distance(a, b)
	for c, v := range a {
		if length > least {
			dst = append(dst, (b[c]-v)/length)
		} else {
			dst = append(dst, 0)
		}
	}
	if length > least {
		return append(dst, 0)
	}
	return append(dst, 1)
}

// walk reads points of one group's path by arc length, going forward.
type walk struct {
	values []float64 // frames × width
	width  int
	group  []int
	frame  int     // the segment the walk is on starts here …
	begin  float64 // … at this arc length …
	length float64 // … and is this long
}

// measure puts the walk at the start and returns the arc length of the path.
func (w *walk) measure() float64 {
	total := 0.0
	for i := range len(w.values)/w.width - 1 {
		total += w.segment(i)
	}
	w.frame, w.begin, w.length = 0, 0, w.segment(0)
	return total
}

// segment returns the length of the path from frame i to the next.
func (w *walk) segment(i int) float64 {
	a, b := w.values[i*w.width:(i+1)*w.width], w.values[(i+1)*w.width:(i+2)*w.width]
	sum := 0.0
	for _, c := range w.group {
		sum += (b[c] - a[c]) * (b[c] - a[c])
	}
	return math.Sqrt(sum)
}

// at writes the point at arc length s, which must not be less than in the call
// before, to dst.
func (w *walk) at(dst []float64, s float64) {
	last := len(w.values)/w.width - 2
	for w.frame < last && s > w.begin+w.length {
		w.begin += w.length
		w.frame++
		w.length = w.segment(w.frame)
	}
	u := 0.0
	if w.length > 0 {
		u = min(1, (s-w.begin)/w.length)
	}
	a := w.values[w.frame*w.width:]
	for k, c := range w.group {
		dst[k] = (1-u)*a[c] + u*a[w.width+c]
	}
}

func distance(a, b []float64) float64 {
	sum := 0.0
	for c, v := range a {
		sum += (b[c] - v) * (b[c] - v)
	}
	return math.Sqrt(sum)
}
