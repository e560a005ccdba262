package clock

import (
	"math"
	"slices"
)

// Repaired is a recording on one uniform clock.
type Repaired struct {
	Pieces []Piece // in order of time; one unless it was split
	Rate   float64 // of all pieces, Hz
	Counts Counts
}

// Rates are the same within sameRate. Where the rate goes down by more than
// filterFrom, the anti-aliasing filter is used. The ratio of the rates is then taken as the
// simplest fraction within nearlyRatio of it, and the sensor is first brought
// to the rate that makes the fraction exact.
const (
	sameRate    = 1e-6
	filterFrom  = 1.01
	nearlyRatio = 1e-4
)

// onTime is how near its place on a uniform clock a frame must be, in steps,
// to be left there with its value to the bit. Further away it is moved.
const onTime = 1e-3

// manyFrames is how many frames at most are made of one, lest a mistaken rate
// fills the memory.
const manyFrames = 1000

// Repair puts a recording onto one uniform clock. Its steps are those of
// Options.Rate; their phase is the median phase of the frames of the fastest
// sensor, so a recording that is on a uniform clock stays as it is: a frame
// within a thousandth of a step of its place keeps its values to the bit. Each piece covers the time in which all
// columns have values, to within half a step. Columns of slower sensors are
// interpolated in between; columns of sensors at least one per cent faster are
// filtered. The series is not changed. The error is a *[Refusal].
func Repair(s Series, o Options) (*Repaired, error) {
	if len(s.Data) != len(s.Time)*s.Width {
		panic("clock: data do not fit times and width")
	}
	if !(o.Rate >= 0) || math.IsInf(o.Rate, 0) {
		return nil, refuse(WrongRate, -1)
	}
	j := &job{options: o, longest: o.longest()}
	j.counts.Frames = len(s.Time)
	var err error
	if j.series, err = inOrder(s, o, &j.counts); err != nil {
		return nil, err
	}
	if err := j.survey(); err != nil {
		return nil, err
	}
	spans, err := j.spans()
	if err != nil {
		return nil, err
	}
	out := &Repaired{Rate: j.rate}
	for _, s := range spans {
		if g, ok := j.grid(s); ok {
			out.Pieces = append(out.Pieces, j.piece(s, g))
			j.count(s)
		}
	}
	if len(out.Pieces) == 0 {
		return nil, refuse(TooShort, -1)
	}
	j.counts.Pieces = len(out.Pieces)
	out.Counts = j.counts
	return out, nil
}

// job is one repair.
type job struct {
	options Options
	longest int
	series  ordered
	sensors []sensor
	tracks  []track
	of      []int // sensor of each column
	fastest int   // sensor
	rate    float64
	whole   span
	counts  Counts
}

// sensor is a sensor with its clock.
type sensor struct {
	Sensor
	time       []float64 // of its rows
	rate, step float64   // nominal
	filter     *Polyphase
}

// survey finds the sensors, their clocks and the rate of the result.
func (j *job) survey() error {
	s := j.series
	if len(s.Time) < 2 || s.Width == 0 {
		return refuse(TooShort, -1)
	}
	j.whole = span{math.Inf(1), math.Inf(-1)}
	j.tracks, j.of = make([]track, s.Width), make([]int, s.Width)
	for c := range j.tracks {
		j.tracks[c] = s.track(c)
		t := j.tracks[c].time
		if len(t) < 2 {
			return &Refusal{Reason: NeverSeen, Row: -1, Column: c}
		}
		j.whole.from, j.whole.to = min(j.whole.from, t[0]), max(j.whole.to, t[len(t)-1])
	}
	for i, found := range Sensors(s.Time, s.Data, s.Width) {
		n := sensor{Sensor: found, time: At(s.Time, found.Rows)}
		r := Inspect(n.time)
		if !r.Steady() {
			return &Refusal{Reason: Unsteady, Row: -1, Column: n.Columns[0]}
		}
		n.rate = r.Nominal()
		n.step = 1 / n.rate
		for _, c := range n.Columns {
			j.of[c] = i
		}
		j.sensors = append(j.sensors, n)
		if n.rate > j.sensors[j.fastest].rate {
			j.fastest = i
		}
	}
	return j.settle()
}

// settle fixes the rate of the result and the filters it takes.
func (j *job) settle() error {
	if j.rate = j.options.Rate; j.rate == 0 {
		j.rate = j.sensors[j.fastest].rate
	}
	if j.rate > manyFrames*j.sensors[j.fastest].rate {
		return refuse(WrongRate, -1)
	}
	for i := range j.sensors {
		n := &j.sensors[i]
		ratio := j.rate / n.rate
		if math.Abs(ratio-1) <= sameRate {
			continue
		}
		if ratio*filterFrom < 1 {
			if 1/ratio > manyFrames {
				return refuse(WrongRate, -1)
			}
			n.filter = NewPolyphase(simplest(ratio*(1-nearlyRatio), ratio*(1+nearlyRatio)))
		}
		j.counts.Changes = append(j.counts.Changes, Change{Columns: n.Columns, From: n.rate, To: j.rate, Filtered: n.filter != nil})
	}
	return nil
}

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
	j.counts.LeftOut = len(j.series.Time)
	return out, nil
}

// grid lays the uniform clock through a stretch of time. It has none if fewer
// than two frames fit.
func (j *job) grid(s span) (grid, bool) {
	n := j.sensors[j.fastest]
	time := within(n.time, s)
	start := s.from
	if len(time) > 0 {
		start = time[0] + n.step*median(phases(time, n.step))
	}
	g := grid{step: 1 / j.rate}
	slack := min(g.step, n.step) / 2
	first := math.Ceil((s.from - slack - start) / g.step)
	last := math.Floor((s.to + slack - start) / g.step)
	if last <= first {
		return g, false
	}
	g.start, g.frames = start+first*g.step, int(last-first)+1
	return g, true
}

// phases returns how far each time is from a whole number of steps after the
// first, in steps, from −0.5 to 0.5.
func phases(time []float64, step float64) []float64 {
	out := make([]float64, len(time))
	for i, t := range time {
		n := (t - time[0]) / step
		out[i] = n - math.Round(n)
	}
	return out
}

func median(values []float64) float64 {
	return quantile(slices.Sorted(slices.Values(values)), 0.5)
}

// within returns the times in a span.
func within(time []float64, s span) []float64 {
	from, _ := slices.BinarySearch(time, s.from)
	to, found := slices.BinarySearch(time, s.to)
	if found {
		to++
	}
	return time[from:to]
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
