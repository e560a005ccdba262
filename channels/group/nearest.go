package group

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// Bounds of the iteration of [NearestCorrelation].
const (
	nearestTolerance  = 1e-10 // relative change, largest entry, at which it stops
	nearestIterations = 2000
)

// NearestCorrelation returns the correlation matrix nearest to a in the
// Frobenius norm: symmetric, positive semi-definite, with a diagonal of ones.
// Correlations that were estimated pair by pair may contradict one another,
// so that no set of variables has them all; this is the least change that
// lets one have them. A matrix that is a correlation matrix comes back as it
// is, to rounding. An entry that is not a finite number is an error.
//
// It is the alternating projection method with Dykstra's correction of
// Higham, "Computing the nearest correlation matrix: a problem from finance",
// IMA Journal of Numerical Analysis 22 (2002) 329–343, algorithm 3.3 with
// weights of one. What it converges to has eigenvalues of zero, which rounding
// may leave below it: a last projection and a scaling of the diagonal to one
// bring them back.
func NearestCorrelation(a mat.Symmetric) (*mat.SymDense, error) {
	n := a.SymmetricDim()
	y, correction := mat.NewSymDense(n, nil), mat.NewSymDense(n, nil)
	for i := range n {
		for j := i; j < n; j++ {
			v := a.At(i, j)
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return nil, fmt.Errorf("correlation of %d and %d is %g, not a finite number", i, j, v)
			}
			y.SetSym(i, j, v)
		}
	}
	r, x := mat.NewSymDense(n, nil), mat.NewSymDense(n, nil)
	for range nearestIterations {
		subtract(r, y, correction)
		if err := project(x, r); err != nil {
			return nil, err
		}
		subtract(correction, x, r)
		if step(y, x) <= nearestTolerance {
			break
		}
	}
	if err := project(x, y); err != nil {
		return nil, err
	}
	return unitDiagonal(x), nil
}

// step moves y to x with a diagonal of ones, and returns how far it went.
func step(y, x *mat.SymDense) float64 {
	n, moved := x.SymmetricDim(), 0.0
	for i := range n {
		for j := i; j < n; j++ {
			v := x.At(i, j)
			if i == j {
				v = 1
			}
			moved = max(moved, math.Abs(v-y.At(i, j)))
			y.SetSym(i, j, v)
		}
	}
	return moved
}

// subtract sets dst to a − b.
func subtract(dst, a, b *mat.SymDense) {
	for i := range dst.SymmetricDim() {
		for j := i; j < dst.SymmetricDim(); j++ {
			dst.SetSym(i, j, a.At(i, j)-b.At(i, j))
		}
	}
}

// project sets dst to the positive semi-definite matrix nearest to a: the
// same eigenvectors, with the eigenvalues below zero set to zero.
func project(dst *mat.SymDense, a mat.Symmetric) error {
	return withEigenvalues(dst, a, func(v float64) float64 { return max(v, 0) })
}

// withEigenvalues sets dst to a with f applied to each eigenvalue.
func withEigenvalues(dst *mat.SymDense, a mat.Symmetric, f func(float64) float64) error {
	var e mat.EigenSym
	if !e.Factorize(a, true) {
		return fmt.Errorf("eigenvalues of a matrix of %d rows were not found", a.SymmetricDim())
	}
	var v mat.Dense
	e.VectorsTo(&v)
	n := a.SymmetricDim()
	values := e.Values(nil)
	for k := range values {
		values[k] = f(values[k])
	}
	for i := range n {
		for j := i; j < n; j++ {
			sum := 0.0
			for k, value := range values {
				sum += v.At(i, k) * value * v.At(j, k)
			}
			dst.SetSym(i, j, sum)
		}
	}
	return nil
}

// unitDiagonal scales a positive semi-definite matrix to a diagonal of ones,
// which leaves it positive semi-definite. A row of zeros becomes independent
// of all others.
func unitDiagonal(a *mat.SymDense) *mat.SymDense {
	n := a.SymmetricDim()
	out := mat.NewSymDense(n, nil)
	for i := range n {
		out.SetSym(i, i, 1)
		for j := i + 1; j < n; j++ {
			if d := math.Sqrt(a.At(i, i) * a.At(j, j)); d > 0 {
				out.SetSym(i, j, min(max(a.At(i, j)/d, -1), 1))
			}
		}
	}
	return out
}

// SquareRoot returns the symmetric positive semi-definite S with S·S = c, for
// a correlation matrix c. Independent normal draws z become draws S·z with the
// correlations c: a Gaussian copula. Eigenvalues that rounding left below zero
// count as zero.
func SquareRoot(c mat.Symmetric) (*mat.SymDense, error) {
	s := mat.NewSymDense(c.SymmetricDim(), nil)
	err := withEigenvalues(s, c, func(v float64) float64 { return math.Sqrt(max(v, 0)) })
	return s, err
}
