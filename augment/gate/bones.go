package gate

import (
	"math"

	"strandwise/channels"
)

// length returns the distance of a bone's ends in one frame.
func (b Bone) length(frame []float64) float64 {
	sum := 0.0
	for i, c := range b.From {
		d := frame[c] - frame[b.To[i]]
		sum += d * d
	}
	return math.Sqrt(sum)
}

// settled returns the bone with its length taken from a take where none is
// given.
func (b Bone) settled(t *channels.Take) Bone {
	if b.Length > 0 {
		return b
	}
	for i := range t.Frames() {
		b.Length += b.length(t.Frame(i)) / float64(t.Frames())
	}
	return b
}

// deviation returns the largest relative deviation from the bone's length in
// any frame, 0 for a bone without length.
func (b Bone) deviation(t *channels.Take) float64 {
	if b.Length == 0 {
		return 0
	}
	largest := 0.0
	for i := range t.Frames() {
		largest = max(largest, math.Abs(b.length(t.Frame(i))/b.Length-1))
	}
	return largest
}
