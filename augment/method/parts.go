package method

import (
	"math/rand/v2"
)

// Parts cuts the path into parts, turns, scales and shifts each part by a small
// random amount of its own and joins them again: the part-wise geometric
// transformation of handwriting synthesis, where the parts are pen strokes or
// components (Varga & Bunke, ICDAR 2003; Mouchère, Bayoudh, Anquetil, Miclet,
// IGS 2007; both from memory). Movements in the air have no pen to lift, so
// the cuts are the sharpest bends of the path or drawn frames, and the sizes
// are this package's; nothing is published for them.
//
// The steps between the frames of a part are turned and scaled and a share of
// the shift is added to each, then all steps are chained: the path has no gap
// anywhere. It keeps its mean. Parts turn about an axis of random direction
// as [Rotation] says; channels that have no axes to turn are only scaled and
// shifted.
type Parts struct {
	Count   int     // number of parts, ≥ 1; fewer where the path has too few frames
	Angle   float64 // standard deviation of a part's turn, radians, ≥ 0
	Scale   float64 // standard deviation of the logarithm of a part's factor, ≥ 0
	Shift   float64 // standard deviation of a part's shift per channel, in the unit of the values, ≥ 0
	AtBends bool    // cut at the sharpest bends, and not at drawn frames
}

// DefaultParts returns three parts cut at the sharpest bends, turned by 0.1 rad,
// scaled by a tenth and shifted by a twentieth of the root mean square of the
// values.
func DefaultParts() Parts {
	return Parts{Count: 3, Angle: 0.1, Scale: 0.1, Shift: 0.05, AtBends: true}
}

// Apply makes one take; see the package's contract.
func (p Parts) Apply(dst, src []float64, width int, time []float64, rng *rand.Rand) []float64 {
	if p.Count < 1 {
		panic("method: a path has at least one part")
	}
	dst, n := prepare(dst, src, width, time)
	if n < 2 {
		return dst
	}
	var cuts []int
	if p.AtBends {
		cuts = bends(src, width, p.Count-1)
	} else {
		cuts = drawnCuts(n, p.Count-1, rng)
	}
	moved := make([]float64, width) // how far the new path has left the source
	begin := 0
	for _, end := range append(cuts, n-1) {
		p.part(dst, src, width, begin, end, moved, rng)
		begin = end
	}
	keepMean(dst, src, width)
	return dst
}

// part changes the steps from frame begin to frame end and chains them. The
// difference to the source is chained, so that a part that is not changed is
// the source's to the last bit.
func (p Parts) part(dst, src []float64, width, begin, end int, moved []float64, rng *rand.Rand) {
	turn := drawTurn(width, p.Angle*rng.NormFloat64(), rng)
	if p.Angle == 0 {
		turn = nil
	}
	growth := expm1(p.Scale * rng.NormFloat64())
	shift := make([]float64, width)
	for c := range shift {
		shift[c] = p.Shift * rng.NormFloat64() / float64(end-begin)
	}
	step, turned := make([]float64, width), make([]float64, width)
	for i := begin + 1; i <= end; i++ {
		for c := range step {
			step[c] = src[i*width+c] - src[(i-1)*width+c]
		}
		copy(turned, step)
		if turn != nil {
			turn(turned)
		}
		for c := range step {
			moved[c] += turned[c] - step[c] + growth*turned[c] + shift[c]
			dst[i*width+c] = src[i*width+c] + moved[c]
		}
	}
}

// keepMean moves dst so that its mean is the source's.
func keepMean(dst, src []float64, width int) {
	n := float64(len(dst) / width)
	for c := range width {
		off := 0.0
		for i := c; i < len(dst); i += width {
			off += (dst[i] - src[i]) / n
		}
		for i := c; i < len(dst); i += width {
			dst[i] -= off
		}
	}
}
