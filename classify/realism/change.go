package realism

import "math"

// Change is the mean of paired differences, synthetic less recorded or one
// maker less another, over source takes.
type Change struct {
	Mean  float64 `json:"change"`
	Error float64 `json:"change_error"` // its standard error over source takes; 0 of one
}

// change returns the mean of differences, NaN left out, and their number.
func change(differences []float64) (Change, int) {
	var kept []float64
	for _, d := range differences {
		if !math.IsNaN(d) {
			kept = append(kept, d)
		}
	}
	n := float64(len(kept))
	if n == 0 {
		return Change{}, 0
	}
	c := Change{Mean: mean(kept)}
	if n > 1 {
		for _, d := range kept {
			c.Error += (d - c.Mean) * (d - c.Mean)
		}
		c.Error = math.Sqrt(c.Error / (n - 1) / n)
	}
	return c, len(kept)
}
