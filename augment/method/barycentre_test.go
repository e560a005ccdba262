package method_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"
	"strandwise/augment/method"
)

// warpingDistance is a plain dynamic time warping distance with closed ends:
// the least sum of squared frame distances.
func warpingDistance(a, b []float64, width int) float64 {
	n, m := len(a)/width, len(b)/width
	cost := make([][]float64, n)
	for i := range cost {
		cost[i] = make([]float64, m)
		for j := range cost[i] {
			best := 0.0
			switch {
			case i == 0 && j == 0:
			case i == 0:
				best = cost[0][j-1]
			case j == 0:
				best = cost[i-1][0]
			default:
				best = min(cost[i-1][j-1], cost[i-1][j], cost[i][j-1])
			}
			for c := range width {
				d := a[i*width+c] - b[j*width+c]
				best += d * d
			}
			cost[i][j] = best
		}
	}
	return cost[n-1][m-1]
}

func anyTakes(t *rapid.T) (takes [][]float64, weights []float64, width int) {
	width = rapid.IntRange(1, 3).Draw(t, "width")
	for range rapid.IntRange(1, 4).Draw(t, "takes") {
		take := make([]float64, width*rapid.IntRange(1, 15).Draw(t, "frames"))
		for i := range take {
			take[i] = rapid.Float64Range(-2, 2).Draw(t, "value")
		}
		takes = append(takes, take)
		weights = append(weights, rapid.Float64Range(0.01, 1).Draw(t, "weight"))
	}
	return takes, weights, width
}

// The weighted sum of squared warping distances never grows from one iteration
// to the next (Petitjean et al. 2011, convergence).
func TestAverageConverges(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		takes, weights, width := anyTakes(t)
		before := math.Inf(1)
		for iterations := range 6 {
			b := method.Barycentre{Iterations: iterations, Band: 1}
			average := b.Average(nil, takes[0], takes, weights, width)
			sum := 0.0
			for k, take := range takes {
				sum += weights[k] * warpingDistance(average, take, width)
			}
			if sum > before*(1+1e-9)+1e-12 {
				t.Fatalf("iteration %d: inertia %v after %v", iterations, sum, before)
			}
			before = sum
		}
	})
}

// Takes that are one another at another tempo average to one of them; the
// plain mean would smear.
func TestAverageOfOneMovementAtTwoTempos(t *testing.T) {
	slow, fast := []float64{0, 0, 0, 0, 5, 5, 0, 0}, []float64{0, 5, 0, 0, 0}
	got := method.Barycentre{Iterations: 10, Band: 1}.Average(nil, slow, [][]float64{slow, fast}, []float64{1, 1}, 1)
	if !slices.Equal(got, slow) {
		t.Errorf("average %v, want %v", got, slow)
	}
}

// Without any warping to do it is the weighted mean.
func TestAverageIsTheWeightedMean(t *testing.T) {
	a, b := []float64{0, 0, 10, 1}, []float64{4, 0, 10, 5} // two frames of two channels
	got := method.Barycentre{Iterations: 1, Band: 1}.Average(nil, a, [][]float64{a, b}, []float64{3, 1}, 2)
	if want := []float64{1, 0, 10, 2}; distance(got, want) > 1e-12 {
		t.Errorf("average %v, want %v", got, want)
	}
}

// A take of no weight has no say, and no weights at all leave the start.
func TestAverageWeightless(t *testing.T) {
	a, b := []float64{1, 2, 3}, []float64{7, 8}
	m := method.DefaultBarycentre()
	if got := m.Average(nil, a, [][]float64{a, b}, []float64{1, 0}, 1); !slices.Equal(got, a) {
		t.Errorf("average %v, want %v", got, a)
	}
	if got := m.Average(nil, a, [][]float64{b}, []float64{0}, 1); !slices.Equal(got, a) {
		t.Errorf("average of nothing %v, want the start %v", got, a)
	}
}

// Each value of an average lies within those of the takes, in a band or not,
// and unequal lengths of any ratio find a path through the band.
func TestAverageStaysWithinItsTakes(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		takes, weights, width := anyTakes(t)
		b := method.Barycentre{Iterations: 3, Band: rapid.Float64Range(0.01, 1).Draw(t, "band")}
		got := b.Average(nil, takes[0], takes, weights, width)
		if len(got) != len(takes[0]) {
			t.Fatalf("%d values, want %d", len(got), len(takes[0]))
		}
		for c := range width {
			low, high := math.Inf(1), math.Inf(-1)
			for _, take := range takes {
				for i := c; i < len(take); i += width {
					low, high = min(low, take[i]), max(high, take[i])
				}
			}
			for i := c; i < len(got); i += width {
				if !(got[i] >= low-1e-9 && got[i] <= high+1e-9) {
					t.Fatalf("value %d is %v, outside %v to %v", i, got[i], low, high)
				}
			}
		}
	})
}

// The drawn average is nearer to its source than to another take, since the
// source has half of the weight.
func TestDrawnAverageLeansOnItsSource(t *testing.T) {
	src := stroke(40)
	var others [][]float64
	for k := range 6 {
		other := stroke(30 + 4*k)
		for i := range other.src {
			other.src[i] += (0.5 + 0.1*float64(k)) * float64(1-2*(k%2)) // on either side
		}
		others = append(others, other.src)
	}
	rng := rand.New(rand.NewPCG(1, 1))
	seen := map[float64]bool{}
	for range 30 {
		got := method.DefaultBarycentre().Apply(nil, src.src, others, 3, rng)
		seen[got[0]] = true
		for k, other := range others {
			if near, far := warpingDistance(got, src.src, 3), warpingDistance(got, other, 3); near > far {
				t.Errorf("nearer to take %d (%v) than to the source (%v)", k, far, near)
			}
		}
	}
	if len(seen) < 5 {
		t.Errorf("30 draws gave %d different averages", len(seen))
	}
}
