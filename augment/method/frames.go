package method

import (
	"math"
	"slices"

	"strandwise/augment/path"
)

// prepare checks the sizes of a call and returns the destination, holding a
// copy of the source, and the number of frames.
func prepare(dst, src []float64, width int, time []float64) ([]float64, int) {
	if width < 1 || len(src) != width*len(time) {
		panic("method: the values are not one frame of the given width per instant")
	}
	if dst == nil {
		return slices.Clone(src), len(time)
	}
	if len(dst) != len(src) {
		panic("method: destination and source differ in size")
	}
	copy(dst, src)
	return dst, len(time)
}

// readAt fills dst with the values of src at the given instants, one per
// frame, by the cubic reading of [path.Samples].
func readAt(dst, src []float64, width int, time, instants []float64) {
	samples := path.Samples{Time: time, Values: src, Width: width}
	list := make([]int, width)
	for c := range list {
		list[c] = c
	}
	for i, t := range instants {
		samples.At(dst[i*width:(i+1)*width], t, list)
	}
}

// means returns each channel's mean over the take. It counts from the first
// frame, so that a channel that never moves has its own value as mean.
func means(src []float64, width int) []float64 {
	out := make([]float64, width)
	for i, v := range src {
		out[i%width] += v - src[i%width]
	}
	for c := range out {
		out[c] = src[c] + out[c]*float64(width)/float64(len(src))
	}
	return out
}

// centre returns the point about which a take is scaled or turned: its mean,
// or zero.
func centre(src []float64, width int, aboutMean bool) []float64 {
	if aboutMean && len(src) > 0 {
		return means(src, width)
	}
	return make([]float64, width)
}

// distance returns the square of the Euclidean distance of two frames.
func distance(a, b []float64) float64 {
	sum := 0.0
	for c, v := range a {
		d := v - b[c]
		sum += d * d
	}
	return sum
}

// norm returns the length of a vector.
func norm(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x * x
	}
	return math.Sqrt(sum)
}
