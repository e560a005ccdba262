package body

import (
	"math"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/spatial/r3"
)

// Space is where one trajectory runs: positions, rotations, directions, values
// with limits, or several of these at once. A point of it is Width values; a
// displacement, the way from one point to another, is Freedom values in which
// lengths are Euclidean. For all points p and q
//
//	Chain(p, Displacement(p, q)) = q        as points
//	Distance(p, q) = |Displacement(p, q)| = Distance(q, p)
//	Interpolate(p, q, 0) = p, Interpolate(p, q, 1) = q
//	Distance(p, Interpolate(p, q, t)) = t·Distance(p, q),  0 ≤ t ≤ 1
//
// A displacement may be scaled, and chained from another point than the one it
// was taken at. The destination of Interpolate and Chain may be p or q. Spaces
// hold no state and may be shared. Slices that are too short panic.
type Space interface {
	// Width returns the number of values of a point.
	Width() int
	// Freedom returns the number of values of a displacement.
	Freedom() int
	// Interpolate writes the point that lies the share t of the way from p to q.
	Interpolate(dst, p, q []float64, t float64)
	// Displacement writes the way from p to q.
	Displacement(dst, p, q []float64)
	// Chain writes the point that the displacement d leads to from p.
	Chain(dst, p, d []float64)
	// Distance returns how far p and q are apart.
	Distance(p, q []float64) float64
}

var _ = []Space{euclidean(0), rotation{}, sphere{}, bounded{}, scaled{}, product{}}

// Euclidean returns the space of n coordinates, such as a place in metres.
func Euclidean(n int) Space {
	if n < 1 {
		panic("body: a space needs a coordinate")
	}
	return euclidean(n)
}

type euclidean int

func (e euclidean) Width() int   { return int(e) }
func (e euclidean) Freedom() int { return int(e) }

func (e euclidean) Interpolate(dst, p, q []float64, t float64) {
	for c := range int(e) {
		dst[c] = p[c] + t*(q[c]-p[c])
	}
}

func (e euclidean) Displacement(dst, p, q []float64) {
	for c := range int(e) {
		dst[c] = q[c] - p[c]
	}
}

func (e euclidean) Chain(dst, p, d []float64) {
	for c := range int(e) {
		dst[c] = p[c] + d[c]
	}
}

func (e euclidean) Distance(p, q []float64) float64 {
	sum := 0.0
	for c := range int(e) {
		sum += (q[c] - p[c]) * (q[c] - p[c])
	}
	return math.Sqrt(sum)
}

// Rotation returns the space of rotations. A point is a unit quaternion stored
// x, y, z, w, of which q and -q are one; a displacement is a rotation vector in
// radians in the frame that the first point has turned, log(p⁻¹ q), at most π
// long. Interpolation is [Slerp]. What it writes is the twin nearer to p, so
// that a chain of points has no jumps of sign.
func Rotation() Space { return rotation{} }

type rotation struct{}

func (rotation) Width() int   { return 4 }
func (rotation) Freedom() int { return 3 }

func (rotation) Interpolate(dst, p, q []float64, t float64) {
	Store(dst, Slerp(Load(p), Load(q), t))
}

func (rotation) Displacement(dst, p, q []float64) {
	put(dst, Between(Load(p), Load(q)))
}

func (rotation) Chain(dst, p, d []float64) {
	from := Load(p)
	Store(dst, Nearest(from, After(from, vec(d))))
}

func (rotation) Distance(p, q []float64) float64 { return r3.Norm(Between(Load(p), Load(q))) }

// Direction returns the space of directions in three dimensions: a point is
// three values on the sphere of this radius about the origin, such as the end
// of a bone seen from the other, or gravity seen from a sensor. Ways run along
// great circles and are measured in the unit of the radius; a displacement is a
// vector at right angles to the first point. Chained from another point, its
// part at right angles to that is given its whole length.
func Direction(radius float64) Space {
	if !(radius > 0) || math.IsInf(radius, 0) {
		panic("body: a sphere needs a radius")
	}
	return sphere{radius}
}

type sphere struct{ radius float64 }

func (sphere) Width() int   { return 3 }
func (sphere) Freedom() int { return 3 }

func (s sphere) Interpolate(dst, p, q []float64, t float64) {
	put(dst, r3.Scale(s.radius, toward(direction(vec(p)), direction(vec(q)), t)))
}

func (s sphere) Displacement(dst, p, q []float64) {
	from := direction(vec(p))
	turn := shortestTurn(from, direction(vec(q)))
	put(dst, r3.Scale(s.radius, r3.Cross(turn, from)))
}

func (s sphere) Chain(dst, p, d []float64) {
	from, way := direction(vec(p)), vec(d)
	angle := r3.Norm(way) / s.radius
	if angle == 0 {
		put(dst, r3.Scale(s.radius, from))
		return
	}
	axis := r3.Cross(from, way)
	if r3.Norm(axis) > 1e-12*r3.Norm(way) {
		axis = direction(axis)
	} else { // straight out of the sphere
		axis = across(from)
	}
	put(dst, r3.Scale(s.radius, direction(turned(r3.Scale(angle, axis), from))))
}

