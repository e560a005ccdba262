package jsonlines

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"strings"

	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
	"strandwise/ingest/table"
)

// form is what an object of a file stands for.
type form int

const (
	unknown form = iota
	samples      // frames
	takes
)

// reader turns the objects of one file into takes.
type reader struct {
	in     raw.Input
	yield  func(*raw.Take, error) bool
	source *objects
	parser parser
	slow   bool // read every object by the slow path, for tests

	form    form
	clock   *clock   // nil before the first frame
	pending *pending // an object without time, before the clock is known

	names    map[string]role    // of the fields that are no channels, by name
	columns  map[string]*column // of the others, by name with their sensor
	channels []raw.Column
	layout   *raw.Layout // of channels, nil when they have become more
	frozen   bool        // a take was handed on, so no channel may come in

	file     raw.Identity // stated for the rest of the file
	who      raw.Identity // of the take being read
	named    bool         // by its frames
	take     *frames      // nil before its first frame
	taken    int          // takes handed on
	patterns []*pattern   // of its frames
	last     int          // pattern that fitted last
	row      []float64    // a frame on its way
	got      []value      // the same by the slow path
	parts    parts
}

// pending is an object held back.
type pending struct {
	object []byte
	line   int
}

// read reads the whole file.
func (d *reader) read() error {
	for {
		err := d.source.begin()
		if err == io.EOF {
			return d.end()
		}
		if err != nil {
			return d.broken(err)
		}
		n := 0
		if d.take != nil && !d.slow {
			n = d.match(d.source.text())
		}
		if n == 0 {
			object, err := d.source.whole()
			if err != nil {
				return d.broken(err)
			}
			if err := d.object(object, d.source.line); err != nil {
				return err
			}
			n = len(object)
		}
		d.source.skip(n)
	}
}

// end finishes the last take.
func (d *reader) end() error {
	if err := d.release(nil); err != nil {
		return err
	}
	if err := d.finish(); err != nil {
		return err
	}
	switch {
	case d.taken > 0:
		return nil
	case !d.source.any:
		return d.fault(0, "", "is empty", "leave it out or record it again")
	}
	return d.fault(0, "", "holds no samples: no field but those of identity and time holds numbers", "check what the file holds")
}

// broken makes an error of the text a fault. It passes on what is one already.
func (d *reader) broken(err error) error {
	var known *fault.Error
	var t *textError
	switch {
	case errors.As(err, &known):
		return err
	case errors.As(err, &t):
		return d.fault(t.line, "", t.problem, t.remedy)
	}
	return &fault.Error{File: d.in.Name, Line: d.source.line, Problem: "cannot be read", Err: err, Remedy: "copy or record it again"}
}

func (d *reader) fault(line int, channel, problem, remedy string) *fault.Error {
	e := &fault.Error{File: d.in.Name, Line: line, Channel: channel, Problem: problem, Remedy: remedy}
	if d.take != nil {
		e.Take = d.who.Take
	}
	return e
}

// unsound makes what is wrong with the text of an object a fault.
func (d *reader) unsound(err error, object []byte, line int) error {
	var syntax *json.SyntaxError
	if errors.As(err, &syntax) {
		line += bytes.Count(object[:min(int(syntax.Offset), len(object))], []byte{'\n'})
	}
	return d.fault(line, "", err.Error(), "repair the object; a missing value is null")
}

// parts are the fields of an object by what they are for.
type parts struct {
	stated raw.Identity
	sensor string
	time   *field  // nil for none
	values []field // all others
	lists  bool    // some are lists
}

