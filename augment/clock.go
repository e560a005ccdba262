package augment

import (
	"math"
	"slices"
)

// unevenStep is the relative deviation of a frame's step from the median step
// above which a clock counts as uneven.
const unevenStep = 1e-6

// maxFilling bounds the frames of an even clock, as a multiple of those of the
// uneven one: a clock of short bursts and long gaps would ask for frames
// without end.
const maxFilling = 8

// evenClock returns the clock itself when its steps are even, else one with
// even steps from the same first to the same last instant. It has as many
// frames as the clock would have without its gaps: a step counts as the whole
// number of median steps it comes nearest to.
func evenClock(clock []float64) []float64 {
	n := len(clock)
	steps := make([]float64, n-1)
	for i := range steps {
		steps[i] = clock[i+1] - clock[i]
	}
	slices.Sort(steps)
	median := steps[len(steps)/2]
	if median-steps[0] <= unevenStep*median && steps[n-2]-median <= unevenStep*median {
		return clock
	}
	last := 0
	for _, step := range steps {
		last += int(math.Round(min(max(step/median, 1), float64(maxFilling*n))))
	}
	last = min(last, maxFilling*n)
	even := make([]float64, last+1)
	for i := range even {
		even[i] = clock[0] + (clock[n-1]-clock[0])*float64(i)/float64(last)
	}
	even[last] = clock[n-1]
	return even
}
