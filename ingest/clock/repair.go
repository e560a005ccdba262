package clock

import (
	"math"
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
	j.counts.LeftOut = len(j.series.Time)
	out := &Repaired{Rate: j.rate}
	for _, s := range spans {
		g := j.grid(s)
		if g.frames > manyFrames*len(j.series.Time) {
			return nil, refuse(WrongRate, -1)
		}
		if g.frames > 1 {
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
	}
	j.compare()
	return j.settle()
}

// ownRate is how many frames a sensor must have for a rate of its own. Fewer
// may as well be what is left of the fastest sensor's.
const ownRate = 8

// compare finds the fastest sensor, or where none has enough frames, that with
// most, and gives its rate to those without one.
func (j *job) compare() {
	key := func(n sensor) (float64, float64) {
		if len(n.time) < ownRate {
			return 0, float64(len(n.time))
		}
		return n.rate, 0
	}
	for i, n := range j.sensors {
		rate, frames := key(n)
		best, most := key(j.sensors[j.fastest])
		if rate > best || rate == best && frames > most {
			j.fastest = i
		}
	}
	for i := range j.sensors {
		if n := &j.sensors[i]; len(n.time) < ownRate {
			n.rate, n.step = j.sensors[j.fastest].rate, j.sensors[j.fastest].step
		}
	}
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
