package body

import (
	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"
)

// MirrorPolar returns the mirror image of a place, velocity, force or
// acceleration in the coordinate plane at right angles to an axis: the part
// along the axis changes sign. Mirroring twice changes nothing, here and below.
func MirrorPolar(v r3.Vec, across Axis) r3.Vec {
	switch across {
	case X:
		v.X = -v.X
	case Y:
		v.Y = -v.Y
	case Z:
		v.Z = -v.Z
	default:
		panic("body: no such axis")
	}
	return v
}

// MirrorAxial returns the mirror image of an angular rate, a rotation vector or
// a magnetic field, which have a sense of turning rather than a direction: the
// parts along the plane change sign, the one along the axis stays.
func MirrorAxial(v r3.Vec, across Axis) r3.Vec {
	return r3.Scale(-1, MirrorPolar(v, across))
}

// MirrorRotation returns the mirror image of a rotation: with M the reflection
// and R the rotation, M R M. Mirrored, a turned vector is the mirrored vector
// turned by it.
func MirrorRotation(q quat.Number, across Axis) quat.Number {
	v := MirrorAxial(r3.Vec{X: q.Imag, Y: q.Jmag, Z: q.Kmag}, across)
	return quat.Number{Real: q.Real, Imag: v.X, Jmag: v.Y, Kmag: v.Z}
}
