package path

import (
	"sort"

	"gonum.org/v1/gonum/interp"
)

// Clock relates the normalised time of a take, 0 at its first frame and 1 at
// its last, to the parameter along its path in which knots are spaced:
//
//	parameter = (1 − m)·arc length + m·time,   both as fractions of the whole
//
// where m is the time share. With m = 1 the parameter is time; with m = 0 it
// is arc length and a rest has no extent. In between a pause keeps a stretch
// of its own, a fast passage gets more knots than a slow one.
type Clock struct {
	time, parameter []float64 // one per frame, from 0 to 1
}

// NewClock builds the clock of a take from its time in seconds (strictly
// increasing) and its cumulated arc length, both one per frame. A take that
// does not move at all has time as its parameter.
func NewClock(seconds, arc []float64, timeShare float64) *Clock {
	n := len(seconds)
	if n < 2 || len(arc) != n {
		panic("path: a clock needs at least two frames, with an arc length each")
	}
	c := &Clock{time: make([]float64, n), parameter: make([]float64, n)}
	length := arc[n-1]
	if length == 0 {
		timeShare, length = 1, 1
	}
	for i := range n {
		c.time[i] = (seconds[i] - seconds[0]) / (seconds[n-1] - seconds[0])
		c.parameter[i] = (1-timeShare)*arc[i]/length + timeShare*c.time[i]
	}
	c.time[n-1], c.parameter[n-1] = 1, 1
	return c
}

// Parameter returns the parameter at normalised time t, 0 ≤ t ≤ 1.
func (c *Clock) Parameter(t float64) float64 { return lookUp(c.time, c.parameter, t) }

// Time returns the earliest normalised time at which the parameter is p,
// 0 ≤ p ≤ 1.
func (c *Clock) Time(p float64) float64 { return lookUp(c.parameter, c.time, p) }

// lookUp interpolates y linearly at x = v; x does not decrease.
func lookUp(x, y []float64, v float64) float64 {
	i := min(max(sort.SearchFloat64s(x, v), 1), len(x)-1)
	step := x[i] - x[i-1]
	if step == 0 {
		return y[i-1]
	}
	return y[i-1] + min(max((v-x[i-1])/step, 0), 1)*(y[i]-y[i-1])
}

// Map is a smooth increasing map of [0, 1] onto itself: what parameter of the
// source is shown at each parameter of the new take.
type Map struct{ curve interp.FritschButland }

// NewMap lays a monotone cubic (Fritsch & Butland, SIAM J. Sci. Stat. Comput.
// 5 (1984) 300) through n ≥ 2 evenly spaced knots: the source parameter at knot
// k is fractions[k], rising strictly from 0 to 1. A map without kinks gives
// tempo without steps.
func NewMap(fractions []float64) *Map {
	knots := make([]float64, len(fractions))
	for k := range knots {
		knots[k] = float64(k) / float64(len(knots)-1)
	}
	m := new(Map)
	if err := m.curve.Fit(knots, fractions); err != nil {
		panic("path: no curve through the knots of a map: " + err.Error())
	}
	return m
}

// At returns the source parameter shown at parameter p, both in [0, 1].
func (m *Map) At(p float64) float64 {
	return min(max(m.curve.Predict(p), 0), 1)
}
