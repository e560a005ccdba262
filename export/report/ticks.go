package report

import (
	"math"
	"slices"
)

// ticks returns round values between low and high, about n of them, at least
// one: multiples of 1, 2 or 5 times a power of ten.
func ticks(low, high float64, n int) []float64 {
	if !(high > low) || !finite(high-low) {
		return []float64{low}
	}
	rough := (high - low) / float64(n)
	unit := math.Pow(10, math.Floor(math.Log10(rough)))
	size := 10 * unit
	for _, m := range []float64{1, 2, 5} {
		if m*unit >= 0.7*rough {
			size = m * unit
			break
		}
	}
	var out []float64
	for k := math.Ceil(low/size - 1e-9); k*size <= high+1e-9*size && len(out) < 4*n; k++ {
		out = append(out, k*size+0)
	}
	if len(out) == 0 {
		out = []float64{low}
	}
	return out
}

// wholeTicks returns the whole ones among the ticks of an axis of counts.
func wholeTicks(low, high float64) []float64 {
	return slices.DeleteFunc(ticks(low, high, 5), func(v float64) bool { return v != math.Round(v) })
}

// extent is the range of values seen.
type extent struct {
	low, high float64
	some      bool
}

// add widens the range to hold the finite ones among the values.
func (e *extent) add(values ...float64) {
	for _, v := range values {
		switch {
		case !finite(v):
		case !e.some:
			e.low, e.high, e.some = v, v, true
		default:
			e.low, e.high = min(e.low, v), max(e.high, v)
		}
	}
}

// padded returns the range with a margin of a share of its width, and of some
// width in any case.
func (e extent) padded(share float64) (low, high float64) {
	if !e.some {
		return 0, 1
	}
	width := e.high - e.low
	if width == 0 {
		width = max(math.Abs(e.high), 1)
		share = max(share, 0.5)
	}
	return e.low - share*width, e.high + share*width
}
