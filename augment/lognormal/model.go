package lognormal

import (
	"fmt"
	"math"
)

// Model is a path as a sum of strokes.
type Model struct {
	Width   int      // coordinates of the path: 1, 2 or 3
	Start   Vec      // where the path is at the first instant of its clock
	Strokes []Stroke // in order of their peak times
	SNR     float64  // of the reconstruction, decibels; see the package's doc
}

// Path writes the model's positions at the given instants, in seconds, into
// dst, frames × width, and returns it; nil allocates. The path is at Start at
// the first instant.
func (m *Model) Path(dst, time []float64) []float64 {
	if dst == nil {
		dst = make([]float64, len(time)*m.Width)
	}
	if len(dst) != len(time)*m.Width {
		panic("lognormal: destination does not hold one point per instant")
	}
	for i := range dst {
		dst[i] = m.Start[i%m.Width]
	}
	for _, s := range m.Strokes {
		origin := Vec{}
		for i, t := range time {
			at := s.Displacement(t)
			if i == 0 {
				origin = at
			}
			for c := range m.Width {
				dst[i*m.Width+c] += at[c] - origin[c]
			}
		}
	}
	return dst
}

// SNR returns the signal-to-noise ratio of a model path against a recorded one,
// both frames × width, in decibels: 10 log₁₀(Σ|v|²/Σ|v−v̂|²) over the velocities
// from frame to frame. It is +Inf for equal paths, also for two that do not
// move, and −Inf where only the model moves.
func SNR(recorded, model []float64, width int, time []float64) float64 {
	if len(recorded) != len(model) || len(recorded) != width*len(time) {
		panic("lognormal: the paths do not have one point per instant")
	}
	signal, noise := 0.0, 0.0
	for i := width; i < len(recorded); i++ {
		step := time[i/width] - time[i/width-1]
		v := (recorded[i] - recorded[i-width]) / step
		d := v - (model[i]-model[i-width])/step
		signal, noise = signal+v*v, noise+d*d
	}
	return decibels(signal, noise)
}

func decibels(signal, noise float64) float64 {
	if noise == 0 {
		return math.Inf(1)
	}
	return 10 * math.Log10(signal/noise)
}

// PoorFitError says that a path is not well enough described by strokes.
type PoorFitError struct {
	SNR     float64 // reached, decibels
	Floor   float64 // asked for, decibels
	Strokes int     // used
}

// Error tells what was reached, what was asked for and what to do.
func (e *PoorFitError) Error() string {
	return fmt.Sprintf("sigma-lognormal model: %d strokes reach %.1f dB, %.1f dB are asked for; the path is not one of smooth strokes, use another method for it",
		e.Strokes, e.SNR, e.Floor)
}
