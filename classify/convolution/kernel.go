package convolution

import (
	"math"
	"math/rand/v2"
	"slices"
)

// lengths are the numbers of taps a kernel may have, ascending.
var lengths = [...]int{7, 9, 11}

// kernel is one random kernel, laid out for rows of frames that stand between
// two margins of zeros.
type kernel struct {
	taps     int
	dilation int
	bias     float64
	channels []int     // ascending
	weights  []float64 // taps of the first channel, of the second …
	padded   bool

	start   int // place in a row of the first tap of the first response
	outputs int // number of responses
}

// margin returns the number of zeros before and after a row of frames: half
// the greatest reach of a kernel.
func margin(frames int) int { return (frames - 1) / 2 }

// draw draws a kernel for takes of the given frames and channels.
func draw(g *rand.Rand, frames, width int) kernel {
	k := kernel{taps: lengths[g.IntN(len(lengths))]}
	k.channels = drawChannels(g, width, k.taps)
	for range k.channels {
		k.weights = append(k.weights, drawWeights(g, k.taps)...)
	}
	k.bias = 2*g.Float64() - 1
	k.dilation = drawDilation(g, frames, k.taps)
	k.padded = g.IntN(2) == 1
	k.place(frames)
	return k
}

// place says where in a row of the given frames the kernel stands.
func (k *kernel) place(frames int) {
	reach := (k.taps - 1) * k.dilation
	k.start, k.outputs = margin(frames), frames-reach
	if k.padded {
		k.start, k.outputs = k.start-reach/2, frames
	}
}

// drawChannels draws which of width channels a kernel reads.
func drawChannels(g *rand.Rand, width, taps int) []int {
	most := min(width, taps)
	n := int(math.Exp2(g.Float64() * math.Log2(float64(most+1))))
	chosen := g.Perm(width)[:min(n, most)]
	slices.Sort(chosen)
	return chosen
}

// drawWeights draws the weights of one channel.
func drawWeights(g *rand.Rand, taps int) []float64 {
	weights, sum := make([]float64, taps), 0.0
	for i := range weights {
		weights[i] = g.NormFloat64()
		sum += weights[i]
	}
	for i := range weights {
		weights[i] -= sum / float64(taps)
	}
	return weights
}

// drawDilation draws how many frames apart the taps are.
func drawDilation(g *rand.Rand, frames, taps int) int {
	fits := float64(frames-1) / float64(taps-1)
	return int(min(fits, math.Exp2(g.Float64()*math.Log2(fits))))
}