func (s sphere) Distance(p, q []float64) float64 {
	return s.radius * r3.Norm(shortestTurn(direction(vec(p)), direction(vec(q))))
}

// Bounded returns the space of one value between two limits, either of which
// may be infinite. Inside them it is a straight line: ways are differences. A
// way that would run through a limit is turned back at it, as a ball is by a
// wall (the line is folded), so that no limit is ever passed, values that lie
// on a limit are kept, and a small change never makes a large one. A value
// recorded outside the limits counts as the limit.
func Bounded(low, high float64) Space {
	if !(low < high) {
		panic("body: limits are not in order")
	}
	return bounded{low, high}
}

type bounded struct{ low, high float64 }

func (bounded) Width() int   { return 1 }
func (bounded) Freedom() int { return 1 }

func (b bounded) clamp(v float64) float64 { return min(max(v, b.low), b.high) }

// fold reflects a value at the limits until it is between them.
func (b bounded) fold(v float64) float64 {
	switch width := b.high - b.low; {
	case v >= b.low && v <= b.high:
		return v
	case math.IsInf(width, 0) && v < b.low:
		return b.clamp(b.low + (b.low - v))
	case math.IsInf(width, 0):
		return b.clamp(b.high - (v - b.high))
	default:
		return b.clamp(b.low + math.Abs(math.Remainder(v-b.low, 2*width)))
	}
}

func (b bounded) Interpolate(dst, p, q []float64, t float64) {
	from, to := b.clamp(p[0]), b.clamp(q[0])
	dst[0] = b.fold(from + t*(to-from))
}

func (b bounded) Displacement(dst, p, q []float64) { dst[0] = b.clamp(q[0]) - b.clamp(p[0]) }
func (b bounded) Chain(dst, p, d []float64)        { dst[0] = b.fold(b.clamp(p[0]) + d[0]) }
func (b bounded) Distance(p, q []float64) float64  { return math.Abs(b.clamp(q[0]) - b.clamp(p[0])) }

// Scaled returns a space with all ways and distances multiplied by a factor
// above zero; its points are the same. It brings spaces of different units to
// one measure before they are joined by [Product].
func Scaled(s Space, factor float64) Space {
	if !(factor > 0) || math.IsInf(factor, 0) {
		panic("body: a scale is not above zero")
	}
	return scaled{s, factor}
}

type scaled struct {
	Space
	factor float64
}

func (s scaled) Displacement(dst, p, q []float64) {
	s.Space.Displacement(dst, p, q)
	floats.Scale(s.factor, dst[:s.Freedom()])
}

func (s scaled) Chain(dst, p, d []float64) {
	way := append([]float64(nil), d[:s.Freedom()]...)
	floats.Scale(1/s.factor, way)
	s.Space.Chain(dst, p, way)
}

func (s scaled) Distance(p, q []float64) float64 { return s.factor * s.Space.Distance(p, q) }

// Product returns the space of points that have a part in each of several
// spaces, stored one after the other. Distances of the parts are joined as
// those at right angles are.
func Product(parts ...Space) Space {
	if len(parts) == 0 {
		panic("body: a space needs a coordinate")
	}
	return product(append([]Space(nil), parts...))
}

type product []Space

func (s product) Width() (n int) {
	for _, part := range s {
		n += part.Width()
	}
	return n
}

func (s product) Freedom() (n int) {
	for _, part := range s {
		n += part.Freedom()
	}
	return n
}

func (s product) Interpolate(dst, p, q []float64, t float64) {
	at := 0
	for _, part := range s {
		part.Interpolate(dst[at:], p[at:], q[at:], t)
		at += part.Width()
	}
}

func (s product) Displacement(dst, p, q []float64) {
	at, way := 0, 0
	for _, part := range s {
		part.Displacement(dst[way:], p[at:], q[at:])
		at, way = at+part.Width(), way+part.Freedom()
	}
}

func (s product) Chain(dst, p, d []float64) {
	at, way := 0, 0
	for _, part := range s {
		part.Chain(dst[at:], p[at:], d[way:])
		at, way = at+part.Width(), way+part.Freedom()
	}
}

func (s product) Distance(p, q []float64) float64 {
	sum, at := 0.0, 0
	for _, part := range s {
		d := part.Distance(p[at:], q[at:])
		sum += d * d
		at += part.Width()
	}
	return math.Sqrt(sum)
}

// Inertial returns the space of what one inertial sensor shows once gravity is
// separated: the direction of gravity (three values of length one), the linear
// acceleration (m/s²) and, unless rate is 0, the angular rate (rad/s), each
// three values, in this order; see [Gravity]. linear and rate are how large
// those two usually are, in their units: distances are in radians of the
// direction, with so much acceleration or rate counting as one.
func Inertial(linear, rate float64) Space {
	parts := []Space{Direction(1), Scaled(Euclidean(3), 1/linear)}
	if rate != 0 {
		parts = append(parts, Scaled(Euclidean(3), 1/rate))
	}
	return Product(parts...)
}
