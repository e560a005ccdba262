package body

import (
	"math"

	"gonum.org/v1/gonum/num/quat"
)

// Axis is an axis of a right-handed frame.
type Axis int

// The axes.
const (
	X Axis = iota
	Y
	Z
)

// String returns X, Y or Z.
func (a Axis) String() string { return "XYZ"[a : a+1] }

// About returns the rotation by an angle in radians about an axis.
func About(a Axis, angle float64) quat.Number { return Turn(Identity(), a, angle) }

// Turn returns q followed by a turn by an angle in radians about an axis of
// the frame that q has turned: the product of q and the turn.
func Turn(q quat.Number, a Axis, angle float64) quat.Number {
	s, c := math.Sincos(angle / 2)
	w, x, y, z := q.Real, q.Imag, q.Jmag, q.Kmag
	switch a {
	case X:
		return quat.Number{Real: w*c - x*s, Imag: x*c + w*s, Jmag: y*c + z*s, Kmag: z*c - y*s}
	case Y:
		return quat.Number{Real: w*c - y*s, Imag: x*c - z*s, Jmag: y*c + w*s, Kmag: z*c + x*s}
	case Z:
		return quat.Number{Real: w*c - z*s, Imag: x*c + y*s, Jmag: y*c - x*s, Kmag: z*c + w*s}
	}
	panic("body: no such axis")
}

// Intrinsic returns the rotation made of turns about the axes of the body, one
// after the other, by angles in radians. Any number of turns is allowed. It
// panics when there are not as many angles as axes.
func Intrinsic(order []Axis, angles []float64) quat.Number {
	if len(order) != len(angles) {
		panic("body: axes and angles differ in number")
	}
	q := Identity()
	for i, a := range order {
		q = Turn(q, a, angles[i])
	}
	return q
}

// Extrinsic is [Intrinsic] with turns about the axes of the world, which stay
// where they are.
func Extrinsic(order []Axis, angles []float64) quat.Number {
	if len(order) != len(angles) {
		panic("body: axes and angles differ in number")
	}
	q := Identity()
	for i := len(order) - 1; i >= 0; i-- {
		q = Turn(q, order[i], angles[i])
	}
	return q
}

// IntrinsicAngles returns the angles in radians, each between -π and π, with
// which [Intrinsic] makes the rotation q from turns in this order. The middle
// axis must differ from both others. The middle angle lies between -π/2 and
// π/2, or between 0 and π when the first axis is also the last. Where only the
// sum or difference of the outer angles is determined (gimbal lock), the
// angles returned still make the rotation.
//
// Closed form for all twelve orders: Bernardes and Viollet, Quaternion to Euler
// angles conversion, PLoS ONE 17 (2022) e0276302. With i the first, j the
// middle and k the remaining axis, and e = 1 where i, j, k are right-handed and
// -1 otherwise, turns by α, β, γ about i, j, i make a quaternion with
//
//	w = cos(β/2) cos((α+γ)/2)   i = cos(β/2) sin((α+γ)/2)
//	j = sin(β/2) cos((α-γ)/2)   k = sin(β/2) sin((α-γ)/2) e
//
// An order of three different axes becomes one of these by a quarter turn about
// j, since that turn carries axis k to axis i or its opposite.
func IntrinsicAngles(order [3]Axis, q quat.Number) [3]float64 {
	i, j := order[0], order[1]
	if i == j || j == order[2] {
		panic("body: neighbouring axes are the same")
	}
	k := X + Y + Z - i - j
	e := 1.0
	if (j-i+3)%3 == 2 {
		e = -1
	}
	same := order[2] == i
	if !same {
		q = Turn(q, j, math.Pi/2)
	}
	a, b, c, d := q.Real, part(q, i), part(q, j), e*part(q, k)
	sum, difference := math.Atan2(b, a), math.Atan2(d, c)
	alpha, beta, gamma := sum+difference, 2*math.Atan2(math.Hypot(c, d), math.Hypot(a, b)), sum-difference
	if !same {
		beta, gamma = beta-math.Pi/2, -e*gamma
	}
	return [3]float64{math.Remainder(alpha, 2*math.Pi), beta, math.Remainder(gamma, 2*math.Pi)}
}

// part returns the component of q along an axis.
func part(q quat.Number, a Axis) float64 {
	switch a {
	case X:
		return q.Imag
	case Y:
		return q.Jmag
	}
	return q.Kmag
}
