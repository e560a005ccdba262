package jsonlines

import (
	"encoding/binary"
	"fmt"
	"math"
	"slices"

	"strandwise/ingest/raw"
)

// frames is a take being read frame by frame.
type frames struct {
	width  int       // columns of data
	blank  []float64 // a frame that lacks them all
	time   []float64
	data   []float64
	lines  []int
	sensor []int32 // whose sample each frame is
	of     []sensor
	known  map[string]int32 // sensors by name, or by their columns

	key     []byte // for looking up sensors
	columns []int
}

// sensor is a source of frames: those of one name or, where objects name none,
// those that hold the same fields.
type sensor struct {
	columns map[int]bool
	last    float64 // time of its last frame
	back    bool    // some frame of it came before another in time
}

// readFrame takes up an object that is a frame.
func (d *reader) readFrame(p *parts, line int) error {
	if err := d.identify(p.stated, line); err != nil {
		return err
	}
	if p.time == nil && !d.clock.none {
		return d.fault(line, "", fmt.Sprintf("has no field %q, which holds the time of others", d.clock.Name), "give every frame a time")
	}
	if d.take == nil {
		d.take = &frames{known: map[string]int32{}}
	}
	var x *pattern
	if len(d.patterns) < maxPatterns && !d.slow {
		x = &pattern{clock: none}
	}
	values, err := d.values(p, line, x)
	if err != nil {
		return err
	}
	t := d.take
	now := float64(len(t.time))
	if p.time != nil {
		var problem string
		if now, problem = d.clock.at(d.parser.object, p.time.token, len(t.time) == 0); problem != "" {
			return d.fault(line, d.clock.Name, problem, "repair the time, or leave the take out")
		}
		x.addClock(p.time.token)
	}
	if n := len(d.channels); t.width == 0 && n > 0 {
		t.resize(n)
	} else if t.width < n {
		t.resize(2 * n) // doubled, so that a name of its own in each frame is no disaster
	}
	d.row = append(d.row[:0], t.blank...)
	for _, v := range values {
		d.row[v.channel] = v.v
	}
	sensor := t.sensorOf(p.sensor, values)
	t.add(line, now, sensor, d.row)
	d.keep(x, sensor)
	return nil
}

// value is a value of a channel in a frame.
type value struct {
	channel int
	v       float64
}

// values reads the values of a frame, valid until the next call, and adds where
// they stand to x.
func (d *reader) values(p *parts, line int, x *pattern) ([]value, error) {
	got := d.got[:0]
	defer func() { d.got = got }()
	one := func(name string, t token) error {
		c, err := d.columnOf(name, t, line)
		if err != nil || c == nil {
			return err
		}
		if c.list >= 0 {
			return d.notAlike(name, t, line)
		}
		x.add(t, c.channel)
		if c.channel < 0 {
			return nil
		}
		v, err := d.value(t, c.channel, line)
		got = append(got, value{c.channel, v})
		return err
	}
	for _, f := range p.values {
		name := nameOf(p.sensor, f.name)
		if f.kind != list || d.columns[name] == out || d.leftOut(name) {
			if err := one(name, f.token); err != nil {
				return nil, err
			}
			continue
		}
		if err := d.checkVector(name, f, line); err != nil {
			return nil, err
		}
		for i, t := range d.parser.elements[f.first : f.first+f.count] {
			if err := one(elementOf(name, i, f.count), t); err != nil {
				return nil, err
			}
		}
	}
	return got, nil
}

// checkVector holds a list within a frame to the length it had before.
func (d *reader) checkVector(name string, f field, line int) error {
	const most = 64
	if f.count > most {
		return d.fault(line, name, fmt.Sprintf("holds a list of %d numbers beside a single time", f.count), "write the times as a list too, or one frame per object")
	}
	c := d.columns[name]
	if c == nil {
		d.columns[name] = &column{channel: none, list: f.count}
		return nil
	}
	if c.list != f.count {
		return d.notAlike(name, f.token, line)
	}
	return nil
}

// notAlike refuses a value that is a list where others are none, or of another
// length. It may be missing.
func (d *reader) notAlike(name string, t token, line int) error {
	if t.kind == null {
		return nil
	}
	return d.fault(line, name, shorten(d.parser.object[t.from:t.to])+" is unlike its values before: a number, or a list of as many", "write it alike in every object")
}

// sensorOf returns the number of the sensor that a frame with these values is
// of.
func (t *frames) sensorOf(name string, values []value) int32 {
	key := append(t.key[:0], name...)
	if name == "" {
		t.columns = t.columns[:0]
		for _, v := range values {
			t.columns = append(t.columns, v.channel)
		}
		slices.Sort(t.columns)
		for _, c := range t.columns {
			key = binary.AppendUvarint(append(key, 0), uint64(c))
		}
	}
	t.key = key
	k, ok := t.known[string(key)]
	if !ok {
		k = int32(len(t.of))
		t.known[string(key)] = k
		t.of = append(t.of, sensor{last: math.Inf(-1), columns: map[int]bool{}})
	}
	if s := &t.of[k]; !ok || name != "" {
		for _, v := range values {
			s.columns[v.channel] = true
		}
	}
	return k
}

// add adds a frame.
func (t *frames) add(line int, now float64, sensor int32, row []float64) {
	t.data = append(t.data, row...)
	t.time, t.lines, t.sensor = append(t.time, now), append(t.lines, line), append(t.sensor, sensor)
	s := &t.of[sensor]
	s.back = s.back || now < s.last
	s.last = now
}

// resize makes room for this many columns, which frames so far lack.
func (t *frames) resize(width int) {
	data := make([]float64, len(t.time)*width)
	for i := range t.time {
		row := data[i*width : (i+1)*width]
		n := copy(row, t.row(i))
		for ; n < width; n++ {
			row[n] = math.NaN()
		}
	}
	t.data, t.width, t.blank = data, width, make([]float64, width)
	for i := range t.blank {
		t.blank[i] = math.NaN()
	}
}

// finish hands on the take being read, if there is one.
func (d *reader) finish() error {
	t := d.take
	if t == nil || len(t.time) == 0 {
		d.take, d.patterns = nil, nil
		return nil
	}
	if len(d.channels) == 0 {
		return d.fault(t.lines[0], "", "holds no numbers but the time", "check what the file holds")
	}
	if t.width != len(d.channels) {
		t.resize(len(d.channels))
	}
	series := t.series()
	t.merge()
	out := &raw.Take{Identity: d.who, Layout: d.layoutNow(), Time: t.time, Data: t.data}
	stand(out, t.lines)
	if err := d.deliver(out, series); err != nil {
		return err
	}
	d.take, d.patterns, d.last = nil, nil, 0
	if d.named { // what the next one is is still to be stated
		d.who, d.named = d.file, false
	}
	return nil
}

// deliver hands on a take, its times in seconds.
func (d *reader) deliver(t *raw.Take, series []float64) error {
	if err := d.finishClock(t, series); err != nil {
		return err
	}
	d.frozen = true
	d.taken++
	if !d.yield(t, nil) {
		return errStopped
	}
	return nil
}

// stand notes the lines that the frames of a take stand in.
func stand(t *raw.Take, lines []int) {
	due := 0
	for i, line := range lines {
		switch {
		case i == 0:
			t.Line = line
		case line != due:
			t.Jumps = append(t.Jumps, raw.Jump{Frame: i, Line: line})
		}
		due = line + 1
	}
}
