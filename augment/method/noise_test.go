package method_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
	"strandwise/augment/method"
)

// Gradient noise is 0 at every lattice point (Perlin, SIGGRAPH 1985 / 2002).
func TestNoiseIsZeroOnTheLattice(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		place := make([]float64, rapid.IntRange(1, 3).Draw(t, "dimensions"))
		for d := range place {
			place[d] = float64(rapid.IntRange(-2000, 2000).Draw(t, "cell"))
		}
		n := method.NewNoise(len(place), rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1)))
		if v := n.At(place...); v != 0 {
			t.Fatalf("noise at %v is %v", place, v)
		}
	})
}

// Noise has no step and no kink at the border of two cells, its values and its
// slopes meet there (Perlin 2002), and it repeats after 256 cells.
func TestNoiseIsSmooth(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 7))
	const h = 1e-6
	for dimensions := 1; dimensions <= 3; dimensions++ {
		n := method.NewNoise(dimensions, rng)
		for range 200 {
			place := make([]float64, dimensions)
			for d := range place {
				place[d] = 20 * (rng.Float64() - 0.5)
			}
			place[0] = math.Round(place[0])
			value := func(off float64) float64 {
				at := append([]float64(nil), place...)
				at[0] += off
				return n.At(at...)
			}
			left, right := (value(0)-value(-h))/h, (value(h)-value(0))/h
			if math.Abs(left-right) > 1e-3 {
				t.Fatalf("%v: slopes %v and %v", place, left, right)
			}
			if math.Abs(value(0.25)-value(256.25)) > 1e-9 {
				t.Fatalf("%v: does not repeat", place)
			}
		}
	}
}

// The noise has mean 0 and root mean square 1 over all places and draws.
func TestNoiseMoments(t *testing.T) {
	for dimensions := 1; dimensions <= 3; dimensions++ {
		rng := rand.New(rand.NewPCG(uint64(dimensions), 3))
		values := make([]float64, 40000)
		var n *method.Noise
		for i := range values {
			if i%40 == 0 {
				n = method.NewNoise(dimensions, rng)
			}
			place := make([]float64, dimensions)
			for d := range place {
				place[d] = 256 * rng.Float64()
			}
			values[i] = n.At(place...)
		}
		mean, deviation := moments(values)
		if math.Abs(mean) > 0.03 || math.Abs(deviation-1) > 0.03 {
			t.Errorf("%d dimensions: mean %v, root mean square %v", dimensions, mean, deviation)
		}
	}
}

// Over space, a place that is met twice is displaced alike.
func TestFieldOverSpace(t *testing.T) {
	k := constant(21, 2, 0)
	for i := range k.time {
		u := 1 - math.Abs(float64(i)-10)/10
		k.src[2*i], k.src[2*i+1] = u, u*u
	}
	f := method.NoiseField{Size: 0.2, Cells: 3, Octaves: 2, Persistence: 0.5, OverSpace: true}
	got := f.Apply(nil, k.src, 2, k.time, rand.New(rand.NewPCG(1, 1)))
	for i := range 10 {
		for c := range 2 {
			if d := got[2*i+c] - got[2*(20-i)+c]; math.Abs(d) > 1e-9 {
				t.Errorf("frames %d and %d at one place differ by %v", i, 20-i, d)
			}
		}
	}
}
