package lognormal_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
	"pgregory.net/rapid"
	"strandwise/augment/lognormal"
)

// anyStroke draws a stroke of the sizes of hand movements in space.
func anyStroke(t *rapid.T) lognormal.Stroke {
	k := lognormal.Planar(
		rapid.Float64Range(0.01, 2).Draw(t, "D"),
		rapid.Float64Range(-2, 2).Draw(t, "t0"),
		rapid.Float64Range(-2.5, 0.5).Draw(t, "mu"),
		rapid.Float64Range(0.05, 0.6).Draw(t, "sigma"),
		0, rapid.Float64Range(0, 3).Draw(t, "turn"))
	rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "axes"), 1))
	k.Mid, k.Normal = axes(3, rng)
	return k
}

// The area under the speed is D and its peak lies at t₀ + exp(μ − σ²)
// (definition of the lognormal; sigma-lognormal model).
func TestStrokeAreaAndPeak(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := anyStroke(t)
		// Over the logarithm of time the integrand is a bell of known place.
		area := quad.Fixed(func(z float64) float64 {
			tau := math.Exp(k.Mu + z*k.Sigma)
			return k.Speed(k.T0+tau) * tau * k.Sigma
		}, -7, 7, 200, nil, 0)
		if math.Abs(area/k.D-1) > 1e-6 {
			t.Fatalf("area under the speed is %v, want D = %v", area, k.D)
		}
		at := k.T0 + math.Exp(k.Mu-k.Sigma*k.Sigma)
		if math.Abs(k.PeakTime()-at) > 1e-12 {
			t.Fatalf("peak time is %v, want %v", k.PeakTime(), at)
		}
		peak := k.Speed(at)
		for _, off := range []float64{0.9, 0.99, 1.01, 1.1} {
			if v := k.Speed(k.T0 + off*(at-k.T0)); !(v < peak) {
				t.Fatalf("speed %v at %v of the peak time is not under the peak's %v", v, off, peak)
			}
		}
	})
}

// The closed form of the displacement is the integral of speed times direction.
func TestStrokeDisplacementIsTheIntegralOfVelocity(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := anyStroke(t)
		to := rapid.Float64Range(-3, 3).Draw(t, "z")
		at := k.Displacement(k.T0 + math.Exp(k.Mu+to*k.Sigma))
		for c := range at {
			want := quad.Fixed(func(z float64) float64 {
				tau := math.Exp(k.Mu + z*k.Sigma)
				return k.Speed(k.T0+tau) * k.Direction(k.T0 + tau)[c] * tau * k.Sigma
			}, -7, to, 200, nil, 0)
			if math.Abs(at[c]-want) > 1e-6*k.D {
				t.Fatalf("coordinate %d is %v, the integral %v", c, at[c], want)
			}
		}
	})
}

func TestStrokeBeforeItsCommandIsAtRest(t *testing.T) {
	k := lognormal.Planar(0.3, 1, -1.5, 0.3, 0.2, 1.4)
	for _, at := range []float64{-1, 0.5, 1} {
		if k.Speed(at) != 0 || k.Progress(at) != 0 || length(k.Displacement(at)) > 1e-15 {
			t.Errorf("moves at %v s, before its command at 1 s", at)
		}
	}
}

func TestPlanarAngles(t *testing.T) {
	for _, want := range [][2]float64{{0, 1}, {1, 0}, {-2, -0.5}, {0.3, 0.3}, {0.5, -2}} {
		k := lognormal.Planar(1, 0, -1, 0.3, want[0], want[1])
		start, end := k.Angles()
		if math.Abs(start-want[0]) > 1e-12 || math.Abs(end-want[1]) > 1e-12 {
			t.Errorf("angles %v and %v, want %v", start, end, want)
		}
		// The direction at half of the way is the mean of the two.
		mid := k.Direction(k.T0 + math.Exp(k.Mu))
		sin, cos := math.Sincos((want[0] + want[1]) / 2)
		if math.Abs(mid[0]-cos) > 1e-12 || math.Abs(mid[1]-sin) > 1e-12 {
			t.Errorf("direction half-way of %v is %v", want, mid)
		}
	}
}
