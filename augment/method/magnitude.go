package method

import "math/rand/v2"

// MagnitudeWarp multiplies each channel by a smooth curve of its own (Um et
// al. 2017): a cubic spline through normal draws about 1 at evenly spaced
// knots, the ends of the take among them.
type MagnitudeWarp struct {
	Deviation float64 // standard deviation of the factor at a knot, without unit, ≥ 0
	Knots     int     // knots between the ends, ≥ 1
	AboutMean bool    // warp about the take's mean, as positions need, and not about zero, as published
}

// PublishedMagnitudeWarp returns the published setting: deviation 0.2 and four
// knots between the ends, about zero.
func PublishedMagnitudeWarp() MagnitudeWarp { return MagnitudeWarp{Deviation: 0.2, Knots: 4} }

// Apply makes one take; see the package's contract.
func (w MagnitudeWarp) Apply(dst, src []float64, width int, time []float64, rng *rand.Rand) []float64 {
	checkKnots(w.Knots)
	dst, n := prepare(dst, src, width, time)
	m := centre(src, width, w.AboutMean)
	factor := make([]float64, n)
	for c := range width {
		curve(factor, w.Deviation, w.Knots, rng)
		for i, f := range factor {
			dst[i*width+c] += (f - 1) * (src[i*width+c] - m[c])
		}
	}
	return dst
}
