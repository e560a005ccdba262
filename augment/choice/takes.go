package choice

import (
	"math"

	"strandwise/channels"
)

// Takes returns the order, by [Order], of takes made from one source take, each
// described by what a recogniser may go by: the values of the take, at 32
// instants evenly spaced over its clock and with channel groups scaled alike,
// and the directions of 16 steps of equal arc length along each group's path.
// Both halves weigh alike: they are divided by how far the draws are apart in
// them. Recorded are the recorded takes of the label, the source among them.
func Takes(draws, recorded []*channels.Take, scales *channels.Scales) []int {
	n := len(draws)
	var values, directions [][]float64
	for i := range n + len(recorded) {
		t := at(draws, recorded, i)
		scaled := scales.Apply(t)
		values = append(values, instants(t, scaled))
		var steps []float64
		for _, g := range t.Layout.Groups {
			steps = appendSteps(steps, scaled, t.Width(), g.Channels)
		}
		directions = append(directions, steps)
	}
	balance(values, n)
	balance(directions, n)
	for i := range values {
		values[i] = append(values[i], directions[i]...)
	}
	return Order(values[:n], values[n:])
}

// at returns the take at a place among all.
func at(draws, recorded []*channels.Take, i int) *channels.Take {
	if i < len(draws) {
		return draws[i]
	}
	return recorded[i-len(draws)]
}

// balance divides points by the root mean square distance of the first n of
// them, so that kinds of points weigh alike. Where those are all alike the
// points are left as they are.
func balance(points [][]float64, n int) {
	if n < 2 {
		return
	}
	variance := 0.0
	for k := range points[0] {
		mean, squares := 0.0, 0.0
		for _, p := range points[:n] {
			mean += p[k] / float64(n)
		}
		for _, p := range points[:n] {
			squares += (p[k] - mean) * (p[k] - mean)
		}
		variance += squares / float64(n-1)
	}
	apart := math.Sqrt(2 * variance) // the mean square distance of two is twice the variance
	if !(apart > 0) || math.IsInf(apart, 1) {
		return
	}
	for _, p := range points {
		for k := range p {
			p[k] /= apart
		}
	}
}

// sketched is the number of instants at which takes are compared, and steps
// that of the directions of a path.
const sketched, steps = 32, 16

// instants returns values, frames × channels, at evenly spaced instants of the
// take's clock, read linearly.
func instants(t *channels.Take, values []float64) []float64 {
	w, last := t.Width(), t.Frames()-1
	out := make([]float64, 0, sketched*w)
	for k, i := 0, 0; k < sketched; k++ {
		at := t.Time[0] + t.Duration()*float64(k)/(sketched-1)
		for i < last-1 && t.Time[i+1] < at {
			i++
		}
		u := min(1, (at-t.Time[i])/(t.Time[i+1]-t.Time[i]))
		for c := range w {
			out = append(out, (1-u)*values[i*w+c]+u*values[(i+1)*w+c])
		}
	}
	return out
}

// appendSteps appends the unit vector of each step along the path of some
// channels, zeros for a step without length.
func appendSteps(dst, values []float64, w int, list []int) []float64 {
	arc := arcs(values, w, list)
	total := arc[len(arc)-1]
	from, to := make([]float64, len(list)), make([]float64, len(list))
	place(from, values, w, list, 0, 0)
	for k, i := 1, 0; k <= steps; k++ {
		s := total * float64(k) / steps
		for i < len(arc)-2 && arc[i+1] < s {
			i++
		}
		u := 0.0
		if length := arc[i+1] - arc[i]; length > 0 {
			u = min(1, (s-arc[i])/length)
		}
		place(to, values, w, list, i, u)
		dst = appendDirection(dst, from, to, total*still)
		from, to = to, from
	}
	return dst
}

// still is the share of a path below which a step has no length.
const still = 1e-9

// arcs returns the length of the path up to every frame.
func arcs(values []float64, w int, list []int) []float64 {
	out := make([]float64, len(values)/w)
	for i := 1; i < len(out); i++ {
		sum := 0.0
		for _, c := range list {
			d := values[i*w+c] - values[(i-1)*w+c]
			sum += d * d
		}
		out[i] = out[i-1] + math.Sqrt(sum)
	}
	return out
}

// place writes the point at u of the way from frame i to the next.
func place(dst, values []float64, w int, list []int, i int, u float64) {
	for k, c := range list {
		dst[k] = (1-u)*values[i*w+c] + u*values[(i+1)*w+c]
	}
}

func appendDirection(dst, from, to []float64, least float64) []float64 {
	length := distance(from, to)
	for k := range to {
		if length > least {
			dst = append(dst, (to[k]-from[k])/length)
		} else {
			dst = append(dst, 0)
		}
	}
	return dst
}
