package realism

import (
	"math"
	"slices"
)

// Wasserstein returns the Wasserstein-1 distance of two samples, in their unit:
// the area between their empirical distribution functions, the least work of
// moving one onto the other (L. N. Vaserstein, "Markov processes over
// denumerable products of spaces", Problems of Information Transmission 5
// (1969) 64–72). It is NaN when one is empty or holds a NaN.
func Wasserstein(a, b []float64) float64 {
	if len(a) == 0 || len(b) == 0 {
		return math.NaN()
	}
	a, b = slices.Sorted(slices.Values(a)), slices.Sorted(slices.Values(b))
	if math.IsNaN(a[0]) || math.IsNaN(b[0]) { // NaN sorts first
		return math.NaN()
	}
	area, at := 0.0, min(a[0], b[0])
	for i, j := 0, 0; i < len(a) || j < len(b); {
		var next float64
		switch {
		case j == len(b) || i < len(a) && a[i] <= b[j]:
			next = a[i]
		default:
			next = b[j]
		}
		if step := next - at; step > 0 {
			area += step * math.Abs(float64(i)/float64(len(a))-float64(j)/float64(len(b)))
		}
		at = next
		for i < len(a) && a[i] == next {
			i++
		}
		for j < len(b) && b[j] == next {
			j++
		}
	}
	return area
}