// object reads an object by the slow path.
func (d *reader) object(object []byte, line int) error {
	if err := d.parser.parse(object); err != nil {
		return d.unsound(err, object, line)
	}
	p, err := d.sort(line)
	if err != nil {
		return err
	}
	if !p.holdsFrames() {
		return d.header(p, line)
	}
	if d.clock == nil {
		if p.time == nil && d.pending == nil {
			d.pending = &pending{bytes.Clone(object), line}
			return nil
		}
		if d.pending != nil {
			if err := d.release(p.time); err != nil {
				return err
			}
			return d.object(object, line)
		}
		d.setClock(p.time)
	}
	switch is := p.form(); {
	case d.form == unknown:
		d.form = is
	case d.form != is:
		return d.fault(line, "", "holds a frame where others hold a take, or the other way round", "keep the two in files of their own")
	}
	if d.form == takes {
		return d.readTake(p, line)
	}
	return d.readFrame(p, line)
}

// release reads the object held back. It is a frame when the one after it does
// not know a time either, else it states what is so for the rest of the file.
func (d *reader) release(time *field) error {
	held := d.pending
	if held == nil {
		return nil
	}
	if time == nil {
		d.setClock(nil)
		d.pending = nil
		return d.object(held.object, held.line)
	}
	d.pending = nil
	if err := d.parser.parse(held.object); err != nil {
		return d.unsound(err, held.object, held.line)
	}
	p, err := d.sort(held.line)
	if err != nil {
		return err
	}
	return d.header(p, held.line)
}

// form tells whether the object holds a frame or a take.
func (p *parts) form() form {
	if p.time != nil && p.time.kind == list || p.time == nil && p.lists {
		return takes
	}
	return samples
}

// holdsFrames tells whether the object holds a frame or more, and does not just
// say what they belong to.
func (p *parts) holdsFrames() bool {
	for _, f := range p.values {
		if f.kind == number || f.kind == list {
			return true
		}
	}
	return p.time != nil
}

// role is what a field is for, by its name.
type role int

const (
	valueRole role = iota
	identityRole
	sensorRole
)

// roleOf returns what the field of a name is for.
func (d *reader) roleOf(name string) role {
	r, ok := d.names[name]
	if ok {
		return r
	}
	switch {
	case table.Key(name) != "":
		r = identityRole
	case strings.EqualFold(name, "sensor"):
		r = sensorRole
	}
	if d.names == nil {
		d.names = map[string]role{}
	}
	if len(d.names) < maxChannels {
		d.names[strings.Clone(name)] = r
	}
	return r
}

// sort sorts the fields of the object that was parsed last. What it returns is
// valid until the next object.
func (d *reader) sort(line int) (*parts, error) {
	p := &d.parts
	*p = parts{values: p.values[:0]}
	frame := -1
	for i, f := range d.parser.fields {
		plain := f.kind != list && f.kind != nested
		switch r := d.roleOf(f.name); {
		case r == identityRole && plain:
			own := p.stated.Field(table.Key(f.name))
			if *own != "" {
				return nil, d.fault(line, "", fmt.Sprintf("states the %s twice", table.Key(f.name)), "rename one of the fields")
			}
			*own = strings.TrimSpace(d.textOf(f.token))
			if what := table.Unclean(*own); what != "" {
				return nil, d.fault(line, "", fmt.Sprintf("%s %q %s", f.name, *own, what), "repair the name")
			}
		case r == sensorRole && plain:
			p.sensor = strings.TrimSpace(d.textOf(f.token))
		case d.isClock(f) && p.time == nil:
			p.time = &d.parser.fields[i]
		case d.clock == nil && table.IsFrame(f.name) && frame < 0 && d.isTime(f):
			frame = i
			p.values = append(p.values, f)
		default:
			p.values = append(p.values, f)
		}
	}
	if p.time == nil && frame >= 0 {
		p.time = &d.parser.fields[frame]
		for i, f := range p.values {
			if f.name == p.time.name {
				p.values = append(p.values[:i], p.values[i+1:]...)
				break
			}
		}
	}
	for _, f := range p.values {
		p.lists = p.lists || f.kind == list
	}
	return p, nil
}

// textOf returns a token as text: what stands within quotes, or the number as
// it is written. Null is empty.
func (d *reader) textOf(t token) string {
	switch t.kind {
	case null:
		return ""
	case text:
		return unquote(d.parser.object[t.from:t.to])
	}
	return string(d.parser.object[t.from:t.to])
}
