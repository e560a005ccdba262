package method

import "math/rand/v2"

// Jitter adds independent normal noise to every value (Um et al. 2017). On a
// take sampled at f Hz it is white up to f/2.
type Jitter struct {
	Deviation float64 // standard deviation, in the unit of the values, ≥ 0
}

// PublishedJitter returns the published setting, 0.05, as a fraction of a
// group's root mean square.
func PublishedJitter() Jitter { return Jitter{Deviation: 0.05} }

// Apply makes one take; see the package's contract.
func (j Jitter) Apply(dst, src []float64, width int, time []float64, rng *rand.Rand) []float64 {
	dst, _ = prepare(dst, src, width, time)
	for i := range dst {
		dst[i] += j.Deviation * rng.NormFloat64()
	}
	return dst
}
