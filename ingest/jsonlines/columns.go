package jsonlines

import (
	"fmt"
	"strconv"
	"strings"

	"strandwise/channels"
	"strandwise/ingest/raw"
	"strandwise/ingest/table"
)

// maxChannels is how many different names of values a file may hold; one whose
// names are not the same in each object is refused and not held.
const maxChannels = 1 << 12

// column is what is known of the values of one name.
type column struct {
	channel int // position among the channels, −1 when it is none
	list    int // length of the lists of a frame, −1 for no list
}

// out is the column of values that are left out.
var out = &column{channel: -1, list: -1}

// nameOf returns the name of a value, which bears that of its sensor.
func nameOf(sensor, name string) string {
	if sensor == "" {
		return name
	}
	if name == "values" {
		return sensor
	}
	return join(sensor, strings.TrimPrefix(name, "values."))
}

// elementOf names an element of a list within a frame.
func elementOf(name string, i, n int) string {
	if n == 3 {
		return join(name, "xyz"[i:i+1])
	}
	return join(name, strconv.Itoa(i))
}

// columnOf returns the column of a value, new at its first value that is not
// missing, and nil before that. Why says what it holds when it is no channel.
func (d *reader) columnOf(name string, t token, line int) (*column, error) {
	if c := d.columns[name]; c != nil {
		return c, nil
	}
	how := isText
	if t.kind != list && t.kind != nested {
		_, how = read(d.parser.object, t)
	}
	switch {
	case how == isMissing:
		return nil, nil
	case d.leftOut(name):
		d.columns[name] = out
		return out, nil
	case len(d.columns) == maxChannels:
		return nil, d.fault(line, "", fmt.Sprintf("the file holds values of more than %d names", maxChannels), "give the fields of each object the same names")
	}
	if how == isText {
		d.in.Notice(fmt.Sprintf("field %q is no channel and is left out", name), "it begins with "+shorten(d.parser.object[t.from:t.to]))
		d.columns[name] = out
		return out, nil
	}
	if t.kind == text {
		d.in.Notice("numbers in quotes are read as numbers", name)
	}
	c, err := d.addChannel(name, line)
	d.columns[name] = c
	return c, err
}

// leftOut tells whether the user leaves a value out.
func (d *reader) leftOut(name string) bool {
	if d.in.LeaveOut == nil {
		return false
	}
	c, _ := channels.ParseHeader(name)
	return d.in.LeaveOut(name) || d.in.LeaveOut(c.Name)
}

func (d *reader) addChannel(name string, line int) (*column, error) {
	if what := table.Unclean(name); what != "" {
		return nil, d.fault(line, "", fmt.Sprintf("the name %q %s", name, what), "rename the field")
	}
	c, unit := channels.ParseHeader(name)
	switch {
	case c.Name == "":
		return nil, d.fault(line, "", "holds a number that has no name", "name the field")
	case d.frozen:
		return nil, d.fault(line, c.Name, "comes up here for the first time; the takes before lack it", "give all takes the same channels, or leave it out")
	}
	for _, other := range d.channels {
		if other.Channel.Name == c.Name {
			return nil, d.fault(line, "", "holds two fields named "+c.Name, "rename one of them")
		}
	}
	d.channels = append(d.channels, raw.Column{Channel: c, Unit: unit})
	d.layout = nil
	return &column{channel: len(d.channels) - 1, list: -1}, nil
}

// value reads a value of a channel, NaN where it is missing.
func (d *reader) value(t token, channel, line int) (float64, error) {
	v, how := read(d.parser.object, t)
	switch how {
	case isNumber, isMissing:
		return v, nil
	case isInfinite:
		return 0, d.fault(line, d.channels[channel].Channel.Name, shorten(d.parser.object[t.from:t.to])+" is no finite number", "repair the value, or leave the take out")
	}
	return 0, d.fault(line, d.channels[channel].Channel.Name, shorten(d.parser.object[t.from:t.to])+" is not a number", "repair the value, or leave the take out")
}

// layoutNow returns the layout of the channels known so far.
func (d *reader) layoutNow() *raw.Layout {
	if d.layout == nil {
		d.layout = &raw.Layout{Columns: append([]raw.Column{}, d.channels...)}
	}
	return d.layout
}
