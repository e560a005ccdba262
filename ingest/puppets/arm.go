package puppets

import (
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"
)

// The axes of the world: x to the front, y to the left, z up, in metres.
var (
	front = r3.Vec{X: 1}
	left  = r3.Vec{Y: 1}
	up    = r3.Vec{Z: 1}
)

// link is a rigid body in motion and a point on it, in world axes and SI
// units.
type link struct {
	orientation r3.Rotation // link axes to world axes
	position    r3.Vec
	rate        r3.Vec // angular rate
	turning     r3.Vec // angular acceleration
	accel       r3.Vec // acceleration of the point
}

// still is a link at rest in the world's origin.
func still() link { return link{orientation: r3.Rotation{Real: 1}} }

// hinged returns the link that turns by q about an axis of l, through l's
// point. This and along are the outward recursion of Luh, Walker and Paul,
// "On-line computational scheme for mechanical manipulators", J. Dynamic
// Systems, Measurement, and Control 102 (1980) 69–76, in world axes.
func (l link) hinged(axis r3.Vec, q angle) link {
	world := l.orientation.Rotate(axis)
	spin := r3.Scale(q.rate, world)
	l.turning = r3.Add(l.turning, r3.Add(r3.Scale(q.acceleration, world), r3.Cross(l.rate, spin)))
	l.rate = r3.Add(l.rate, spin)
	l.orientation = then(l.orientation, r3.NewRotation(q.value, axis))
	return l
}

// along moves the link's point by an offset in the link's own axes.
func (l link) along(offset r3.Vec) link {
	r := l.orientation.Rotate(offset)
	l.position = r3.Add(l.position, r)
	l.accel = r3.Add(l.accel, r3.Add(r3.Cross(l.turning, r), r3.Cross(l.rate, r3.Cross(l.rate, r))))
	return l
}

// then returns the rotation that applies b in the axes that a leads to.
func then(a, b r3.Rotation) r3.Rotation {
	return r3.Rotation(quat.Mul(quat.Number(a), quat.Number(b)))
}

// arm is one arm and the band on its wrist. Lengths are in metres.
type arm struct {
	side          float64 // 1 for the left, −1 for the right: what mirrors one into the other
	shoulder      r3.Vec  // from the trunk's pivot, in the trunk's axes
	upper, fore   float64
	bandToForearm r3.Rotation // how the band sits
}

// band returns the band as a link: its axes are the sensors' axes.
func (a arm) band(trunk link, q [joints]angle) link {
	l := trunk.along(a.shoulder).
		hinged(left, q[flexion].times(-1)).
		hinged(front, q[abduction].times(a.side)).
		hinged(up, q[rotation].times(-a.side)).
		along(r3.Scale(-a.upper, up)).
		hinged(left, q[elbow].times(-1)).
		hinged(up, q[pronation].times(-a.side)).
		along(r3.Scale(-a.fore, up))
	l.orientation = then(l.orientation, a.bandToForearm)
	return l
}

func (q angle) times(f float64) angle {
	return angle{f * q.value, f * q.rate, f * q.acceleration}
}

// sway is a slow swing of the trunk about one axis.
type sway struct {
	size  float64 // radians
	omega float64 // rad/s
	phase float64 // radians
}

// drawSway draws a swing of up to the given size in radians, once in 2 to 5
// seconds.
func drawSway(rng *rand.Rand, most float64) sway {
	return sway{most * rng.Float64(), 2 * math.Pi * (0.2 + 0.3*rng.Float64()), 2 * math.Pi * rng.Float64()}
}

func (s sway) at(t float64) angle {
	sin, cos := math.Sincos(s.omega*t + s.phase)
	return angle{s.size * sin, s.size * s.omega * cos, -s.size * s.omega * s.omega * sin}
}
