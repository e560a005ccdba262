package report

import (
	"math"
	"slices"

	"strandwise/channels"
)

// scaled returns the values of takes with their groups scaled alike.
func scaled(takes []*channels.Take, scales *channels.Scales) [][]float64 {
	var out [][]float64
	for _, t := range takes {
		out = append(out, scales.Apply(t))
	}
	return out
}

// toMedoid returns the distances to the medoid of the recorded points, of the
// recorded ones but itself and of the synthetic ones: the root mean square
// difference of values. Fewer than three recorded points have no middle worth
// the name, and give none.
func toMedoid(recorded, synthetic [][]float64) (near, far []float64) {
	if len(recorded) < 3 {
		return nil, nil
	}
	centre, least := 0, math.Inf(1)
	for i, p := range recorded {
		sum := 0.0
		for _, q := range recorded {
			sum += apart(p, q)
		}
		if sum < least {
			centre, least = i, sum
		}
	}
	for i, p := range recorded {
		if i != centre {
			near = append(near, apart(p, recorded[centre]))
		}
	}
	for _, p := range synthetic {
		far = append(far, apart(p, recorded[centre]))
	}
	return near, far
}

// apart is the root mean square difference of two points.
func apart(a, b []float64) float64 {
	sum := 0.0
	for i, v := range a {
		sum += (v - b[i]) * (v - b[i])
	}
	return math.Sqrt(sum / float64(len(a)))
}

// Wasserstein returns the Wasserstein-1 distance of two samples, in their unit:
// the area between their empirical distribution functions (L. N. Vaserstein,
// "Markov processes over denumerable products of spaces", Problems of
// Information Transmission 5 (1969) 64–72). It is NaN when one is empty or holds
// a NaN.
func Wasserstein(a, b []float64) float64 {
	if len(a) == 0 || len(b) == 0 || slices.ContainsFunc(append(slices.Clone(a), b...), math.IsNaN) {
		return math.NaN()
	}
	a, b = slices.Sorted(slices.Values(a)), slices.Sorted(slices.Values(b))
	area, at, i, j := 0.0, math.Min(a[0], b[0]), 0, 0
	for i < len(a) || j < len(b) {
		next := math.Inf(1)
		if i < len(a) {
			next = a[i]
		}
		if j < len(b) {
			next = min(next, b[j])
		}
		if gap := math.Abs(float64(i)/float64(len(a)) - float64(j)/float64(len(b))); gap > 0 {
			area += (next - at) * gap
		}
		at = next
		for i < len(a) && a[i] == at {
			i++
		}
		for j < len(b) && b[j] == at {
			j++
		}
	}
	return area
}
