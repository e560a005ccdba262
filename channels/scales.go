package channels

import (
	"math"
	"slices"
)

// Scales measures how large each channel group's movement is over many takes:
// the root mean square of its values with each take's mean removed, pooled.
// Divided by it, groups of different units can share one path. The zero value
// is ready for use. Takes must share their channels and groups.
type Scales struct {
	squares []float64 // per group: sum over takes, frames and channels
	counts  []float64
}

// Add counts one take in.
func (s *Scales) Add(t *Take) {
	if s.squares == nil {
		s.squares = make([]float64, len(t.Layout.Groups))
		s.counts = make([]float64, len(t.Layout.Groups))
	}
	for g, group := range t.Layout.Groups {
		for _, c := range group.Channels {
			s.squares[g] += centredSquares(t, c)
		}
		s.counts[g] += float64(t.Frames() * len(group.Channels))
	}
}

// RMS returns the measured size of group g in the unit of its channels. A
// group that never moved has size 1, so that it can be divided by.
func (s *Scales) RMS(g int) float64 {
	if g >= len(s.squares) {
		return 1
	}
	if rms := math.Sqrt(s.squares[g] / s.counts[g]); rms > 0 {
		return rms
	}
	return 1
}

// Apply returns the take's values, frames × channels, with each group divided
// by its size, so that groups of different units weigh alike.
func (s *Scales) Apply(t *Take) []float64 {
	out := slices.Clone(t.Data)
	for g, group := range t.Layout.Groups {
		multiply(out, t.Width(), group.Channels, 1/s.RMS(g))
	}
	return out
}

// Undo multiplies values, frames × channels, by the sizes of their groups in
// place.
func (s *Scales) Undo(values []float64, l *Layout) {
	for g, group := range l.Groups {
		multiply(values, len(l.Channels), group.Channels, s.RMS(g))
	}
}

func multiply(values []float64, w int, list []int, factor float64) {
	for i := 0; i < len(values); i += w {
		for _, c := range list {
			values[i+c] *= factor
		}
	}
}

// centredSquares returns the sum of squares of one channel about its mean. It
// counts from the first frame's value, so that a channel that never moves
// gives 0 exactly, whatever its value.
func centredSquares(t *Take, c int) float64 {
	w, first := t.Width(), t.Data[c]
	mean := 0.0
	for i := c; i < len(t.Data); i += w {
		mean += t.Data[i] - first
	}
	mean /= float64(t.Frames())
	sum := 0.0
	for i := c; i < len(t.Data); i += w {
		d := t.Data[i] - first - mean
		sum += d * d
	}
	return sum
}
