package delimited

import (
	"bytes"
	"math"
	"strconv"

	"strandwise/ingest/table"
)

// clockKind is how a clock column is read.
type clockKind int

const (
	near   clockKind = iota // a number
	far                     // a number so large that a float64 would lose its last digits
	stamps                  // dates, as RFC 3339 writes them
)

// farAway is the first clock value that is read as far: ten digits, so that
// five decimals still fit in a float64.
const farAway = 1e9

// clock reads the times of one file, in the unit of its column.
type clock struct {
	table.Clock
	kind clockKind
}

// settle chooses how to read the column by its first value.
func (c *clock) settle(first []byte, point byte) {
	first = bytes.TrimSpace(first)
	if c.Frames {
		return
	}
	if _, _, ok := table.Stamp(string(first)); ok {
		c.kind, c.Unit = stamps, "s"
		return
	}
	if v, how := read(first, point); how == isNumber && math.Abs(v) >= farAway {
		c.kind = far
	}
}

// split reads a far value as whole units and a fraction.
func (c *clock) split(text []byte, point byte) (whole int64, fraction float64, how reading) {
	text = bytes.TrimSpace(text)
	if c.kind == stamps {
		whole, fraction, ok := table.Stamp(string(text))
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
