package delimited

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
	"time"
)

// ticks is how many of each unit make a second.
var ticks = map[string]float64{"s": 1, "ms": 1e3, "us": 1e6, "ns": 1e9}

var timeWords = []string{"time", "t", "timestamp", "elapsed"}

// timeUnits maps the spellings of a time unit in a header to the unit.
var timeUnits = map[string]string{
	"s": "s", "sec": "s", "secs": "s", "second": "s", "seconds": "s",
	"ms": "ms", "msec": "ms", "millis": "ms", "milliseconds": "ms",
	"us": "us", "µs": "us", "μs": "us", "usec": "us", "micros": "us", "microseconds": "us",
	"ns": "ns", "nsec": "ns", "nanos": "ns", "nanoseconds": "ns",
}

// timeColumn tells whether a header names a time, and the unit it states:
// "time", "t_ms", "timestamp [us]", "Time (s)".
func timeColumn(header string) (unit string, ok bool) {
	words := strings.FieldsFunc(strings.ToLower(header), func(r rune) bool {
		return strings.ContainsRune("_ .[]()", r)
	})
	switch {
	case len(words) == 0 || !slices.Contains(timeWords, words[0]) || len(words) > 2:
		return "", false
	case len(words) == 1:
		return "", true
	}
	unit, ok = timeUnits[words[1]]
	return unit, ok
}

// isFrame tells whether a header names a frame number.
func isFrame(header string) bool {
	switch strings.ToLower(header) {
	case "frame", "frame_index", "index":
		return true
	}
	return false
}

// clockKind is how a clock column is read.
type clockKind int

const (
	near   clockKind = iota // a number
	far                     // a number so large that a float64 would lose its last digits
	stamps                  // dates, as RFC 3339 writes them
)

const (
	// farAway is the first clock value that is read as far: ten digits, so
	// that five decimals still fit in a float64.
	farAway = 1e9
	// epochAway is the time in seconds beyond which a clock counts from an
	// epoch and not from the start of a recording: some three years.
	epochAway = 1e8
)

// clock reads the times of one file, in the unit of its column.
type clock struct {
	name   string // of the column, empty when rows are counted
	frames bool   // counts frames
	unit   string // s, ms, us or ns, empty while unknown
	kind   clockKind

	// A far clock counts from the first row of its take: whole units are
	// subtracted as integers and fractions as fractions, so nothing is lost.
	whole    int64
	fraction float64
}

// settle chooses how to read the column by its first value.
func (c *clock) settle(first []byte, point byte) {
	first = bytes.TrimSpace(first)
	if c.frames {
		return
	}
	if _, _, ok := stamp(first); ok {
		c.kind, c.unit = stamps, "s"
		return
	}
	if v, how := read(first, point); how == isNumber && math.Abs(v) >= farAway {
		c.kind = far
	}
}

// since gives a far value from the start of the take.
func (c *clock) since(whole int64, fraction float64) float64 {
	return float64(whole-c.whole) + (fraction - c.fraction)
}

// split reads a far value as whole units and a fraction.
func (c *clock) split(text []byte, point byte) (whole int64, fraction float64, how reading) {
	text = bytes.TrimSpace(text)
	if c.kind == stamps {
		whole, fraction, ok := stamp(text)
		if !ok {
			return 0, 0, isText
		}
		return whole, fraction, isNumber
	}
	v, how := read(text, point)
	if how != isNumber {
		return 0, 0, how
	}
	digits, rest := text, []byte(nil)
	if i := bytes.IndexAny(text, ".,"); i >= 0 {
		digits, rest = text[:i], text[i+1:]
	}
	whole, err := strconv.ParseInt(string(digits), 10, 64)
	if err == nil && len(rest) > 0 {
		fraction, err = strconv.ParseFloat("0."+string(rest), 64)
	}
	if err != nil || text[0] == '-' || bytes.ContainsAny(rest, "eE") { // an unusual notation
		if math.Abs(v) >= 1<<63 {
			return 0, 0, isInfinite
		}
		return int64(v), v - math.Trunc(v), isNumber
	}
	return whole, fraction, isNumber
}

// stamp reads a date and time of day as whole seconds and the fraction of a
// second since 1970. It takes RFC 3339, a space in place of the T, and a stamp
// without an offset, whose time is taken as it stands.
func stamp(text []byte) (whole int64, fraction float64, ok bool) {
	if len(text) < len("2006-01-02T15:04:05") || text[4] != '-' {
		return 0, 0, false
	}
	var buf [40]byte // on the stack
	s := append(buf[:0], text...)
	if s[10] == ' ' {
		s[10] = 'T'
	}
	t, err := time.Parse(time.RFC3339Nano, string(s))
	if err != nil {
		t, err = time.Parse("2006-01-02T15:04:05.999999999", string(s))
	}
	return t.Unix(), float64(t.Nanosecond()) / 1e9, err == nil
}

// seconds turns the times of a take into seconds in place. A far clock that
// does not count from an epoch gets its start back; one that does is left to
// count from the start of the take, and its origin is returned.
func (c *clock) seconds(times []float64) (origin float64, fromEpoch bool) {
	per := ticks[c.unit]
	start := 0.0
	if c.kind != near {
		start = float64(c.whole) + c.fraction
		if fromEpoch = math.Abs(start)/per >= epochAway; fromEpoch {
			origin, start = start/per, 0
		}
	}
	for i, t := range times {
		times[i] = (start + t) / per
	}
	return origin, fromEpoch
}

// Recordings of body motion have between these many frames per second (common
// practice: the slowest activity monitors and the fastest inertial sensors).
const slowest, fastest = 5, 2000

// infer finds the unit of a clock column that does not state one, from the
// times of the first take and the recordings' likely frame rates, and gives
// the evidence.
func (c *clock) infer(times []float64) (evidence string, err error) {
	step, even := medianStep(times)
	if step == 1 && even {
		return "", errors.New("counts 1, 2, 3: that may be milliseconds or frames")
	}
	for unit, per := range ticks { // at most one fits: they are 1000 apart, the limits 400
		if rate := per / step; rate >= slowest && rate <= fastest {
			c.unit = unit
			return fmt.Sprintf("its median step of %.6g makes that %.4g frames per second", step, rate), nil
		}
	}
	if unit := epochUnit(float64(c.whole)); c.kind == far && unit != "" {
		c.unit = unit
		return "as such its first value lies in " + time.Unix(int64(float64(c.whole)/ticks[unit]), 0).UTC().Format("January 2006"), nil
	}
	return "", fmt.Errorf("has a median step of %.6g, which fits no unit: no frame rate of %d to %d per second", step, slowest, fastest)
}

// epochUnit returns the unit in which a clock value counts from 1970 to a date
// between 2001 and 2100, empty for none.
func epochUnit(v float64) string {
	for unit, per := range ticks {
		if v/per >= 1e9 && v/per < 4.1e9 {
			return unit
		}
	}
	return ""
}

// medianStep returns the median of the first steps, and whether all are alike.
func medianStep(times []float64) (median float64, even bool) {
	var steps []float64
	for i := 1; i < min(len(times), 4097); i++ {
		steps = append(steps, times[i]-times[i-1])
	}
	if len(steps) == 0 {
		return 0, false
	}
	slices.Sort(steps)
	return steps[len(steps)/2], steps[0] == steps[len(steps)-1]
}
