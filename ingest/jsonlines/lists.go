package jsonlines

import (
	"bytes"
	"fmt"
	"math"
	"strconv"

	"strandwise/ingest/raw"
)

// readTake takes up an object that is a take.
func (d *reader) readTake(p *parts, line int) error {
	id := over(over(d.file, d.who), p.stated)
	if id.Take == "" {
		if d.taken == 0 {
			d.in.Notice("names no takes, so they are numbered", "")
		}
		id.Take = strconv.Itoa(d.taken + 1)
	}
	lists, err := d.listsOf(p, line)
	if err != nil {
		return err
	}
	if len(d.channels) == 0 {
		return d.fault(line, "", "holds no lists of numbers but the time", "check what the file holds")
	}
	shape, err := d.shape(p, lists, line)
	if err != nil {
		return err
	}
	t := &raw.Take{Identity: id, Layout: d.layoutNow()}
	elements := d.parser.elements[shape.first : shape.first+shape.count]
	lines := d.linesOf(elements, line)
	if t.Time, err = d.times(p.time, elements, lines); err != nil {
		return err
	}
	width := len(d.channels)
	t.Data = make([]float64, shape.count*width)
	for i := range t.Data {
		t.Data[i] = math.NaN()
	}
	for _, l := range lists {
		elements := d.parser.elements[l.first : l.first+l.count]
		for i, e := range elements {
			if t.Data[i*width+l.channel], err = d.value(e, l.channel, lines[i]); err != nil {
				return err
			}
		}
	}
	if stand(t, lines); len(lines) == 0 {
		t.Line = line
	}
	return d.deliver(t, t.Time)
}

// listField is a field of a take that is the list of a channel.
type listField struct {
	field
	channel int
}

// listsOf finds the lists of channels. Channels that are null or not there are
// missing.
func (d *reader) listsOf(p *parts, line int) ([]listField, error) {
	var out []listField
	for _, f := range p.values {
		name := nameOf(p.sensor, f.name)
		if f.kind != list {
			if f.kind != null && !d.leftOut(name) {
				d.in.Notice(fmt.Sprintf("field %q is no channel and is left out", name), "it begins with "+shorten(d.parser.object[f.from:f.to]))
			}
			continue
		}
		c, err := d.columnOf(name, d.firstValue(f), line)
		if err != nil {
			return nil, err
		}
		if c == nil && !d.leftOut(name) { // nothing but missing values
			if c, err = d.addChannel(name, line); err != nil {
				return nil, err
			}
			d.columns[name] = c
		}
		if c != nil && c.channel >= 0 {
			out = append(out, listField{f, c.channel})
		}
	}
	return out, nil
}

// firstValue returns the first element of a list that is not missing, null if
// there is none.
func (d *reader) firstValue(f field) token {
	for _, t := range d.parser.elements[f.first : f.first+f.count] {
		if _, how := read(d.parser.object, t); how != isMissing {
			return t
		}
	}
	return token{kind: null, from: f.from, to: f.from}
}

// shape returns a list as long as the take. All must be.
func (d *reader) shape(p *parts, lists []listField, line int) (*field, error) {
	var shape *field
	if p.time != nil {
		shape = p.time
	}
	for i := range lists {
		f := &lists[i].field
		if shape == nil {
			shape = f
		}
		if f.count != shape.count {
			return nil, d.fault(line, "", fmt.Sprintf("%s holds %d values, but %s holds %d", f.name, f.count, shape.name, shape.count), "write lists of one length in each object")
		}
	}
	if shape == nil {
		return nil, d.fault(line, "", "holds no lists of numbers", "leave it out or record it again")
	}
	if p.time == nil && !d.clock.none {
		return nil, d.fault(line, "", fmt.Sprintf("has no field %q, which holds the times of others", d.clock.Name), "give every take its times")
	}
	return shape, nil
}

// linesOf returns the lines that elements of an object stand in.
func (d *reader) linesOf(elements []token, line int) []int {
	out := make([]int, len(elements))
	at := 0
	for i, e := range elements {
		line += bytes.Count(d.parser.object[at:e.from], []byte{'\n'})
		out[i], at = line, e.from
	}
	return out
}

// times reads the times of a take, or counts its frames.
func (d *reader) times(f *field, elements []token, lines []int) ([]float64, error) {
	out := make([]float64, len(elements))
	for i, e := range elements {
		out[i] = float64(i)
		if f == nil {
			continue
		}
		var problem string
		if out[i], problem = d.clock.at(d.parser.object, e, i == 0); problem != "" {
			return nil, d.fault(lines[i], d.clock.Name, problem, "repair the time, or leave the take out")
		}
	}
	return out, nil
}
