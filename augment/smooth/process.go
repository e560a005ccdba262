// Package smooth draws smooth random curves on the unit interval: Gaussian
// processes of mean 0 and variance 1 whose values at u and u′ correlate by
//
//	exp(−(u−u′)²/(2ℓ²))
//
// with ℓ the correlation length (squared-exponential covariance; Rasmussen &
// Williams, Gaussian Processes for Machine Learning, 2006, eq. 4.9).
package smooth

import (
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/mat"
)

// Process draws curves at a fixed set of places. It is safe for use by several
// goroutines.
//
// A curve is drawn at a few evenly spaced nodes, 0.4 ℓ apart or closer, and is
// at every place what the nodes let expect there; the variance this leaves out
// is below 0.001.
type Process struct {
	nodes   int
	weights []float64 // places × nodes
}

// nodeSpacing is the distance of nodes in correlation lengths.
const nodeSpacing = 0.4

// steadying is added to the covariance of the nodes so that its Cholesky
// factor exists in floating point.
const steadying = 1e-6

// NewProcess prepares the process of correlation length ℓ, above 0 and at least
// 0.005, at the places, each from 0 to 1.
func NewProcess(places []float64, length float64) *Process {
	if !(length >= 0.005) {
		panic("smooth: the correlation length of a process is too short")
	}
	n := int(math.Ceil(1/(nodeSpacing*length))) + 1
	at := make([]float64, n)
	for k := range at {
		at[k] = float64(k) / float64(n-1)
	}
	covariance := mat.NewSymDense(n, nil)
	for i := range n {
		for j := i; j < n; j++ {
			covariance.SetSym(i, j, correlation(at[i]-at[j], length))
		}
		covariance.SetSym(i, i, 1+steadying)
	}
	var factor mat.Cholesky
	if !factor.Factorize(covariance) {
		panic("smooth: the covariance of the nodes is not positive definite")
	}
	var lower mat.TriDense
	factor.LTo(&lower)
	// With K = L Lᵀ over the nodes and k(u) their covariance with place u, the
	// curve at u is k(u)ᵀ K⁻¹ (L e) = (L⁻¹ k(u))ᵀ e for independent normal e.
	p := &Process{nodes: n, weights: make([]float64, len(places)*n)}
	for i, u := range places {
		row := p.weights[i*n : (i+1)*n]
		for k := range row {
			sum := correlation(u-at[k], length)
			for j := range k {
				sum -= lower.At(k, j) * row[j]
			}
			row[k] = sum / lower.At(k, k)
		}
	}
	return p
}

func correlation(distance, length float64) float64 {
	d := distance / length
	return math.Exp(-d * d / 2)
}

// Nodes returns how many normal draws make a curve.
func (p *Process) Nodes() int { return p.nodes }

// Draw fills dst, one value for each place, with a new curve.
func (p *Process) Draw(dst []float64, rng *rand.Rand) []float64 {
	normals := make([]float64, p.nodes)
	for k := range normals {
		normals[k] = rng.NormFloat64()
	}
	return p.Curve(dst, normals)
}

// Curve fills dst, one value for each place, with the curve that Nodes
// independent standard normal draws make. It is linear in them.
func (p *Process) Curve(dst, normals []float64) []float64 {
	n := p.nodes
	if len(dst)*n != len(p.weights) || len(normals) != n {
		panic("smooth: a curve has as many values as places, and as many normal draws as nodes")
	}
	for i := range dst {
		sum := 0.0
		for k, w := range p.weights[i*n : (i+1)*n] {
			sum += w * normals[k]
		}
		dst[i] = sum
	}
	return dst
}
