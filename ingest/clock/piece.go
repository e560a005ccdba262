package clock

import (
	"math"
	"slices"
)

// track returns the values of a column. That of a complete column shares the
// times of the series.
func (s ordered) track(column int) track {
	value := make([]float64, len(s.Time))
	n := 0
	for row := range s.Time {
		if value[row] = s.at(row, column); !math.IsNaN(value[row]) {
			n++
		}
	}
	if n == len(value) {
		return track{s.Time, value, s.from}
	}
	t := track{make([]float64, 0, n), make([]float64, 0, n), make([]int, 0, n)}
	for row, v := range value {
		if !math.IsNaN(v) {
			t.time, t.value, t.row = append(t.time, s.Time[row]), append(t.value, v), append(t.row, s.from[row])
		}
	}
	return t
}

// piece samples every column on the clock.
func (j *job) piece(s span, g grid) Piece {
	w := j.series.Width
	row, _ := slices.BinarySearch(j.series.Time, s.from)
	p := Piece{Series: Series{Width: w, Time: make([]float64, g.frames), Data: make([]float64, g.frames*w)}, Row: j.series.from[row]}
	for k := range p.Time {
		p.Time[k] = g.time(k)
	}
	for c := range j.tracks {
		t := j.tracks[c].across(s)
		if f := j.sensors[j.of[c]].filter; f != nil {
			t.filtered(p.Data[c:], w, g, j.options.Interpolation, f)
			continue
		}
		t.sample(p.Data[c:], w, g, j.options.Interpolation)
	}
	return p
}

// across returns the part of a track that a span is interpolated from: from
// the last frame at or before it to the first at or after it.
func (t *track) across(s span) *track {
	from, found := slices.BinarySearch(t.time, s.from)
	if !found {
		from--
	}
	to, _ := slices.BinarySearch(t.time, s.to)
	return &track{time: t.time[from : to+1], value: t.value[from : to+1]}
}

// filtered samples the track on a faster clock first and brings it down to
// the grid by the filter. The mean is set aside meanwhile, because the filter
// passes a constant only to a few parts in ten thousand at some of its phases.
func (t *track) filtered(dst []float64, stride int, g grid, how Interpolation, f *Polyphase) {
	fast := grid{start: g.start, step: g.step * float64(f.up) / float64(f.down), frames: (g.frames-1)*f.down/f.up + 1}
	x := make([]float64, fast.frames)
	t.sample(x, 1, fast, how)
	mean := 0.0
	for _, v := range x {
		mean += v / float64(len(x))
	}
	for i := range x {
		x[i] -= mean
	}
	y := f.Resample(nil, x, Odd)
	for k := range g.frames {
		dst[k*stride] = mean + y[k]
	}
}

// count adds what was done in a stretch of time.
func (j *job) count(s span) {
	j.counts.LeftOut -= len(within(j.series.Time, s))
	for _, n := range j.sensors {
		time := within(n.time, s)
		if len(time) == 0 {
			continue
		}
		phase := phases(time, n.step)
		middle := median(phase)
		for i, p := range phase {
			if math.Abs(p-middle) > onTime {
				j.counts.Moved++
			}
			if i+1 < len(time) && isGap(time, i, n.step) {
				j.counts.Gaps++
				j.counts.Made += between(time[i+1]-time[i], n.step)
			}
		}
		for _, c := range n.Columns {
			j.counts.Values += len(time) - len(within(j.tracks[c].time, s))
		}
	}
}
