package convolution

import (
	"math"

	"strandwise/channels"
)

// plainTake reads a take as the package comment says, one channel after the
// other.
func plainTake(o Options, t *channels.Take) [][]float64 {
	out := make([][]float64, t.Width())
	first, last := t.Time[0], t.Time[t.Frames()-1]
	for c := range out {
		for k := range o.Length {
			at := first + (last-first)*float64(k)/float64(o.Length-1)
			i := 0
			for i+2 < t.Frames() && t.Time[i+1] <= at {
				i++
			}
			u := (at - t.Time[i]) / (t.Time[i+1] - t.Time[i])
			out[c] = append(out[c], (1-u)*t.Frame(i)[c]+u*t.Frame(i + 1)[c])
		}
		if o.Normalise == ZScore {
			plainZScore(out[c])
		}
	}
	return out
}

func plainZScore(x []float64) {
	n, mean, variance := float64(len(x)), 0.0, 0.0
	least, most := math.Inf(1), math.Inf(-1)
	for _, v := range x {
		mean += v / n
		least, most = min(least, v), max(most, v)
	}
	for _, v := range x {
		variance += (v - mean) * (v - mean) / n
	}
	for i, v := range x {
		x[i] = (v - mean) / math.Sqrt(variance)
		if most-least < 1e-12 { // alike but for rounding
			x[i] = 0
		}
	}
}

// plainResponses computes the responses of a kernel from their definition;
// frames outside the take are zero.
func plainResponses(k kernel, x [][]float64) []float64 {
	frames := len(x[0])
	from, to := 0, frames-(k.taps-1)*k.dilation
	if k.padded {
		from, to = -(k.taps-1)*k.dilation/2, frames-(k.taps-1)*k.dilation/2
	}
	var out []float64
	for i := from; i < to; i++ {
		z := k.bias
		for n, c := range k.channels {
			for j := range k.taps {
				if at := i + j*k.dilation; at >= 0 && at < frames {
					z += k.weights[n*k.taps+j] * x[c][at]
				}
			}
		}
		out = append(out, z)
	}
	return out
}
