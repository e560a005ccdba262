package statistic

import (
	"cmp"
	"slices"

	"gonum.org/v1/gonum/stat/distuv"
)

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

// McNemarChiSquare returns McNemar's statistic (b − c)² / (b + c), without a
// correction for continuity, of which the paper takes the distribution to be
// chi-square with one degree of freedom. It is 0 when b and c are 0. [McNemar]
// needs no such approximation.
func McNemarChiSquare(b, c int) float64 {
	if b == c {
		return 0
	}
	d := float64(b - c)
	return d * d / float64(b+c)
}

// SignFlip returns the exact two-sided p-value of paired differences: the
// chance, were each difference as likely with the other sign, of a sum at
// least as far from 0. It is 1 when the sum is 0. With differences of 1 and −1
// it is [McNemar]. The test is R. A. Fisher's, The Design of Experiments (1935)
// section 21.
//
// All 2ⁿ sums are counted by adding one difference at a time to the
// distribution of their sum, as in M. Pagano, D. Tritchler, "On obtaining
// permutation distributions in polynomial time", Journal of the American
// Statistical Association 78 (1983) 435–440. It takes time in proportion to
// the number of differences times the sum of their sizes.
func SignFlip(differences []int) float64 {
	sizes, observed := sizesOf(differences)
	if observed == 0 {
		return 1
	}
	// chance[k] is that of the differences taken positive adding up to k; all
	// the others are negative, so the sum is then k − (total − k).
	chance, total := []float64{1}, 0
	for _, d := range sizes {
		total += d
		chance = append(chance, make([]float64, d)...)
		for k := total; k >= d; k-- {
			chance[k] = (chance[k] + chance[k-d]) / 2
		}
		for k := range d {
			chance[k] /= 2
		}
	}
	tail := 0.0
	for _, c := range chance[:(total-observed)/2+1] { // sums of −observed and below
		tail += c
	}
	return min(1, 2*tail)
}

// sizesOf returns the sizes of the differences that are not 0, ascending, with
// their greatest common divisor divided out, and that of their sum.
func sizesOf(differences []int) (sizes []int, sum int) {
	common := 0
	for _, d := range differences {
		sum += d
		if d != 0 {
			sizes = append(sizes, max(d, -d))
			common = divisor(common, max(d, -d))
		}
	}
	for i := range sizes {
		sizes[i] /= common
	}
	slices.Sort(sizes) // keeps the distribution short as long as can be
	return sizes, max(sum, -sum) / max(common, 1)
}

// divisor returns the greatest common divisor of a and b, by Euclid.
func divisor(a, b int) int {
	for b != 0 {
		a, b = b, a%b
	}
	return a
}

// Holm returns the p-values of several tests corrected so that the chance of
// any wrong finding among them stays at the level of one: each is multiplied by
// the number of those not smaller, and none is below a smaller one's. S. Holm,
// "A simple sequentially rejective multiple test procedure", Scandinavian
// Journal of Statistics 6 (1979) 65–70. The order is kept.
func Holm(p []float64) []float64 {
	order := make([]int, len(p))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(p[a], p[b]) })
	out, least := make([]float64, len(p)), 0.0
	for rank, i := range order {
		least = max(least, min(1, p[i]*float64(len(p)-rank)))
		out[i] = least
	}
	return out
}
