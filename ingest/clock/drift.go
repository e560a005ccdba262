package clock

import "math"

// Drift is how the clocks of two sensors of one take run apart.
type Drift struct {
	Start float64 // when the second begins after the first, s
	End   float64 // when the second ends after the first, s
	Ratio float64 // rate of the second over that of the first
	Up    int     // Up/Down is the simple ratio that Ratio is near to,
	Down  int     // both 0 when it is near none
	Parts float64 // Ratio·Down/Up − 1: 1e-6 is a drift of a microsecond a second; 0 without a simple ratio
}

// Rates are taken to be meant as a ratio of whole numbers up to simpleRatio
// that is within nearRatio of theirs.
const (
	simpleRatio = 20
	nearRatio   = 0.02
)

// Between compares the clock of one sensor with that of another. The ratio is
// 0 when either has no rate.
func Between(a, b Report) Drift {
	d := Drift{Start: b.First - a.First, End: b.Last - a.Last}
	if a.Rate() == 0 || b.Rate() == 0 {
		return d
	}
	d.Ratio = b.Rate() / a.Rate()
	up, down := simplest(d.Ratio*(1-nearRatio), d.Ratio*(1+nearRatio))
	if max(up, down) <= simpleRatio {
		d.Up, d.Down = up, down
		d.Parts = d.Ratio*float64(down)/float64(up) - 1
	}
	return d
}

// simplest returns the fraction with the smallest denominator in [low, high],
// for 0 < low < high, by descending the continued fraction of both (Graham,
// Knuth and Patashnik, Concrete Mathematics, 2nd ed. 1994, section 4.5).
func simplest(low, high float64) (up, down int) {
	whole := math.Floor(low)
	switch {
	case whole == low:
		return int(whole), 1
	case whole+1 <= high:
		return int(whole) + 1, 1
	}
	up, down = simplest(1/(high-whole), 1/(low-whole))
	return int(whole)*up + down, up
}
