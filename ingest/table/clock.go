package table

import (
	"fmt"
	"math"

	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// ticks is how many of each unit make a second.
var ticks = map[string]float64{"s": 1, "ms": 1e3, "us": 1e6, "ns": 1e9}

const (
	// farAway is the first clock value, in any unit, that is held from the
	// start of its take: ten digits, beyond which a float64 has fewer than
	// five decimals left.
	farAway = 1e9
	// epochAway is the time in seconds beyond which a clock counts from an
	// epoch and not from the start of a recording: some three years.
	epochAway = 1e8
)

// Clock turns the values of a time column into the times of takes. Values come
// in by [Clock.At], [Clock.Whole] or [Clock.Number]; when a take is whole,
// [Clock.Finish] turns them into seconds.
//
// A clock that is far from zero counts from the first value of each take, with
// whole units subtracted as integers and fractions as fractions, so that
// nanoseconds since 1970 lose nothing.
type Clock struct {
	Name   string // of the column, empty when there is none
	Frames bool   // counts frames
	Unit   string // s, ms, us or ns, empty while unknown

	whole    int64 // first value of the take when it is far, else 0
	fraction float64
}

// At takes in a value of whole units and a fraction of one, and returns what
// stands for it until Finish. The first value of a take is said to be so.
func (c *Clock) At(whole int64, fraction float64, first bool) float64 {
	if first {
		c.whole, c.fraction = 0, 0
		if math.Abs(float64(whole)) >= farAway {
			c.whole, c.fraction = whole, fraction
		}
	}
	since := whole - c.whole
	if (since > 0) != (whole > c.whole) { // too far for an int64
		return float64(whole) - float64(c.whole)
	}
	return float64(since) + (fraction - c.fraction)
}

// Whole takes in a value of whole units, as At does.
func (c *Clock) Whole(v int64, first bool) float64 { return c.At(v, 0, first) }

// Number takes in any number of units, as At does.
func (c *Clock) Number(v float64, first bool) float64 {
	whole, fraction := math.Modf(v)
	if !(math.Abs(whole) < 1<<62) {
		return c.At(0, v, first)
	}
	return c.At(int64(whole), fraction, first)
}

// Finish turns the times of a whole take into seconds in place, and says in the
// take what they count. The first take of a file settles the unit if nothing
// has: by the steps of series, which are the take's times or, where several
// clocks are merged in it, those of one. A clock that counts from an epoch
// begins at 0 in each take, whose origin is noted.
//
// The error is a fault: the unit is not stated and cannot be told.
func (c *Clock) Finish(t *raw.Take, series []float64, in raw.Input) error {
	if c.Frames {
		t.Clock = raw.Frames
		return nil
	}
	unit := c.Unit
	if unit == "" && len(series) < 2 {
		unit = "s" // such a take is refused later, for what is wrong with it
	}
	if unit == "" {
		evidence, err := c.infer(series)
		if err != nil {
			return &fault.Error{
				File: in.Name, Line: t.Line, Take: t.Take, Channel: c.Name, Problem: err.Error(),
				Remedy: "state the unit of time with --time-unit, or name the column frame if it counts frames",
			}
		}
		unit = c.Unit
		in.Notice(fmt.Sprintf("time column %q states no unit and is read as %s", c.Name, unit), evidence)
	}
	var fromEpoch bool
	if t.Origin, fromEpoch = c.seconds(t.Time, ticks[unit]); fromEpoch {
		in.Notice(fmt.Sprintf("time column %q counts from a distant epoch, so each take's clock is set to begin at 0", c.Name), "")
	}
	return nil
}

// seconds turns times into seconds. Times that count from an epoch are left to
// count from the start of the take, and that start is returned.
func (c *Clock) seconds(times []float64, per float64) (origin float64, fromEpoch bool) {
	start := float64(c.whole) + c.fraction
	if fromEpoch = math.Abs(start)/per >= epochAway; fromEpoch {
		origin, start = start/per, 0
	}
	for i, t := range times {
		times[i] = (start + t) / per
	}
	return origin, fromEpoch
}
