package path

import (
	"math"
	"math/rand/v2"
)

// MaxSpread bounds the variance of an interval draw: U(1−√(3v), 1+√(3v)) must
// stay positive, or the path would run backwards.
const MaxSpread = 1.0 / 3

// Intervals fills dst with independent draws from U(1−√(3v), 1+√(3v)), which
// has mean 1 and variance v, 0 ≤ v < [MaxSpread], and returns it.
func Intervals(dst []float64, v float64, rng *rand.Rand) []float64 {
	half := math.Sqrt(3 * v)
	for i := range dst {
		dst[i] = 1 + half*(2*rng.Float64()-1)
	}
	return dst
}

// Gaussians fills dst with independent standard normal draws and returns it.
func Gaussians(dst []float64, rng *rand.Rand) []float64 {
	for i := range dst {
		dst[i] = rng.NormFloat64()
	}
	return dst
}

// CopulaIntervals turns standard normal draws into interval draws of variance v
// in place and returns them: 1 + √(3v)·(2Φ(z) − 1), distributed as in
// [Intervals]. Draws that correlate in the normal scale give intervals tied by
// a Gaussian copula.
func CopulaIntervals(z []float64, v float64) []float64 {
	half := math.Sqrt(3 * v)
	for i, x := range z {
		z[i] = 1 + half*(math.Erfc(-x/math.Sqrt2)-1)
	}
	return z
}

// Fractions writes into dst the cumulated fractions of the intervals: dst[0]
// = 0, rising to dst[n−1] = 1 exactly. dst has one element more than
// intervals.
func Fractions(dst, intervals []float64) []float64 {
	if len(dst) != len(intervals)+1 {
		panic("path: fractions need one element more than intervals")
	}
	sum := 0.0
	for i, x := range intervals {
		dst[i] = sum
		sum += x
	}
	for i := range intervals {
		dst[i] /= sum
	}
	dst[len(intervals)] = 1
	return dst
}
