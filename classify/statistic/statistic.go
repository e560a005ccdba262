// Package statistic holds the statistics of counted errors: an interval for a
// share and a test for a paired difference.
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
	if n <= 0 {
		return 0, 1
	}
	z := distuv.UnitNormal.Quantile((1 + level) / 2)
	z2 := z * z / float64(n)
	centre := share + z2/2
	half := math.Sqrt(z2 * (share*(1-share) + z2/4))
	// Rounding must not push the share itself out at 0 and at n.
	low = max(0, min(share, (centre-half)/(1+z2)))
	high = min(1, max(share, (centre+half)/(1+z2)))
	return low, high
}

// McNemar returns the exact two-sided p-value of a paired comparison in which
// only one side was wrong b times and only the other c times: the chance, were
// both sides equally good, of a split of the b + c at least as uneven. It is 1
// when b and c are equal, none at all included. Q. McNemar, "Note on the
// sampling error of the difference between correlated proportions",
// Psychometrika 12 (1947) 153–157, with the binomial distribution in place of
// its approximation.
func McNemar(b, c int) float64 {
	if b == c {
		return 1
	}
	tail := distuv.Binomial{N: float64(b + c), P: 0.5}
	return min(1, 2*tail.CDF(float64(min(b, c))))
}
