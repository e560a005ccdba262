package group

import "slices"

// appendShape appends, for each take, how much larger its movement is than the
// mean of the label's takes once all are aligned: the deviation from the mean
// take in the direction in which the mean take is away from its middle, against
// each cosine, in parts of the mean take's size.
func appendShape(dst []float64, values [][]float64, maps [][]float64, width int) []float64 {
	n := len(maps[0])
	aligned := make([][]float64, len(values))
	mean := make([]float64, n*width)
	for i, v := range values {
		aligned[i] = readAt(v, width, maps[i])
		for k, x := range aligned[i] {
			mean[k] += x / float64(len(values))
		}
	}
	away := fromMiddle(mean, width)
	size := 0.0
	if !stands(mean, width) {
		for _, x := range away {
			size += x * x
		}
	}
	for _, v := range aligned {
		for k := range waves {
			sum := 0.0
			for f := range n {
				w := wave(k, float64(f)/float64(n-1))
				for c := f * width; c < (f+1)*width; c++ {
					sum += (v[c] - mean[c]) * away[c] * w
				}
			}
			dst = append(dst, sum*inverse(size))
		}
	}
	return dst
}

// inverse returns 1/v, or 0 for 0.
func inverse(v float64) float64 {
	if v > 0 {
		return 1 / v
	}
	return 0
}

// readAt reads values at the given frames, straight between frames.
func readAt(v []float64, width int, at []float64) []float64 {
	out := make([]float64, len(at)*width)
	last := len(v)/width - 1
	for f, x := range at {
		i := min(int(x), last-1)
		p := x - float64(i)
		a, b := v[i*width:][:width], v[(i+1)*width:][:width]
		for c := range width {
			out[f*width+c] = a[c] + p*(b[c]-a[c])
		}
	}
	return out
}

// fromMiddle returns the values with each channel's mean removed.
func fromMiddle(v []float64, width int) []float64 {
	out := slices.Clone(v)
	for c := range width {
		mean := 0.0
		for i := c; i < len(v); i += width {
			mean += v[i]
		}
		mean *= float64(width) / float64(len(v))
		for i := c; i < len(v); i += width {
			out[i] -= mean
		}
	}
	return out
}
