package body

import (
	"math"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"
)

// Mean returns the mean of rotations on the sphere of unit quaternions: the one
// from which the sum of squared angles, each times its weight, is least
// (Karcher, Communications on Pure and Applied Mathematics 30 (1977) 509; for
// rotations Moakher, SIAM Journal on Matrix Analysis and Applications 24 (2002)
// 1). q and -q count as one. nil weights are all 1. Without rotations, or with
// weights that are all 0, it is the identity.
//
// It is found by steps of the mean rotation vector from the estimate, starting
// at the largest eigenvector of the sum of q qᵀ (Markley, Cheng, Crassidis and
// Oshman, Journal of Guidance, Control, and Dynamics 30 (2007) 1193), until a
// step is below 1e-14 rad or after 100 steps. Rotations that spread over more
// than a half turn may have several means; it is then one of them.
func Mean(qs []quat.Number, weights []float64) quat.Number {
	if weights != nil && len(weights) != len(qs) {
		panic("body: weights and rotations differ in number")
	}
	weight := func(i int) float64 {
		if weights == nil {
			return 1
		}
		return weights[i]
	}
	total := 0.0
	square := mat.NewSymDense(4, nil)
	for i, q := range qs {
		total += weight(i)
		var v [4]float64
		Store(v[:], q)
		square.SymRankOne(square, weight(i), mat.NewVecDense(4, v[:]))
	}
	if !(total > 0) {
		return Identity()
	}
	mean := largest(square)
	for range 100 {
		step := r3.Vec{}
		for i, q := range qs {
			step = r3.Add(step, r3.Scale(weight(i)/total, Between(mean, q)))
		}
		mean = After(mean, step)
		if r3.Norm(step) < 1e-14 {
			break
		}
	}
	return Nearest(Identity(), mean)
}

// largest returns the eigenvector of the largest eigenvalue of a symmetric 4 × 4
// matrix as a unit quaternion, its parts in the order of storage.
func largest(m *mat.SymDense) quat.Number {
	var e mat.EigenSym
	if !e.Factorize(m, true) {
		return Identity() // of values that are not finite
	}
	var vectors mat.Dense
	e.VectorsTo(&vectors)
	return Unit(Load(mat.Col(nil, 3, &vectors)))
}

// UnwrapVectors makes a series of rotation vectors smooth in place: to each, as
// many whole turns about its own axis are added as bring it nearest to the one
// before, so that a turn that goes on past π goes on in the numbers, too. The
// rotations stay the same. The series is every stride-th element of vs, from
// the first, which is left as it is.
func UnwrapVectors(vs []r3.Vec, stride int) {
	if stride < 1 {
		panic("body: stride is not positive")
	}
	for i := stride; i < len(vs); i += stride {
		before, angle := vs[i-stride], r3.Norm(vs[i])
		axis := before
		if angle > 0 {
			axis = vs[i]
		} else if r3.Norm(before) == 0 {
			continue
		}
		axis = direction(axis)
		turns := math.Round((r3.Dot(before, axis) - angle) / (2 * math.Pi))
		vs[i] = r3.Scale(angle+2*math.Pi*turns, axis)
	}
}
