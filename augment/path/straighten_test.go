package path_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"

	"strandwise/augment/path"
)

// straightened returns where the knots lie after straightening.
func straightened(knots []float64, width int, strength float64) []float64 {
	s := path.NewStraightener(knots, width, strength)
	out := append([]float64(nil), knots...)
	n := len(knots) / width
	for k := range n {
		s.Add(out[k*width:(k+1)*width], float64(k)/float64(n-1))
	}
	return out
}

func drawKnots(t *rapid.T) (knots []float64, width int) {
	width, n := rapid.IntRange(1, 4).Draw(t, "width"), rapid.IntRange(2, 33).Draw(t, "knots")
	return walk(rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1)), n, width), width
}

func TestStraightenerOfNoStrengthAddsNothing(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		knots, width := drawKnots(t)
		near(t, "knots", straightened(knots, width, 0), knots, 0)
	})
}

// With full strength all displacements get the mean length, as the published
// method has it; in between a length d becomes ℓ^strength · d^(1−strength).
// Directions stay.
func TestStraightenerEvensLengths(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		knots, width := drawKnots(t)
		strength := rapid.SampledFrom([]float64{0.25, 0.5, 1}).Draw(t, "strength")
		before := legs(knots, width)
		mean := sum(before) / float64(len(before))
		got := straightened(knots, width, strength)
		near(t, "first knot", got[:width], knots[:width], 0)
		for k, d := range before {
			want := difference(knots[k*width:(k+1)*width], knots[(k+1)*width:(k+2)*width])
			for c := range want {
				want[c] *= math.Pow(mean/d, strength)
			}
			near(t, "displacement", difference(got[k*width:(k+1)*width], got[(k+1)*width:(k+2)*width]), want, 1e-9*mean)
		}
	})
}

func TestStraightenerKeepsRest(t *testing.T) {
	knots := []float64{0, 0, 3, 4, 3, 4, 3, 5} // moves 5, rests, moves 1
	near(t, "knots", straightened(knots, 2, 1), []float64{0, 0, 1.2, 1.6, 1.2, 1.6, 1.2, 3.6}, 1e-15)
	s := path.NewStraightener(knots, 2, 1)
	for _, p := range []float64{0.34, 0.5, 0.66} { // within the rest
		at := []float64{3, 4}
		s.Add(at, p)
		near(t, "at rest", at, []float64{1.2, 1.6}, 1e-15)
	}
	still := []float64{7, 7, 7}
	near(t, "no movement", straightened(still, 1, 1), still, 0)
}

// What is added runs without a step from end to end, also where rounding
// carries a parameter beyond the end.
func TestStraightenerIsContinuous(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		knots, width := drawKnots(t)
		s, last := path.NewStraightener(knots, width, 1), len(knots)/width-1
		added := func(p float64) []float64 {
			out := make([]float64, width)
			s.Add(out, p)
			return out
		}
		for k := 1; k < last; k++ {
			p := float64(k) / float64(last)
			steepest := 1e-9 * float64(last) * (1 + sum(legs(knots, width)))
			near(t, "below and above a knot", added(p-1e-9), added(p+1e-9), 2*steepest)
		}
		near(t, "start", added(0), make([]float64, width), 0)
		near(t, "beyond the end", added(1+1e-15), added(1), 1e-12*(1+sum(legs(knots, width))))
	})
}
