package path

import (
	"math"
	"sort"
)

// Arc is a path measured by its arc length.
type Arc struct {
	points     []float64 // points × width
	width      int
	cumulative []float64 // length from the first point to each point
}

// NewArc measures a path of at least two points × width coordinates,
// point-major. It keeps a reference to points and does not change them.
func NewArc(points []float64, width int) *Arc {
	if width < 1 || len(points)%width != 0 || len(points) < 2*width {
		panic("path: points are not at least two rows of width")
	}
	a := &Arc{points: points, width: width, cumulative: make([]float64, len(points)/width)}
	for i := 1; i < len(a.cumulative); i++ {
		a.cumulative[i] = a.cumulative[i-1] + distance(a.point(i-1), a.point(i))
	}
	return a
}

// Length returns the length of the path, in the unit of its coordinates.
func (a *Arc) Length() float64 { return a.cumulative[len(a.cumulative)-1] }

// Cumulative returns the arc length from the first point to each point, a view
// that must not be changed.
func (a *Arc) Cumulative() []float64 { return a.cumulative }

func (a *Arc) point(i int) []float64 { return a.points[i*a.width : (i+1)*a.width] }

// segment returns the segment i, between points i and i+1, that holds the
// position s, and how far along it s lies, from 0 to 1. The search starts at
// segment from, which must not lie past s.
func (a *Arc) segment(s float64, from int) (i int, along float64) {
	last := len(a.cumulative) - 2
	for i = from; i < last && a.cumulative[i+1] < s; i++ {
	}
	if step := a.cumulative[i+1] - a.cumulative[i]; step > 0 {
		along = min(max((s-a.cumulative[i])/step, 0), 1)
	}
	return i, along
}

// tangent writes into dst the direction of travel at segment i, as a vector
// of the segment's length: the first segment at or after i that moves, else
// the last one before it. It is zero when the whole path stands still.
func (a *Arc) tangent(dst []float64, i int) {
	n := len(a.cumulative) - 1
	j := i + sort.Search(n-i, func(k int) bool { return a.cumulative[i+k+1] > a.cumulative[i] })
	if j == n {
		for j = i; j > 0 && a.cumulative[j+1] == a.cumulative[j]; j-- {
		}
	}
	p, q := a.point(j), a.point(j+1)
	for c := range dst {
		dst[c] = q[c] - p[c]
	}
}

func distance(p, q []float64) float64 {
	sum := 0.0
	for c, v := range p {
		d := q[c] - v
		sum += d * d
	}
	return math.Sqrt(sum)
}
