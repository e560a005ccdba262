package method

import (
	"math/rand/v2"

	"gonum.org/v1/gonum/interp"
)

// curve fills dst with a smooth random curve about 1 over a take of n frames:
// a natural cubic spline through knots+2 normal draws of mean 1 and the given
// standard deviation, at evenly spaced frames from the first to the last.
func curve(dst []float64, deviation float64, knots int, rng *rand.Rand) {
	n := len(dst)
	at, value := make([]float64, knots+2), make([]float64, knots+2)
	for k := range at {
		at[k] = float64(k) / float64(knots+1)
		value[k] = 1 + deviation*rng.NormFloat64()
	}
	var spline interp.NaturalCubic
	if err := spline.Fit(at, value); err != nil {
		panic("method: no spline through evenly spaced knots: " + err.Error())
	}
	for i := range dst {
		dst[i] = spline.Predict(float64(i) / float64(max(n-1, 1)))
	}
}

// checkKnots panics for a number of inner knots that no spline goes through.
func checkKnots(knots int) {
	if knots < 1 {
		panic("method: a smooth curve needs at least one knot between the ends")
	}
}
