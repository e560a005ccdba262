package body

import (
	"math"

	"gonum.org/v1/gonum/spatial/r3"
)

// shortestTurn returns the rotation vector of the shortest turn from one unit
// vector to another. From a vector to its opposite all turns are as short; the
// one about an axis of its own choice is given.
func shortestTurn(from, to r3.Vec) r3.Vec {
	axis := r3.Cross(from, to)
	sine, cosine := r3.Norm(axis), r3.Dot(from, to)
	if sine == 0 {
		if cosine >= 0 {
			return r3.Vec{}
		}
		return r3.Scale(math.Pi, across(from))
	}
	return r3.Scale(math.Atan2(sine, cosine)/sine, axis)
}

// toward returns the unit vector that lies the share t of the way from one unit
// vector to another on the shorter great circle.
func toward(from, to r3.Vec, t float64) r3.Vec {
	return direction(turned(r3.Scale(t, shortestTurn(from, to)), from))
}

// across returns a unit vector at right angles to a unit vector.
func across(v r3.Vec) r3.Vec {
	axis := r3.Vec{X: 1}
	if math.Abs(v.X) > 0.6 { // of the three parts at least one is below 1/√3
		axis = r3.Vec{Y: 1}
	}
	return direction(r3.Cross(v, axis))
}

// turned returns v turned by a rotation vector: Rotate(Exp(by), v), by the
// formula of Rodrigues.
func turned(by, v r3.Vec) r3.Vec {
	sine, cosine := math.Sincos(r3.Norm(by))
	axis := direction(by)
	return r3.Add(r3.Scale(cosine, v), r3.Add(r3.Scale(sine, r3.Cross(axis, v)), r3.Scale((1-cosine)*r3.Dot(axis, v), axis)))
}

func vec(v []float64) r3.Vec      { return r3.Vec{X: v[0], Y: v[1], Z: v[2]} }
func put(dst []float64, v r3.Vec) { dst[0], dst[1], dst[2] = v.X, v.Y, v.Z }

// direction returns v of length one, and up the z axis for no direction at all.
func direction(v r3.Vec) r3.Vec {
	n := r3.Norm(v)
	if !(n > 0) || math.IsInf(n, 0) {
		return r3.Vec{Z: 1}
	}
	if n < tiny {
		v = r3.Scale(1/tiny, v)
		n = r3.Norm(v)
	}
	return r3.Scale(1/n, v)
}

// tiny is a length below which the inverse of a length is not safe.
const tiny = 0x1p-900
