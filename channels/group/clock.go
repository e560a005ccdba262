package group

import "strandwise/channels"

// clockFrames is the number of frames of the common clock that takes are
// brought to before they are aligned: enough for the timing of a gesture, and
// few enough that every pair of takes of a label can be aligned.
const clockFrames = 64

// onClock brings frames × width values of a take to frames evenly spaced over
// it, each the mean of the values, straight between frames, over one step
// around it. The mean keeps what is faster than the new clock out of it. A
// take of one frame is held.
func onClock(t *channels.Take, data []float64, frames int) []float64 {
	w, n := t.Width(), t.Frames()
	out := make([]float64, frames*w)
	if t.Duration() <= 0 {
		for i := range frames {
			copy(out[i*w:], data[:w])
		}
		return out
	}
	integral := integrate(t.Time, data, w)
	step := t.Duration() / float64(frames-1)
	low, high := cursor{}, cursor{}
	a, b := make([]float64, w), make([]float64, w)
	for i := range frames {
		at := t.Time[0] + float64(i)*step
		from, to := max(at-step/2, t.Time[0]), min(at+step/2, t.Time[n-1])
		low.read(a, t.Time, data, integral, from)
		high.read(b, t.Time, data, integral, to)
		for c := range w {
			out[i*w+c] = (b[c] - a[c]) / (to - from)
		}
	}
	return out
}

// integrate returns the integral of every channel up to each frame.
func integrate(time, data []float64, w int) []float64 {
	out := make([]float64, len(data))
	for i := w; i < len(data); i++ {
		k := i / w
		out[i] = out[i-w] + (time[k]-time[k-1])*(data[i]+data[i-w])/2
	}
	return out
}

// cursor reads an integral at instants that do not decrease.
type cursor struct{ frame int }

func (c *cursor) read(dst, time, data, integral []float64, at float64) {
	w := len(dst)
	for c.frame < len(time)-2 && time[c.frame+1] <= at {
		c.frame++
	}
	k := c.frame
	dt := at - time[k]
	f := dt / (time[k+1] - time[k])
	for j := range dst {
		a, b := data[k*w+j], data[(k+1)*w+j]
		dst[j] = integral[k*w+j] + dt*(a+f*(b-a)/2)
	}
}
