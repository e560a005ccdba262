package template

import "math"

// stretch is the number of values summed between two looks at the bound.
const stretch = 64

// squares returns the sum of squared differences of a and b, which have one
// length, or any value above bound as soon as the sum is above it. Four sums
// run side by side so that no addition waits for the one before.
func squares(a, b []float64, bound float64) float64 {
	var s0, s1, s2, s3 float64
	b = b[:len(a)]
	for len(a) >= stretch {
		x, y := a[:stretch], b[:stretch]
		for i := 0; i+4 <= stretch; i += 4 {
			e0, e1, e2, e3 := x[i]-y[i], x[i+1]-y[i+1], x[i+2]-y[i+2], x[i+3]-y[i+3]
			s0 += e0 * e0
			s1 += e1 * e1
			s2 += e2 * e2
			s3 += e3 * e3
		}
		if s0+s1+(s2+s3) > bound {
			return math.Inf(1)
		}
		a, b = a[stretch:], b[stretch:]
	}
	for i, v := range a {
		s0 += (v - b[i]) * (v - b[i])
	}
	return s0 + s1 + (s2 + s3)
}
