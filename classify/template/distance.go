package template

import "math"

// warps says whether the distance is one of dynamic time warping.
func (d Distance) warps() bool { return d == DTWDependent || d == DTWIndependent }

// roots says whether a part of the distance is the root of its sum of squares.
func (d Distance) roots() bool { return d != DTWDependent && d != DirectionCosine }

// distance returns the distance of two prepared takes, or any value above bound
// as soon as the distance is above it.
func (w *Worker) distance(a, b *series, bound float64) float64 {
	sum := 0.0
	for i := range w.parts {
		p := &w.parts[i]
		x, y, limit := a.part(p), b.part(p), w.limit(p, bound, bound-sum)
		var v float64
		if w.warps {
			v = w.warp(x, y, a.frames, b.frames, p.width, limit)
		} else {
			v = squares(x, y, limit)
		}
		if w.roots {
			v = math.Sqrt(v)
		}
		sum += p.weight * v
		if sum > bound {
			break
		}
	}
	return sum
}

// limit returns a value that the sum of squares of a part is not above when the
// part adds no more than left to a distance up to bound. It is wide enough for
// every rounding on the way.
func (w *Worker) limit(p *part, bound, left float64) float64 {
	left, margin := left/p.weight, 1e-6*bound/p.weight
	if w.roots {
		return left*left + margin*margin + tiny
	}
	return left + 1e-6*margin + tiny + tiny/p.weight
}

// tiny is what rounding adds to the smallest of numbers, or takes off them.
const tiny = 2 * math.SmallestNonzeroFloat64
