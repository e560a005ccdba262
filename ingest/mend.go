package ingest

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"strandwise/ingest/clock"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// Repair says what of a recording's clock and gaps may be repaired, and how.
// The zero value allows nothing: what is wrong is a fault.
type Repair struct {
	Clock bool // put every recording onto a uniform clock, filling gaps and missing values
	Order bool // sort frames that are out of order
	Merge bool // merge frames of the same time into their mean
	Split bool // split a recording at gaps too long to fill

	Rate       float64 // of the uniform clock in Hz; 0 is that of the recording's fastest sensor
	Cubic      bool    // fill by a cubic and not by a straight line
	LongestGap int     // missing frames in a row that may be filled; 0 is clock.DefaultLongestGap, negative fills none
}

// longest returns how many missing frames in a row may be filled.
func (r Repair) longest() int {
	switch {
	case r.LongestGap == 0:
		return clock.DefaultLongestGap
	case r.LongestGap < 0:
		return 0
	}
	return r.LongestGap
}

// any tells whether recordings are put onto a uniform clock at all: whatever
// else is allowed only makes sense there.
func (r Repair) any() bool { return r.Clock || r.Order || r.Merge || r.Split || r.Rate > 0 }

func (r Repair) options() clock.Options {
	o := clock.Options{Rate: r.Rate, LongestGap: r.LongestGap, Sort: r.Order, Merge: r.Merge, Split: r.Split}
	if r.Cubic {
		o.Interpolation = clock.Cubic
	}
	return o
}

// mend repairs a raw take as far as that is allowed, in seconds and the units
// of the run. It returns the pieces it became, in order; without repairs that
// is the take itself, found to need none.
func (p *pass) mend(t *raw.Take, s source) ([]piece, error) {
	o := p.r.options.Repair
	if !o.any() {
		if p.r.options.Lenient {
			return []piece{{Take: t}}, nil
		}
		if e := unsound(t, o.longest()); e != nil {
			return nil, p.place(e, t, s)
		}
		return []piece{{Take: t}}, nil
	}
	width := len(p.r.frame.layout.Channels)
	isInfinite := func(v float64) bool { return math.IsInf(v, 0) }
	if i := slices.IndexFunc(t.Data, isInfinite); i >= 0 {
		return nil, p.place(infinite(i, width), t, s)
	}
	done, err := clock.Repair(clock.Series{Time: t.Time, Data: t.Data, Width: width}, o.options())
	var refused *clock.Refusal
	if errors.As(err, &refused) {
		return nil, p.place(refusal(refused), t, s)
	}
	if err != nil {
		return nil, err
	}
	p.repairs.add(done.Counts)
	return pieces(t, done), nil
}

// piece is what a raw take becomes, or a stretch of it.
type piece struct {
	*raw.Take
	suffix string // added to the id where there are several
}

// pieces returns the stretches a repaired take became. They keep its identity;
// where there are several, each is named by its number.
func pieces(t *raw.Take, done *clock.Repaired) []piece {
	out := make([]piece, len(done.Pieces))
	for i, stretch := range done.Pieces {
		n := *t
		n.Time, n.Data = stretch.Time, stretch.Data
		n.Line, n.Jumps = t.LineOf(stretch.Row), nil
		out[i] = piece{Take: &n}
		if len(out) > 1 {
			out[i].suffix = fmt.Sprintf("#%d", i+1)
		}
	}
	return out
}

// trouble is what is wrong at one frame of a take, before it is known to the
// file.
type trouble struct {
	frame, channel  int // channel −1 for none in particular
	problem, remedy string
}

// place makes a trouble a fault of the file.
func (p *pass) place(e *trouble, t *raw.Take, s source) error {
	f := &fault.Error{File: s.name, Line: t.LineOf(max(e.frame, 0)), Take: takeID(t.Take, s), Problem: e.problem, Remedy: e.remedy}
	if f.Line == 0 && e.frame >= 0 {
		f.Problem = fmt.Sprintf("frame %d: %s", e.frame, e.problem)
	}
	if e.channel >= 0 {
		f.Channel = p.r.frame.layout.Channels[e.channel].Name
	}
	return f
}

