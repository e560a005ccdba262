package method

import (
	"math"
	"math/rand/v2"
)

// NoiseField displaces every point of a take by smooth gradient noise, a field
// of its own per channel, as the sum of octaves: each octave has twice the
// frequency of the one before and its size times Persistence (Perlin 1985).
//
// The field lies over the take's time, or over the space the path runs through
// (one to three channels), where places met twice are displaced alike. Its
// lattice is shifted by a drawn fraction of a cell, so that no instant is
// always one of the noise's zeros.
type NoiseField struct {
	Size        float64 // root mean square of the displacement per channel, in the unit of the values, ≥ 0
	Cells       float64 // cells of the first octave over the take's duration, or over the longest side of the path's box, > 0
	Octaves     int     // ≥ 1
	Persistence float64 // 0 to 1
	OverSpace   bool    // the field lies over space and not over time
}

// DefaultNoiseField returns a field over time of three octaves from four cells
// on and half as large from one to the next, a tenth of the root mean square
// of the values in size. The source gives the noise and not its size on
// movements; the size is this package's.
func DefaultNoiseField() NoiseField {
	return NoiseField{Size: 0.1, Cells: 4, Octaves: 3, Persistence: 0.5}
}

// Apply makes one take; see the package's contract.
func (f NoiseField) Apply(dst, src []float64, width int, time []float64, rng *rand.Rand) []float64 {
	if f.Octaves < 1 || !(f.Cells > 0) {
		panic("method: a noise field needs an octave and a number of cells")
	}
	dst, n := prepare(dst, src, width, time)
	places, dimensions := f.places(src, width, time)
	place := make([]float64, dimensions)
	for c := range width {
		frequency, size := f.Cells, f.Size/f.octavesRMS()
		for range f.Octaves {
			noise := NewNoise(dimensions, rng)
			shift := rng.Float64()
			for i := range n {
				for d := range place {
					place[d] = frequency*places[i*dimensions+d] + shift
				}
				dst[i*width+c] += size * noise.At(place...)
			}
			frequency, size = 2*frequency, size*f.Persistence
		}
	}
	return dst
}

// octavesRMS returns the root mean square of the sum of the octaves, the first
// counted as 1.
func (f NoiseField) octavesRMS() float64 {
	square, size := 0.0, 1.0
	for range f.Octaves {
		square += size * size
		size *= f.Persistence
	}
	return math.Sqrt(square)
}

// places returns where each frame lies in the field, in units of the take's
// duration or of the longest side of its box, and in how many dimensions.
func (f NoiseField) places(src []float64, width int, time []float64) (places []float64, dimensions int) {
	if !f.OverSpace {
		return normalised(time, 1), 1
	}
	if width > maxDimensions {
		panic("method: a noise field over space takes one to three channels")
	}
	return normalised(src, width), width
}

// normalised returns values counted from each channel's least one, in units of
// the largest range of a channel. Values that never change give zeros.
func normalised(values []float64, width int) []float64 {
	out := make([]float64, len(values))
	largest := 0.0
	for c := range width {
		low, high := math.Inf(1), math.Inf(-1)
		for i := c; i < len(values); i += width {
			low, high = min(low, values[i]), max(high, values[i])
		}
		for i := c; i < len(values); i += width {
			out[i] = values[i] - low
		}
		largest = max(largest, high-low)
	}
	for i := range out {
		if largest > 0 {
			out[i] /= largest
		}
	}
	return out
}
