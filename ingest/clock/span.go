package clock

import (
	"math"
	"slices"
)

// span is a stretch of time, both ends included.
type span struct{ from, to float64 }

// hole is an open stretch of time in which a column has no values and gets
// none.
type hole struct {
	span
	row, column, frames int // the last row before it, -1 for none, and the frames missing
}

// holes lists the stretches of a column that are too long to be filled, with
// those before its first value and after its last, which are never filled.
// Step is the nominal step of its sensor.
func holes(t *track, column int, step float64, longest int, whole span) []hole {
	var out []hole
	last := len(t.time) - 1
	add := func(from, to float64, row, frames int) {
		out = append(out, hole{span{from, to}, row, column, frames})
	}
	if first := t.time[0]; first > whole.from {
		add(math.Inf(-1), first, -1, between(first-whole.from+step, step))
	}
	for i := range last {
		if !isGap(t.time, i, step) {
			continue
		}
		if n := between(t.time[i+1]-t.time[i], step); n > longest {
			add(t.time[i], t.time[i+1], t.row[i], n)
		}
	}
	if end := t.time[last]; end < whole.to {
		add(end, math.Inf(1), t.row[last], between(whole.to-end+step, step))
	}
	return out
}

// outside returns what of the whole lies in no hole, in order. Stretches
// without length are left out.
func outside(whole span, holes []hole) []span {
	slices.SortFunc(holes, func(a, b hole) int { return compare(a.from, b.from) })
	var out []span
	from := whole.from
	for _, h := range holes {
		if h.from > from {
			out = append(out, span{from, h.from})
		}
		from = max(from, h.to)
	}
	if from < whole.to {
		out = append(out, span{from, whole.to})
	}
	return out
}

// spans finds the stretches of time in which every column has values.
func (j *job) spans() ([]span, error) {
	var all []hole
	for c := range j.tracks {
		all = append(all, holes(&j.tracks[c], c, j.sensors[j.of[c]].step, j.longest, j.whole)...)
	}
	out := outside(j.whole, all) // puts the holes in order
	for _, h := range all {
		if h.frames > j.longest && !j.options.Split {
			return nil, &Refusal{Reason: LongGap, Row: h.row, Column: h.column, Frames: h.frames, Limit: j.longest}
		}
	}
	return out, nil
}
