package statistic_test

import (
	"math"
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

func TestReduction(t *testing.T) {
	// With as many tests right as wrong before, the reduction is a difference of
	// two independent shares. Newcombe, Statistics in Medicine 17 (1998)
	// 873–890, method 10 (memory), recomputed by hand: 9 of 10 against 3 of 10,
	// 6 of 7 against 2 of 7.
	for _, c := range []struct{ mended, caused, n, low, high float64 }{
		{9, 3, 10, 0.1705, 0.8090},
		{6, 2, 7, 0.0582, 0.8062},
	} {
		low, high := statistic.Reduction(1-c.mended/c.n, c.n, c.caused/c.n, c.n, 0.95)
		if math.Abs(low-c.low) > shareTolerance || math.Abs(high-c.high) > shareTolerance {
			t.Errorf("%g mended and %g caused of %g: interval %.4f to %.4f, want %.4f to %.4f", c.mended, c.caused, c.n, low, high, c.low, c.high)
		}
	}
}

func TestReductionHoldsItself(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		before, right := rapid.IntRange(1, 500).Draw(t, "before"), rapid.IntRange(0, 500).Draw(t, "right")
		kept, caused := rapid.IntRange(0, before).Draw(t, "kept"), rapid.IntRange(0, right).Draw(t, "caused")
		share := 0.0
		if right > 0 {
			share = float64(caused) / float64(right)
		}
		low, high := statistic.Reduction(float64(kept)/float64(before), float64(before), share, float64(right), 0.95)
		value := 1 - float64(kept+caused)/float64(before)
		if !(low <= value+1e-12 && value <= high+1e-12 && high <= 1 && low < high) {
			t.Fatalf("reduction %g lies in %g to %g", value, low, high)
		}
	})
}
