package jsonlines

import (
	"math"
	"slices"
	"sort"
)

// series returns the times of the first sensor of the take.
func (t *frames) series() []float64 {
	if len(t.of) == 1 || !t.apart() {
		return slices.Clone(t.time)
	}
	var out []float64
	for i, at := range t.time {
		if t.sensor[i] == t.sensor[0] {
			out = append(out, at)
		}
	}
	return out
}

// apart tells whether no two sensors share a column.
func (t *frames) apart() bool {
	seen := make([]bool, t.width)
	for _, s := range t.of {
		for c := range s.columns {
			if seen[c] {
				return false
			}
			seen[c] = true
		}
	}
	return true
}

// merge puts the frames of several sensors into one order of time, and those of
// one time into one frame. It leaves a take alone of which a single sensor's
// frames are out of order, since that is for the user to decide about.
func (t *frames) merge() {
	if len(t.of) < 2 || !t.apart() || slices.ContainsFunc(t.of, func(s sensor) bool { return s.back }) {
		return
	}
	if !sort.Float64sAreSorted(t.time) {
		t.order()
	}
	kept := 0
	for i := 1; i < len(t.time); i++ {
		if t.time[i] == t.time[kept] && t.fits(kept, i) {
			for c, v := range t.row(i) {
				if !math.IsNaN(v) {
					t.row(kept)[c] = v
				}
			}
			continue
		}
		kept++
		t.time[kept], t.lines[kept] = t.time[i], t.lines[i]
		copy(t.row(kept), t.row(i))
	}
	t.time, t.lines, t.data = t.time[:kept+1], t.lines[:kept+1], t.data[:(kept+1)*t.width]
}

func (t *frames) row(i int) []float64 { return t.data[i*t.width : (i+1)*t.width] }

// fits tells whether two frames share no value.
func (t *frames) fits(a, b int) bool {
	other := t.row(b)
	for c, v := range t.row(a) {
		if !math.IsNaN(v) && !math.IsNaN(other[c]) {
			return false
		}
	}
	return true
}

// order sorts the frames by time; those of one time stay in the order of the
// file.
func (t *frames) order() {
	by := make([]int, len(t.time))
	for i := range by {
		by[i] = i
	}
	sort.SliceStable(by, func(a, b int) bool { return t.time[by[a]] < t.time[by[b]] })
	time, lines, data := make([]float64, 0, len(by)), make([]int, 0, len(by)), make([]float64, 0, len(t.data))
	for _, i := range by {
		time, lines, data = append(time, t.time[i]), append(lines, t.lines[i]), append(data, t.row(i)...)
	}
	t.time, t.lines, t.data = time, lines, data
}
