package statistic_test

import (
	"fmt"
	"math"
	"math/big"
	"testing"

	"pgregory.net/rapid"

	"strandwise/classify/statistic"
)

// shareTolerance is half a unit of the four decimals in which the intervals
// are printed in their source.
const shareTolerance = 0.5e-4

func TestWilson(t *testing.T) {
	// Newcombe, Statistics in Medicine 17 (1998) 857–872, recomputed from the
	// formula.
	for _, c := range []struct {
		errors, n int
		low, high float64
	}{
		{81, 263, 0.2553, 0.3662},
		{15, 148, 0.0624, 0.1605},
		{0, 20, 0, 0.1611},
		{1, 29, 0.0061, 0.1718},
	} {
		low, high := statistic.Wilson(float64(c.errors)/float64(c.n), c.n, 0.95)
		if math.Abs(low-c.low) > shareTolerance || math.Abs(high-c.high) > shareTolerance {
			t.Errorf("%d of %d: interval %.4f to %.4f, want %.4f to %.4f", c.errors, c.n, low, high, c.low, c.high)
		}
	}
}

func TestWilsonOfNothing(t *testing.T) {
	if low, high := statistic.Wilson(0, 0, 0.95); low != 0 || high != 1 {
		t.Errorf("interval of 0 of 0 is %g to %g, want 0 to 1", low, high)
	}
}

func TestWilsonHoldsTheShare(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 5000).Draw(t, "n")
		share := float64(rapid.IntRange(0, n).Draw(t, "errors")) / float64(n)
		low, high := statistic.Wilson(share, n, 0.95)
		if !(0 <= low && low <= share && share <= high && high <= 1) {
			t.Fatalf("share %g of %d lies outside %g to %g", share, n, low, high)
		}
		if l, h := statistic.Wilson(1-share, n, 0.95); math.Abs(l-(1-high)) > 1e-12 || math.Abs(h-(1-low)) > 1e-12 {
			t.Fatalf("interval of the opposite share %g is %g to %g, want %g to %g", 1-share, l, h, 1-high, 1-low)
		}
	})
}

func TestMcNemar(t *testing.T) {
	const relative = 1e-3 // the first value has four figures
	for _, c := range []struct {
		b, c int
		p    float64
	}{
		// Agresti, Categorical Data Analysis, approval ratings table (memory),
		// recomputed with scipy.stats.binomtest.
		{86, 150, 3.716e-5},
		{150, 86, 3.716e-5},
		// Binomial, exact: 2·(1 + 10)/2¹⁰.
		{1, 9, 0.021484375},
		{0, 0, 1},
		{4, 4, 1},
		{0, 1, 1},
	} {
		if p := statistic.McNemar(c.b, c.c); math.Abs(p/c.p-1) > relative {
			t.Errorf("McNemar(%d, %d) = %g, want %g", c.b, c.c, p, c.p)
		}
	}
	if p := statistic.McNemar(1, 9); math.Abs(p-0.021484375) > 1e-15 {
		t.Errorf("McNemar(1, 9) = %v, want 0.021484375", p)
	}
}

// exactMcNemar adds up binomial coefficients in whole numbers.
func exactMcNemar(b, c int) float64 {
	n, sum := int64(b+c), new(big.Int)
	for k := range int64(min(b, c)) + 1 {
		sum.Add(sum, new(big.Int).Binomial(n, k))
	}
	p, _ := new(big.Rat).SetFrac(sum, new(big.Int).Lsh(big.NewInt(1), uint(n))).Float64()
	return min(1, 2*p)
}

func TestMcNemarAgainstWholeNumbers(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		b, c := rapid.IntRange(0, 300).Draw(t, "b"), rapid.IntRange(0, 300).Draw(t, "c")
		if got, want := statistic.McNemar(b, c), exactMcNemar(b, c); math.Abs(got-want) > 1e-10*want {
			t.Fatalf("McNemar(%d, %d) = %g, exactly %g", b, c, got, want)
		}
	})
}

func ExampleMcNemar() {
	// Synthetic takes mended 9 of the errors and caused 1 new one.
	fmt.Printf("p = %.4f\n", statistic.McNemar(9, 1))
	// Output: p = 0.0215
}
