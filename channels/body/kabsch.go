package body

import (
	"math"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/num/quat"
)

// Kabsch returns the rotation R about the origin that brings the points a
// nearest to the points b, that is for which Σ |R a(i) - b(i)|² is least
// (Kabsch, Acta Crystallographica A32 (1976) 922). Both are points × 3; to turn
// about their middles, take those away first. It is always a rotation, never a
// reflection. Found as the largest eigenvector of a 4 × 4 matrix (Horn, Journal
// of the Optical Society of America A 4 (1987) 629), which needs no special
// cases; where several rotations are as good, as for points on one line, it is
// one of them. Without points, or with values that are not finite, it is the
// identity.
func Kabsch(a, b []float64) quat.Number {
	if len(a) != len(b) || len(a)%3 != 0 {
		panic("body: point sets differ in number")
	}
	var s [3][3]float64 // Σ a bᵀ
	for i := 0; i < len(a); i += 3 {
		for r := range 3 {
			for c := range 3 {
				s[r][c] += a[i+r] * b[i+c]
			}
		}
	}
	if s == [3][3]float64{} {
		return Identity()
	}
	x, y, z := s[1][2]-s[2][1], s[2][0]-s[0][2], s[0][1]-s[1][0]
	return largest(mat.NewSymDense(4, []float64{ // parts in the order x, y, z, w
		s[0][0] - s[1][1] - s[2][2], s[0][1] + s[1][0], s[2][0] + s[0][2], x,
		0, s[1][1] - s[0][0] - s[2][2], s[1][2] + s[2][1], y,
		0, 0, s[2][2] - s[0][0] - s[1][1], z,
		0, 0, 0, s[0][0] + s[1][1] + s[2][2],
	}))
}

// Kabsch2 is [Kabsch] in the plane: points are pairs, and the rotation is an
// angle in radians between -π and π, from the first axis to the second.
func Kabsch2(a, b []float64) float64 {
	if len(a) != len(b) || len(a)%2 != 0 {
		panic("body: point sets differ in number")
	}
	var along, across float64
	for i := 0; i < len(a); i += 2 {
		along += a[i]*b[i] + a[i+1]*b[i+1]
		across += a[i]*b[i+1] - a[i+1]*b[i]
	}
	return math.Atan2(across, along)
}
