package path

import "sort"

// Samples are the frames of a take on their clock: frames × width values,
// frame-major, at strictly increasing times in seconds.
type Samples struct {
	Time   []float64
	Values []float64
	Width  int
}

// At writes into dst the values of the given channels at time t by Catmull–Rom
// interpolation (Catmull & Rom, Computer Aided Geometric Design, 1974), in the
// form for unequal steps: a cubic whose slope at each frame is the difference
// of its neighbours over their distance in time. Before the first frame and
// after the last the end value holds. Linear reading would smear: it acts as a
// low-pass filter whose strength changes from frame to frame.
func (s Samples) At(dst []float64, t float64, list []int) {
	i, w := s.weights(t)
	n := len(s.Time)
	rows := [4]int{max(i-1, 0), i, i + 1, min(i+2, n-1)}
	a, b := s.Values[rows[0]*s.Width:], s.Values[rows[1]*s.Width:]
	c, d := s.Values[rows[2]*s.Width:], s.Values[rows[3]*s.Width:]
	for k, ch := range list {
		dst[k] = w[0]*a[ch] + w[1]*b[ch] + w[2]*c[ch] + w[3]*d[ch]
	}
}

// weights returns the frame i whose step holds t, and the weights of frames
// i−1, i, i+1 and i+2 in the value at t. Where a neighbour is missing the
// nearest frame carries its weight.
func (s Samples) weights(t float64) (i int, w [4]float64) {
	n := len(s.Time)
	i = min(max(sort.SearchFloat64s(s.Time, t)-1, 0), n-2)
	step := s.Time[i+1] - s.Time[i]
	u := min(max((t-s.Time[i])/step, 0), 1)
	before := u * (1 - u) * (1 - u) * step / (s.Time[i+1] - s.Time[max(i-1, 0)])
	after := u * u * (u - 1) * step / (s.Time[min(i+2, n-1)] - s.Time[i])
	rise := u * u * (3 - 2*u)
	return i, [4]float64{-before, 1 - rise - after, rise + before, after}
}
