package bids

import (
	"fmt"
	"io"
	"slices"
	"strings"

	"strandwise/channels"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// channel is one column of a table of motion, as *_channels.tsv describes it.
type channel struct {
	name      string  // as the file has it
	kind      string  // channel type, "ACCEL"
	component string  // "x"; empty when there is none
	point     string  // what is tracked; empty when nothing is stated
	unit      string  // as stated, empty for none
	bad       string  // why it is not used; empty for a good channel
	rate      float64 // sampling frequency of its own in Hz, 0 when none is stated

	file   string // and line that describe it
	line   int
	column int // its place in the table
}

// Columns of *_channels.tsv; the first five are required.
const (
	nameColumn = iota
	componentColumn
	typeColumn
	pointColumn
	unitsColumn
	statusColumn
	statusDescriptionColumn
	frequencyColumn
)

func channelColumns() (names []string, required int) {
	return []string{"name", "component", "type", "tracked_point", "units", "status", "status_description", "sampling_frequency"}, 5
}

// kinds lists the channel types of the standard.
func kinds() []string {
	return []string{"ACCEL", "ANGACCEL", "GYRO", "JNTANG", "LATENCY", "MAGN", "MISC", "ORNT", "POS", "VEL"}
}

func components() []string {
	return []string{"x", "y", "z", "quat_x", "quat_y", "quat_z", "quat_w"}
}

// readChannels reads what the columns of a recording are.
func (c *recording) readChannels() ([]channel, error) {
	s, err := c.nearest("channels", ".tsv")
	switch {
	case err != nil:
		return nil, err
	case s == nil:
		return nil, c.lacks("channels", ".tsv", "what its columns are")
	}
	columns, required := channelColumns()
	t, err := openTable(s, columns, required)
	if err != nil {
		return nil, err
	}
	var list []channel
	named := map[string]int{} // line that names a channel
	for {
		err := t.next()
		if err == io.EOF {
			break
		}
		if err != nil {
			return nil, err
		}
		ch, err := t.channel()
		if err != nil {
			return nil, err
		}
		if first, again := named[ch.name]; again {
			return nil, t.fault(ch.line, ch.name, fmt.Sprintf("is described again, after line %d", first), "give every column of the recording a name of its own")
		}
		named[ch.name] = ch.line
		ch.column = len(list)
		list = append(list, ch)
	}
	if len(list) == 0 {
		return nil, t.fault(t.header, "", "has a header but describes no channels", "describe every column of the recording in a row")
	}
	return list, nil
}

// channel reads the channel that a row describes.
func (t *table) channel() (channel, error) {
	ch := channel{
		name: t.cells[nameColumn], kind: strings.ToUpper(t.cells[typeColumn]), component: t.cells[componentColumn],
		point: t.cells[pointColumn], unit: t.cells[unitsColumn], file: t.file, line: t.line,
	}
	if ch.kind == "ANGACC" {
		ch.kind = "ANGACCEL"
	}
	quaternion := strings.HasPrefix(ch.component, "quat_")
	switch {
	case ch.name == "":
		return ch, t.fault(t.line, "", "describes a channel without a name", "name it")
	case !slices.Contains(kinds(), ch.kind):
		return ch, t.fault(t.line, ch.name, fmt.Sprintf("has the unknown type %q", t.cells[typeColumn]), "legal types are "+strings.Join(kinds(), ", "))
	case ch.component != "" && !slices.Contains(components(), ch.component):
		return ch, t.fault(t.line, ch.name, fmt.Sprintf("has the unknown component %q", ch.component), "legal components are "+strings.Join(components(), ", ")+" and n/a")
	case quaternion && ch.kind != "ORNT" && ch.kind != "MISC":
		return ch, t.fault(t.line, ch.name, fmt.Sprintf("is of type %s but has the component %s of a quaternion, which only an orientation has", ch.kind, ch.component), "correct its type or its component")
	case ch.kind == "LATENCY" && !isSeconds(ch.unit):
		return ch, t.fault(t.line, ch.name, fmt.Sprintf("has a LATENCY in %s, which BIDS states in seconds", ch.unit), "convert its values to seconds and state the unit s")
	}
	if strings.EqualFold(t.cells[statusColumn], "bad") {
		ch.bad = "its status is bad"
		if why := t.cells[statusDescriptionColumn]; why != "" {
			ch.bad += ": " + why
		}
	}
	rate, ok, err := t.number(frequencyColumn)
	if ok && !isFrequency(rate) {
		err = t.fault(t.line, ch.name, fmt.Sprintf("has the sampling frequency %g Hz", rate), "correct it, or write n/a")
	}
	ch.rate = rate
	return ch, err
}

func isSeconds(unit string) bool {
	switch strings.ToLower(unit) {
	case "", "s", "sec", "second", "seconds":
		return true
	}
	return false
}

// quantity returns what a channel of this type measures.
func (ch *channel) quantity() channels.Quantity {
	if ch.kind == "ANGACCEL" {
		return channels.AngularAcceleration
	}
	return channels.Quantity(ch.kind)
}

// arrange decides what each channel is used for: the clock, a channel of the
// take, or nothing.
func (m *motion) arrange() error {
	layout := &raw.Layout{}
	m.unread = make([]bool, len(m.channels))
	taken := map[string]bool{}
	for i := range m.channels {
		ch := &m.channels[i]
		m.unread[i] = true
		switch {
		case ch.bad != "":
			m.in.Notice("has channels marked as bad, which are left out", ch.name+": "+ch.bad)
			continue
		case ch.kind == "LATENCY" && m.clock == nil:
			m.clock, m.unread[i] = ch, false
			continue
		case ch.kind == "LATENCY":
			m.in.Notice("has more than one channel of latencies; the first is the clock and the others are left out", ch.name)
			continue
		}
		column := m.column(ch, taken)
		if m.unwanted(ch.name) || m.unwanted(column.Channel.Name) {
			continue
		}
		if err := m.measure(&column, ch); err != nil {
			return err
		}
		m.unread[i] = false
		m.kept = append(m.kept, ch.column)
		layout.Columns = append(layout.Columns, column)
	}
	if len(m.kept) == 0 {
		return m.fault(0, "", "has no channels to use: all are latencies, left out, or marked as bad in "+m.channels[0].file, "leave the recording out, or correct the status of its channels")
	}
	m.take.Layout = layout
	return nil
}

// unwanted tells whether the user leaves a column out.
func (m *motion) unwanted(column string) bool {
	return m.in.LeaveOut != nil && m.in.LeaveOut(column)
}

// column names a channel, apart from those taken.
func (m *motion) column(ch *channel, taken map[string]bool) raw.Column {
	q := ch.quantity()
	out := raw.Column{Channel: channels.Channel{Quantity: q, Component: ch.component, Unit: q.SI()}}
	first, _ := ch.called(1)
	for n := 1; n == 1 || taken[out.Channel.Name]; n++ {
		out.Channel.Name, out.Channel.TrackedPoint = ch.called(n)
	}
	taken[out.Channel.Name] = true
	if out.Channel.Name != first {
		m.in.Notice("has several channels of one tracked point, type and component; a number tells them apart", ch.name+" is "+out.Channel.Name)
	}
	return out
}

// measure finds the unit of a column.
func (m *motion) measure(out *raw.Column, ch *channel) error {
	what := "of type " + ch.kind
	quaternion := strings.HasPrefix(ch.component, "quat_")
	if quaternion {
		what, out.Channel.Unit = "a component of a quaternion, a pure number", "1"
	}
	if ch.unit == "" || quaternion && ch.unit == "1" {
		return nil
	}
	u, err := channels.ParseUnit(ch.unit)
	if err != nil {
		m.in.Notice(fmt.Sprintf("has channels in %s, a unit that is not known; their numbers stay as recorded, unless --unit states theirs", ch.unit), ch.name)
		if !quaternion {
			out.Channel.Quantity, out.Channel.Unit = channels.Misc, ""
		}
		return nil
	}
	if _, _, err := out.Channel.In(u); err != nil {
		return &fault.Error{File: ch.file, Line: ch.line, Channel: ch.name, Problem: "is " + what + ", which has no unit " + ch.unit, Remedy: "correct its type or its unit"}
	}
	out.Unit = ch.unit
	return nil
}

// called returns the name of a channel and of the point it tracks, the n-th of
// its kind.
func (ch *channel) called(n int) (name, point string) {
	if ch.kind == "MISC" && ch.component == "" {
		return numbered(ch.name, n), ch.point
	}
	point = numbered(ch.point, n)
	parts := []string{point, ch.quantity().Word(), ch.component}
	return strings.Join(slices.DeleteFunc(parts, func(s string) bool { return s == "" }), "."), point
}

// numbered tells the n-th of several points of one name apart from the first.
func numbered(point string, n int) string {
	switch {
	case n == 1:
		return point
	case point == "":
		point = "point"
	}
	return fmt.Sprintf("%s_%d", point, n)
}
