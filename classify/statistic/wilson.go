// Package statistic holds the statistics of counted errors: intervals for a
// share and for what is computed from resamples, tests for paired differences,
// a correction for several of them, and the threshold at which a detector errs
// alike both ways. Nothing in it is random but what draws from a generator
// handed in.
package statistic

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Wilson returns the score interval, at the given level between 0 and 1, of a
// share observed as share among n: E. B. Wilson, "Probable inference, the law
// of succession, and statistical inference", Journal of the American
// Statistical Association 22 (1927) 209–212. It lies within [0, 1], is never
// empty, and is [0, 1] when n is 0.
func Wilson(share float64, n int, level float64) (low, high float64) {
	return wilson(share, float64(n), level)
}

// wilson is [Wilson] for a number that need not be whole.
func wilson(share, n, level float64) (low, high float64) {
	if n <= 0 {
		return 0, 1
	}
	z := distuv.UnitNormal.Quantile((1 + level) / 2)
	z2 := z * z / n
	centre := share + z2/2
	half := math.Sqrt(z2 * (share*(1-share) + z2/4))
	// Rounding must not push the share itself out at 0 and at n.
	low = max(0, min(share, (centre-half)/(1+z2)))
	high = min(1, max(share, (centre+half)/(1+z2)))
	return low, high
}

// Reduction returns an interval, at the given level, of the relative reduction
// of errors in a paired comparison: of the tests wrong before, kept are the
// share still wrong after; of those right before, caused are the share wrong
// after. The reduction is 1 − kept − caused·right/before, where before and
// right count the tests wrong and right before, as many as are independent of
// each other; before must be above 0.
//
// The two shares are of different tests, and so independent: their Wilson
// intervals are joined as by R. G. Newcombe, "Interval estimation for the
// difference between independent proportions", Statistics in Medicine 17
// (1998) 873–890, method 10, for the weighted sum as by G. Y. Zou, A. Donner,
// "Construction of confidence limits about effect measures", Statistics in
// Medicine 27 (2008) 1693–1702. Unlike that of a bootstrap, the interval
// has a width where no test or every test changes.
func Reduction(kept, before, caused, right, level float64) (low, high float64) {
	keptLow, keptHigh := wilson(kept, before, level)
	causedLow, causedHigh := wilson(caused, right, level)
	weight := right / before
	value := 1 - kept - caused*weight
	low = value - math.Hypot(keptHigh-kept, weight*(causedHigh-caused))
	high = value + math.Hypot(kept-keptLow, weight*(caused-causedLow))
	return low, min(1, high)
}
