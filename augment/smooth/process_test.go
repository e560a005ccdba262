package smooth_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"strandwise/augment/smooth"
)

func places(n int) []float64 {
	out := make([]float64, n)
	for i := range out {
		out[i] = float64(i) / float64(n-1)
	}
	return out
}

// A curve is linear in its normal draws, so its covariance follows exactly from
// the curves of the unit vectors; it must be the one the process is defined by.
func TestCovarianceIsSquaredExponential(t *testing.T) {
	for _, length := range []float64{0.05, 0.2, 0.5, 3} {
		u := places(41)
		p := smooth.NewProcess(u, length)
		covariance := make([]float64, len(u)*len(u))
		for k := range p.Nodes() {
			unit := make([]float64, p.Nodes())
			unit[k] = 1
			c := p.Curve(make([]float64, len(u)), unit)
			for i := range u {
				for j := range u {
					covariance[i*len(u)+j] += c[i] * c[j]
				}
			}
		}
		for i := range u {
			for j := range u {
				d := (u[i] - u[j]) / length
				want := math.Exp(-d * d / 2)
				if got := covariance[i*len(u)+j]; math.Abs(got-want) > 1e-3 {
					t.Fatalf("length %g: covariance of %g and %g is %g, want %g", length, u[i], u[j], got, want)
				}
			}
		}
	}
}

func TestDrawsAreRepeatable(t *testing.T) {
	p := smooth.NewProcess(places(20), 0.2)
	a := p.Draw(make([]float64, 20), rand.New(rand.NewPCG(1, 2)))
	b := p.Draw(make([]float64, 20), rand.New(rand.NewPCG(1, 2)))
	if fmt.Sprint(a) != fmt.Sprint(b) {
		t.Error("one generator state gave two curves")
	}
}

func BenchmarkDraw(b *testing.B) {
	p, dst, rng := smooth.NewProcess(places(128), 0.2), make([]float64, 128), rand.New(rand.NewPCG(1, 2))
	for b.Loop() {
		p.Draw(dst, rng)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*len(dst)), "ns/value")
}
