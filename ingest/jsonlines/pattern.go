package jsonlines

import (
	"bytes"
	"math"
	"slices"
)

// Frames of one take look alike but for their numbers. A pattern is what they
// share: the text around the values of one frame. A frame that fits it word for
// word is read without looking at its structure again, and states the same
// identity. What does not fit is read by the slow path, which alone decides
// what is right and wrong.

const (
	none    = -1
	skipped = -1 // channel of a value that is left out
)

// pattern is the text around the values of a frame.
type pattern struct {
	slots  []slot
	end    []byte // text after the last value
	clock  int    // slot of the time, or none
	sensor int32
}

// slot is where a value stands.
type slot struct {
	before  []byte // text between it and the value before
	channel int    // or skipped
	at      token  // where it stood in the frame that made the pattern
}

// maxPatterns is how many patterns of a take are kept.
const maxPatterns = 8

// add adds a slot. The slots of values are added in their order. A nil pattern
// takes none.
func (x *pattern) add(t token, channel int) {
	if x != nil {
		x.slots = append(x.slots, slot{channel: channel, at: t})
	}
}

// addClock adds the slot of the time, which may stand among those of the values.
func (x *pattern) addClock(t token) {
	if x == nil {
		return
	}
	x.clock = len(x.slots)
	for x.clock > 0 && x.slots[x.clock-1].at.from > t.from {
		x.clock--
	}
	x.slots = slices.Insert(x.slots, x.clock, slot{channel: skipped, at: t})
}

// keep keeps the pattern of the frame that was parsed last.
func (d *reader) keep(x *pattern, sensor int32) {
	if x == nil {
		return
	}
	x.sensor = sensor
	object := bytes.Clone(d.parser.object)
	from := 0
	for i := range x.slots {
		s := &x.slots[i]
		if s.at.kind == list || s.at.kind == nested {
			return // left out; of any length
		}
		s.before, from = object[from:s.at.from], s.at.to
	}
	x.end = object[from:]
	d.patterns = append(d.patterns, x)
	d.last = len(d.patterns) - 1
}

// match reads the frame at the start of b if it fits a pattern, and returns its
// length, 0 if it fits none. The pattern after the one that fitted last is
// tried first: sensors tend to take turns.
func (d *reader) match(b []byte) int {
	for range d.patterns {
		if d.last++; d.last >= len(d.patterns) {
			d.last = 0
		}
		if n := d.fit(d.patterns[d.last], b); n > 0 {
			return n
		}
	}
	return 0
}

// fit reads the frame at the start of b by one pattern.
func (d *reader) fit(x *pattern, b []byte) int {
	t := d.take
	d.row = append(d.row[:0], t.blank...)
	i, now := 0, float64(len(t.time))
	for k := range x.slots {
		s := &x.slots[k]
		if !bytes.HasPrefix(b[i:], s.before) {
			return 0
		}
		i += len(s.before)
		v, n := scan(b[i:], s.channel == skipped)
		if n == 0 {
			return 0
		}
		if s.channel >= 0 {
			d.row[s.channel] = v
		} else if k == x.clock {
			var problem string
			if now, problem = d.clock.at(b, token{kindOf(b[i]), i, i + n}, false); problem != "" {
				return 0
			}
		}
		i += n
	}
	if !bytes.HasPrefix(b[i:], x.end) {
		return 0
	}
	t.add(d.source.line, now, x.sensor, d.row)
	return i + len(x.end)
}

// kindOf tells text from numbers by the first byte of a value.
func kindOf(c byte) kind {
	if c == '"' {
		return text
	}
	return number
}

// scan reads the value that b begins with: a number, in quotes or not, or null
// or NaN, which give NaN; of a value to be skipped, any that has no parts. It
// returns the value's length, 0 for anything else. B ends in a byte that is
// part of no value.
func scan(b []byte, skip bool) (v float64, n int) {
	switch c := b[0]; {
	case c == '"':
		return scanText(b, skip)
	case c == 'n' && bytes.HasPrefix(b, []byte("null")):
		return math.NaN(), 4
	case c == 'N' && bytes.HasPrefix(b, nan):
		return math.NaN(), 3
	case skip && c == 't' && bytes.HasPrefix(b, []byte("true")):
		return 0, 4
	case skip && c == 'f' && bytes.HasPrefix(b, []byte("false")):
		return 0, 5
	}
	if v, n = scanNumber(b, !skip); math.IsInf(v, 0) {
		return 0, 0
	}
	return v, n
}

// scanText reads a text without escapes.
func scanText(b []byte, skip bool) (v float64, n int) {
	end := 1
	for ; b[end] != '"'; end++ {
		if b[end] < ' ' || b[end] == '\\' {
			return 0, 0
		}
	}
	end++
	if skip {
		return 0, end
	}
	v, how := read(b, token{text, 0, end})
	if how != isNumber && how != isMissing {
		return 0, 0
	}
	return v, end
}
