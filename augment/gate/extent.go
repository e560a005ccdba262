package gate

import (
	"math"
	"slices"

	"strandwise/channels"
)

// extent is what one channel was recorded at.
type extent struct {
	low, high   float64
	bottom, top flats
}

// flats counts runs of frames at one extreme value.
type flats struct {
	long, short int // runs of three frames and more, and of two, entered and left at speed
	frames      int
}

// Clipped channels are told by the frames at their extreme: once three in a
// row, or twice two, the signal running in and out by steps of at least this
// share of the range. Common practice.
const (
	longRun, shortRun = 3, 2
	steepShare        = 0.05
)

// see counts in one channel of a take.
func (e *extent) see(t *channels.Take, c int) {
	low, high := math.Inf(1), math.Inf(-1)
	for i := range t.Frames() {
		v := t.Data[i*t.Width()+c]
		low, high = min(low, v), max(high, v)
	}
	if low < e.low {
		e.low, e.bottom = low, flats{}
	}
	if high > e.high {
		e.high, e.top = high, flats{}
	}
	if steep := steepShare * (e.high - e.low); steep > 0 {
		if low == e.low {
			e.bottom.see(t, c, low, steep)
		}
		if high == e.high {
			e.top.see(t, c, high, steep)
		}
	}
}

// see counts the runs of a take at a level.
func (f *flats) see(t *channels.Take, c int, level, steep float64) {
	n, w := t.Frames(), t.Width()
	at := func(i int) float64 { return t.Data[i*w+c] }
	for i := 0; i < n; i++ {
		if at(i) != level {
			continue
		}
		begin := i
		for i < n && at(i) == level {
			i++
		}
		f.frames += i - begin
		if begin == 0 || i == n || math.Abs(at(begin-1)-level) < steep || math.Abs(at(i)-level) < steep {
			continue
		}
		switch {
		case i-begin >= longRun:
			f.long++
		case i-begin >= shortRun:
			f.short++
		}
	}
}

// clipped tells whether the runs are those of a sensor that stops.
func (f *flats) clipped() bool { return f.long > 0 || f.short > 1 }

// clips returns the levels at which sensors stop. A level that one channel of
// a group shows, of either sign, holds for every other of the group that
// reaches exactly it.
func clips(extents []extent, l *channels.Layout) []Clip {
	var out []Clip
	for _, g := range l.Groups {
		var levels []float64
		for _, c := range g.Channels {
			if e := &extents[c]; sensed(l.Channels[c].Quantity) {
				if e.top.clipped() {
					levels = append(levels, math.Abs(e.high))
				}
				if e.bottom.clipped() {
					levels = append(levels, math.Abs(e.low))
				}
			}
		}
		for _, c := range g.Channels {
			clip := Clip{Channel: c, Low: math.Inf(-1), High: math.Inf(1)}
			if e := &extents[c]; slices.Contains(levels, math.Abs(e.high)) {
				clip.High = e.high
			}
			if e := &extents[c]; slices.Contains(levels, math.Abs(e.low)) {
				clip.Low = e.low
			}
			if !math.IsInf(clip.Low, 0) || !math.IsInf(clip.High, 0) {
				out = append(out, clip)
			}
		}
	}
	return out
}

// sensed tells whether a quantity comes from a sensor with a range. Places and
// angles rest where they like, at the end of their range too.
func sensed(q channels.Quantity) bool {
	switch q {
	case channels.Position, channels.Velocity, channels.Orientation, channels.JointAngle:
		return false
	}
	return true
}
