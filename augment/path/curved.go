package path

import (
	"math"

	"strandwise/channels/body"
)

// Curve is a path in any space, measured by its arc length: [Arc] where the
// legs between points are not straight lines but the ways of that space, such
// as turns.
type Curve struct {
	space      body.Space
	points     []float64 // points × width
	cumulative []float64
}

// NewCurve measures a path of at least two points × width coordinates of a
// space, point-major. It keeps a reference to points and does not change them.
func NewCurve(space body.Space, points []float64) *Curve {
	w := space.Width()
	if len(points)%w != 0 || len(points) < 2*w {
		panic("path: points are not at least two rows of width")
	}
	c := &Curve{space, points, make([]float64, len(points)/w)}
	for i := 1; i < len(c.cumulative); i++ {
		c.cumulative[i] = c.cumulative[i-1] + space.Distance(c.point(i-1), c.point(i))
	}
	return c
}

// Length returns the length of the path, in the unit of its space's distances.
func (c *Curve) Length() float64 { return c.cumulative[len(c.cumulative)-1] }

// Cumulative returns the arc length from the first point to each point, a view
// that must not be changed.
func (c *Curve) Cumulative() []float64 { return c.cumulative }

func (c *Curve) point(i int) []float64 {
	w := c.space.Width()
	return c.points[i*w : (i+1)*w]
}

// Resample makes one synthetic path of n = len(intervals)+1 points by the
// published method in the curve's space, and returns it in dst, n × width
// coordinates (nil allocates): the points at the cumulated fractions of the arc
// length, between which the path moves by the displacements d[k]; each scaled
// to
//
//	|d[k]|^(1−strength) · ℓ^strength,   ℓ = Length/(n−1)
//
// and chained from the source's first point. Strength 1 is [Arc.Resample];
// strength 0 gives the points themselves. Where two drawn points coincide, the
// direction of travel at the first of them stands in for their displacement,
// which only strength 1 gives a length. A path of no length gives n copies of
// its point.
func (c *Curve) Resample(dst, intervals []float64, strength float64) []float64 {
	w, n := c.space.Width(), len(intervals)+1
	if n < 2 {
		panic("path: resampling needs at least one interval")
	}
	if dst == nil {
		dst = make([]float64, n*w)
	}
	if len(dst) != n*w {
		panic("path: destination does not hold n points")
	}
	at := c.pick(dst, intervals)
	if strength != 0 {
		c.chain(dst, at, c.Length()/float64(n-1), strength)
	}
	return dst
}

// pick writes into dst the points at the cumulated fractions of the arc
// length, and returns the leg each was found on.
func (c *Curve) pick(dst, intervals []float64) []int {
	w, at, sum := c.space.Width(), make([]int, len(intervals)+1), 0.0
	for _, x := range intervals {
		sum += x
	}
	arc := Arc{cumulative: c.cumulative}
	scale, s, leg, along := c.Length()/sum, 0.0, 0, 0.0
	for k := range at {
		position := c.Length()
		if k < len(intervals) {
			position = s * scale
			s += intervals[k]
		}
		leg, along = arc.segment(position, leg)
		c.space.Interpolate(dst[k*w:(k+1)*w], c.point(leg), c.point(leg+1), along)
		at[k] = leg
	}
	return at
}

// chain replaces the points in dst by the chain of the displacements between
// them, each scaled towards a length by a strength.
func (c *Curve) chain(dst []float64, at []int, length, strength float64) {
	w := c.space.Width()
	from, to := append([]float64(nil), dst[:w]...), make([]float64, w) // as picked
	step := make([]float64, c.space.Freedom())
	for k := 1; k < len(at); k++ {
		here, before := dst[k*w:(k+1)*w], dst[(k-1)*w:k*w]
		copy(to, here)
		c.space.Displacement(step, from, to)
		way := size(step)
		wanted := math.Pow(way, 1-strength) * math.Pow(length, strength)
		if way == 0 && wanted > 0 {
			c.tangent(step, at[k-1])
			way = size(step)
		}
		scale := 0.0
		if way > 0 {
			scale = wanted / way
		}
		for i := range step {
			step[i] *= scale
		}
		c.space.Chain(here, before, step)
		from, to = to, from
	}
}

// tangent writes into dst the displacement of the first leg at or after i that
// moves, else of the last one before it.
func (c *Curve) tangent(dst []float64, i int) {
	last := len(c.cumulative) - 1
	moves := func(j int) bool { return c.cumulative[j+1] > c.cumulative[j] }
	j := i
	for ; j < last && !moves(j); j++ {
	}
	if j == last {
		for j = i; j > 0 && !moves(j); j-- {
		}
	}
	c.space.Displacement(dst, c.point(j), c.point(j+1))
}

func size(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x * x
	}
	return math.Sqrt(sum)
}
