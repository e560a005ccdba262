package body

import (
	"math"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"
)

// Identity returns the rotation that turns nothing.
func Identity() quat.Number { return quat.Number{Real: 1} }

// Components returns the names of the parts of a stored quaternion, in the
// order of storage, as channels name them.
func Components() [4]string { return [4]string{"quat_x", "quat_y", "quat_z", "quat_w"} }

// Load reads a quaternion stored as x, y, z, w from the first four values.
func Load(src []float64) quat.Number {
	return quat.Number{Imag: src[0], Jmag: src[1], Kmag: src[2], Real: src[3]}
}

// Store writes a quaternion as x, y, z, w into the first four values of dst.
func Store(dst []float64, q quat.Number) {
	dst[0], dst[1], dst[2], dst[3] = q.Imag, q.Jmag, q.Kmag, q.Real
}

// Unit returns q scaled to length one. It returns the identity for a
// quaternion that has no direction: zero, infinite or not a number.
func Unit(q quat.Number) quat.Number {
	n := quat.Abs(q)
	if n == 0 || math.IsInf(n, 0) || math.IsNaN(n) {
		return Identity()
	}
	return quat.Scale(1/n, q)
}

// Rotate returns v turned by the unit quaternion q. With u the vector part of
// q and t = 2 u×v it is v + w t + u×t, the expansion of q v q⁻¹.
func Rotate(q quat.Number, v r3.Vec) r3.Vec {
	tx := 2 * (q.Jmag*v.Z - q.Kmag*v.Y)
	ty := 2 * (q.Kmag*v.X - q.Imag*v.Z)
	tz := 2 * (q.Imag*v.Y - q.Jmag*v.X)
	return r3.Vec{
		X: v.X + q.Real*tx + q.Jmag*tz - q.Kmag*ty,
		Y: v.Y + q.Real*ty + q.Kmag*tx - q.Imag*tz,
		Z: v.Z + q.Real*tz + q.Imag*ty - q.Jmag*tx,
	}
}

// Log returns the rotation vector of the unit quaternion q: its axis times its
// angle in radians, the shorter way round, so that the length is at most π.
func Log(q quat.Number) r3.Vec {
	if q.Real < 0 {
		q = quat.Scale(-1, q)
	}
	l := quat.Log(q)
	return r3.Vec{X: 2 * l.Imag, Y: 2 * l.Jmag, Z: 2 * l.Kmag}
}

// Exp returns the rotation about the axis v by an angle of its length in
// radians. It undoes [Log].
func Exp(v r3.Vec) quat.Number {
	return quat.Exp(quat.Number{Imag: v.X / 2, Jmag: v.Y / 2, Kmag: v.Z / 2})
}

// Angle returns the angle in radians between two unit quaternions, the smallest
// that turns one into the other: between 0 and π.
func Angle(p, q quat.Number) float64 {
	q = Nearest(p, q)
	return 4 * math.Atan2(quat.Abs(quat.Sub(p, q)), quat.Abs(quat.Add(p, q)))
}

// Slerp returns the rotation that lies the fraction t of the way from p to q on
// the shorter great arc, at constant angular speed: p at t = 0, q or its twin
// -q at t = 1. Values of t outside [0, 1] go on beyond the ends.
//
// Spherical linear interpolation: Shoemake, Animating rotation with quaternion
// curves, Computer Graphics (SIGGRAPH) 19 (1985) 245. With θ the angle between
// the two in four dimensions it is
//
//	(sin((1-t)θ) p + sin(tθ) q) / sin θ
func Slerp(p, q quat.Number, t float64) quat.Number {
	q = Nearest(p, q)
	theta := Angle(p, q) / 2
	a, b := 1-t, t
	// Below this angle sine and angle are equal to the last digit.
	if theta > 1e-8 {
		s := math.Sin(theta)
		a, b = math.Sin(a*theta)/s, math.Sin(b*theta)/s
	}
	return Unit(quat.Add(quat.Scale(a, p), quat.Scale(b, q)))
}

// Nearest returns q or -q, which are one rotation: the one nearer to p. It
// returns q when both are equally near.
func Nearest(p, q quat.Number) quat.Number {
	if p.Real*q.Real+p.Imag*q.Imag+p.Jmag*q.Jmag+p.Kmag*q.Kmag < 0 {
		return quat.Scale(-1, q)
	}
	return q
}

// Unwrap chooses the signs of a series of rotations in place, so that each is
// nearest to the one before, and the first has w ≥ 0. The series is every
// stride-th element of qs, from the first.
func Unwrap(qs []quat.Number, stride int) {
	if stride < 1 {
		panic("body: stride is not positive")
	}
	before := Identity()
	for i := 0; i < len(qs); i += stride {
		qs[i] = Nearest(before, qs[i])
		before = qs[i]
	}
}

// Between returns the rotation vector in radians, the shorter way round, that
// leads from p to q in the frame that p has turned: log(p⁻¹ q).
func Between(p, q quat.Number) r3.Vec { return Log(quat.Mul(quat.Conj(p), q)) }

// After returns p followed by the turn of a rotation vector in the frame that p
// has turned: p exp(v). It undoes [Between].
func After(p quat.Number, v r3.Vec) quat.Number { return Unit(quat.Mul(p, Exp(v))) }
