package lognormal

import "math"

// signal is a series of velocities over the steps of a clock: what is to be
// explained by strokes, or what strokes explain.
type signal struct {
	time     []float64 // instants between the steps, one more than steps; seconds from the first
	velocity []Vec     // mean velocity over each step
}

// steps returns the signal of a path, frames × width.
func steps(src []float64, width int, time []float64) signal {
	n := len(time)
	s := signal{time: make([]float64, n), velocity: make([]Vec, max(n-1, 0))}
	for i := range time {
		s.time[i] = time[i] - time[0]
	}
	for i := range s.velocity {
		for c := range width {
			s.velocity[i][c] = (src[(i+1)*width+c] - src[i*width+c]) / (time[i+1] - time[i])
		}
	}
	return s
}

// energy is the sum of squared velocities.
func (s signal) energy() float64 {
	sum := 0.0
	for _, v := range s.velocity {
		sum += dot(v, v)
	}
	return sum
}

// largest returns the largest component of a velocity, without its sign.
func (s signal) largest() float64 {
	out := 0.0
	for _, v := range s.velocity {
		out = max(out, math.Abs(v[0]), math.Abs(v[1]), math.Abs(v[2]))
	}
	return out
}

// reach bounds the part of a stroke that is computed, in standard deviations of
// the logarithm of its time: beyond, a share of 3e-7 of its length is left out.
const reach = 5

// support returns the steps from low to high over which a stroke moves.
func (s signal) support(k Stroke) (low, high int) {
	from := k.T0 + math.Exp(k.Mu-reach*k.Sigma)
	to := k.T0 + math.Exp(k.Mu+reach*k.Sigma)
	n := len(s.velocity)
	for low < n && s.time[low+1] <= from {
		low++
	}
	high = low
	for high < n && s.time[high] < to {
		high++
	}
	return low, high
}

// add adds factor times a stroke's velocities.
func (s signal) add(k Stroke, factor float64) {
	low, high := s.support(k)
	if low == high {
		return
	}
	before := k.Displacement(s.time[low])
	for i := low; i < high; i++ {
		after := k.Displacement(s.time[i+1])
		f := factor / (s.time[i+1] - s.time[i])
		for c := range after {
			s.velocity[i][c] += f * (after[c] - before[c])
		}
		before = after
	}
}
