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

// CoupledIntervals fills dst with interval draws of variance v that follow
// the shared normal draws with correlation ρ, by a Gaussian copula: with z the
// shared and e the own draws,
//
//	dst[i] = 1 + √(3v)·(2Φ(√ρ·z[i] + √(1−ρ)·e[i]) − 1)
//
// Each dst[i] alone is distributed as in [Intervals]. Two groups drawn with
// the same z correlate by ρ in the normal scale; with ρ = 1 they are equal.
// dst may be shared or own itself.
func CoupledIntervals(dst []float64, v, rho float64, shared, own []float64) []float64 {
	if len(shared) != len(dst) || len(own) != len(dst) {
		panic("path: shared and own draws differ in number from the intervals")
	}
	half, a, b := math.Sqrt(3*v), math.Sqrt(rho), math.Sqrt(1-rho)
	for i := range dst {
		z := a*shared[i] + b*own[i]
		dst[i] = 1 + half*(math.Erfc(-z/math.Sqrt2)-1)
	}
	return dst
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
