package template

import (
	"math"
	"slices"

	"strandwise/channels"
)

// scaled returns the sets of channels that share a scale.
func (n Normalise) scaled(l *channels.Layout) [][]int {
	switch n {
	case ZScore:
		return slices.Collect(slices.Chunk(every(l), 1))
	case GroupScale:
		return groupsOf(l)
	}
	return nil
}

// scale normalises some channels of frame-major data in place: each to mean 0,
// and all of them by one factor to a mean variance of 1. Channels of which none
// changes become zeros.
func scale(channels []int, data []float64, width int) {
	squares, changes := 0.0, false
	for _, c := range channels {
		s, moved := centre(c, data, width)
		squares, changes = squares+s, changes || moved
	}
	sd := math.Sqrt(squares / float64(len(data)/width*len(channels)))
	for _, c := range channels {
		for i := c; i < len(data); i += width {
			if changes && sd > 0 {
				data[i] /= sd
			} else {
				data[i] = 0
			}
		}
	}
}

// centre takes the mean off a channel, and returns the sum of squares of what
// is left and whether the channel changes at all. One that does not becomes
// zeros, whatever rounding makes of its mean.
func centre(c int, data []float64, width int) (squares float64, changes bool) {
	sum, first := 0.0, data[c]
	for i := c; i < len(data); i += width {
		sum += data[i]
		changes = changes || data[i] != first
	}
	mean := sum / float64(len(data)/width)
	if !changes {
		mean = first
	}
	for i := c; i < len(data); i += width {
		data[i] -= mean
		squares += data[i] * data[i]
	}
	return squares, changes
}
