package method

import "math/rand/v2"

// Scaling multiplies each channel by one factor, drawn from a normal
// distribution about 1 (Um et al. 2017).
type Scaling struct {
	Deviation float64 // standard deviation of the factor, without unit, ≥ 0
	AboutMean bool    // scale about the take's mean, as positions need, and not about zero, as published
}

// PublishedScaling returns the published setting: 0.1, about zero.
func PublishedScaling() Scaling { return Scaling{Deviation: 0.1} }

// Apply makes one take; see the package's contract.
func (s Scaling) Apply(dst, src []float64, width int, time []float64, rng *rand.Rand) []float64 {
	dst, _ = prepare(dst, src, width, time)
	m := centre(src, width, s.AboutMean)
	for c := range width {
		growth := s.Deviation * rng.NormFloat64()
		for i := c; i < len(dst); i += width {
			dst[i] += growth * (src[i] - m[c])
		}
	}
	return dst
}
