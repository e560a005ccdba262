package align

import "math"

// smoother smooths timing maps in the same memory.
type smoother struct {
	kernel []float64 // half of it, from its middle outwards
	in     []float64
}

// reach is where the kernel is cut, in standard deviations.
const reach = 3

// smooth smooths a nondecreasing map in place by a Gaussian of the given
// standard deviation in frames. Beyond its ends the map is continued by its
// own reflection in the end point, so that the ends and every straight map
// stay as they are; the result does not decrease.
func (s *smoother) smooth(at []float64, sd float64) {
	n := len(at)
	half := min(int(math.Ceil(reach*sd)), n-1)
	if !(sd > 0) || half < 1 {
		return
	}
	s.weigh(half, sd)
	s.in = append(s.in[:0], at...)
	floor, top := at[0], at[n-1]
	for i := range at {
		v := s.kernel[0] * s.in[i]
		for k := 1; k <= half; k++ {
			v += s.kernel[k] * (s.before(i-k) + s.after(i+k))
		}
		floor = min(max(v, floor), top) // monotone but for rounding
		at[i] = floor
	}
	at[n-1] = top
}

// weigh sets the kernel to a Gaussian that adds up to 1 over both sides.
func (s *smoother) weigh(half int, sd float64) {
	s.kernel = sized(s.kernel, half+1)
	sum := 0.0
	for k := range s.kernel {
		s.kernel[k] = math.Exp(-float64(k*k) / (2 * sd * sd))
		sum += 2 * s.kernel[k]
	}
	sum -= s.kernel[0]
	for k := range s.kernel {
		s.kernel[k] /= sum
	}
}

func (s *smoother) before(i int) float64 {
	if i < 0 {
		return 2*s.in[0] - s.in[-i]
	}
	return s.in[i]
}

func (s *smoother) after(i int) float64 {
	last := len(s.in) - 1
	if i > last {
		return 2*s.in[last] - s.in[2*last-i]
	}
	return s.in[i]
}
