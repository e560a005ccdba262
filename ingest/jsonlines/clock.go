package jsonlines

import (
	"fmt"
	"math"
	"strings"

	"strandwise/ingest/raw"
	"strandwise/ingest/table"
)

// clock reads the times of one file.
type clock struct {
	table.Clock
	none bool // no field states the time; the frames are counted
}

// setClock makes a field the clock of the file; nil counts the frames.
func (d *reader) setClock(f *field) {
	d.clock = &clock{}
	c := &d.clock.Clock
	if f == nil {
		d.clock.none, c.Frames = true, true
		return
	}
	c.Name = strings.Clone(f.name)
	unit, isTime := table.IsTime(f.name)
	switch {
	case !isTime:
		c.Frames = true
	case d.isStamp(*f):
		c.Unit = "s"
	case unit == "":
		c.Unit = d.in.TimeUnit
	default:
		c.Unit = unit
	}
}

// isClock tells whether a field is the clock or, while there is none, can be.
func (d *reader) isClock(f field) bool {
	if d.clock != nil {
		return f.name == d.clock.Name && !d.clock.none
	}
	_, named := table.IsTime(f.name)
	return named && d.isTime(f)
}

// isTime tells whether a field, or the first element of a list, can be a time.
func (d *reader) isTime(f field) bool {
	t := d.firstOf(f)
	if _, how := read(d.parser.object, t); how == isNumber {
		return true
	}
	return f.kind == list && f.count == 0 || d.isStamp(f)
}

// firstOf returns the field's value, or the first of a list.
func (d *reader) firstOf(f field) token {
	if f.kind == list && f.count > 0 {
		return d.parser.elements[f.first]
	}
	return f.token
}

func (d *reader) isStamp(f field) bool {
	t := d.firstOf(f)
	if t.kind != text {
		return false
	}
	_, _, ok := table.Stamp(d.textOf(t))
	return ok
}

// at reads a time of an object, the first of its take or a later one.
func (c *clock) at(object []byte, t token, first bool) (now float64, problem string) {
	bare, _ := t.bare(object)
	if bare.to-bare.from >= farDigits && !c.Frames {
		if whole, fraction, ok := split(object[bare.from:bare.to]); ok {
			return c.At(whole, fraction, first), ""
		}
	}
	switch v, how := read(object, t); {
	case how == isText && t.kind == text:
		seconds, fraction, ok := table.Stamp(unquote(object[t.from:t.to]))
		if !ok || c.Unit != "s" || c.Frames {
			return 0, fmt.Sprintf("%s is no time like those before", shorten(object[t.from:t.to]))
		}
		return c.At(seconds, fraction, first), ""
	case how == isMissing:
		return 0, "holds no time"
	case how != isNumber:
		return 0, fmt.Sprintf("%s is no time", shorten(object[t.from:t.to]))
	case c.Frames && v != math.Trunc(v):
		return 0, fmt.Sprintf("%g is no whole number", v)
	default:
		return c.Number(v, first), ""
	}
}

// shorten shows a value in a message.
func shorten(b []byte) string {
	const most = 40
	if len(b) > most {
		return fmt.Sprintf("%q", string(b[:most])+"…")
	}
	return fmt.Sprintf("%q", b)
}

// finishClock turns the times of a take into seconds. The unit of a clock that
// does not state one is found by the steps of one sensor.
func (d *reader) finishClock(t *raw.Take, series []float64) error {
	return d.clock.Finish(t, series, d.in)
}