// unsound reports the first thing wrong with a take that no repair was allowed
// for: values missing, frames out of order or repeated, or missing for longer
// than may be bridged.
func unsound(t *raw.Take, longest int) *trouble {
	width := 0
	if n := len(t.Time); n > 0 {
		width = len(t.Data) / n
	}
	for i, v := range t.Data {
		if math.IsNaN(v) {
			return &trouble{i / width, i % width, "has no value (an empty field, NaN or the like)", fmt.Sprintf("leave the take out, or allow --repair clock, which fills up to %s", frames(longest))}
		}
		if math.IsInf(v, 0) {
			return infinite(i, width)
		}
	}
	for i := 1; i < len(t.Time); i++ {
		switch {
		case t.Time[i] < t.Time[i-1]:
			return &trouble{i, -1, fmt.Sprintf("its time, %g s, comes before that of the frame above", t.Time[i]), "allow --repair order, which sorts the frames, or tell the takes apart by a take column"}
		case t.Time[i] == t.Time[i-1]:
			return &trouble{i, -1, fmt.Sprintf("its time, %g s, is that of the frame above again", t.Time[i]), "allow --repair duplicates, which merges the frames, or tell the takes apart by a take column"}
		}
	}
	for _, g := range clock.Inspect(t.Time).Gaps {
		if g.Frames > longest {
			return &trouble{g.Row, -1, fmt.Sprintf("%s missing after it, a gap of %.3g s", were(g.Frames), g.Length), fmt.Sprintf("allow --repair split, or a --longest-gap of more than %s", frames(longest))}
		}
	}
	return nil
}

// refusal says why a repair was refused and what would allow it.
func refusal(r *clock.Refusal) *trouble {
	e := &trouble{frame: r.Row, channel: r.Column, problem: r.Error(), remedy: "leave the take out or record it again"}
	switch r.Reason {
	case clock.OutOfOrder:
		e.remedy = "allow --repair order, which sorts the frames"
	case clock.Repeated:
		e.remedy = "allow --repair duplicates, which merges the frames"
	case clock.LongGap:
		e.remedy = fmt.Sprintf("allow --repair split, or a --longest-gap of more than %s", frames(r.Limit))
	case clock.WrongRate:
		e.remedy = "state another --to-rate"
	}
	return e
}

// infinite is the trouble with value i of a take that is no finite number.
func infinite(i, width int) *trouble {
	return &trouble{i / width, i % width, "is not a finite number", "repair the value, or leave the take out"}
}

func frames(n int) string {
	if n == 1 {
		return "1 frame"
	}
	return fmt.Sprintf("%d frames", n)
}

func were(n int) string {
	if n == 1 {
		return "1 frame is"
	}
	return fmt.Sprintf("%d frames are", n)
}

// Repairs counts what was repaired, over all recordings of a pass. The names in
// JSON stand in the manifest of a set.
type Repairs struct {
	Recordings int `json:"recordings"`         // put onto a uniform clock
	Sorted     int `json:"frames_sorted"`      // that came before the frame above
	Merged     int `json:"frames_merged"`      // into another of the same time
	Moved      int `json:"frames_moved"`       // further than a thousandth of a step
	Gaps       int `json:"gaps_filled"`        // no longer than allowed
	Made       int `json:"frames_made"`        // to fill them
	Values     int `json:"values_filled"`      // in frames that lacked some channels
	LeftOut    int `json:"frames_left_out"`    // outside of all pieces
	Splits     int `json:"splits"`             // at gaps too long to fill
	Rates      int `json:"sensors_rate_moved"` // brought to another rate
	Cuts       int `json:"cuts"`               // takes cut from longer recordings
}

func (r *Repairs) add(c clock.Counts) {
	r.Recordings++
	r.Sorted += c.Reversals
	r.Merged += c.Duplicates
	r.Moved += c.Moved
	r.Gaps += c.Gaps
	r.Made += c.Made
	r.Values += c.Values
	r.LeftOut += c.LeftOut
	r.Splits += c.Pieces - 1
	r.Rates += len(c.Changes)
}
