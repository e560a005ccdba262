package c3d

import (
	"fmt"
	"math"
)

// Event is a moment of a recording that someone marked.
type Event struct {
	Time     float64 // seconds after the first frame of the file
	Label    string
	Context  string // the side or the like: "Left"; empty when not stated
	Subject  string // empty when not stated
	InHeader bool   // stands in the header, not in the EVENT group
}

// readEvents reads the events of the header and of the EVENT group.
func (d *decoder) readEvents() error {
	if err := d.headerEvents(); err != nil {
		return err
	}
	return d.groupEvents()
}

const (
	eventKey        = 12345 // the header holds event labels of four characters
	maxHeaderEvents = 18
	eventLabelSize  = 4
)

// headerEvents reads up to 18 events of the header. Their times count from the
// first frame of the file. Their flags say whether a program showed them, not
// whether they happened, and are not read.
func (d *decoder) headerEvents() error {
	n := d.word(eventCountAt)
	if d.word(eventKeyAt) != eventKey {
		if n > 0 && n <= maxHeaderEvents {
			d.Notice("may hold events in an older form of header, which are not read", "")
		}
		return nil
	}
	if n > maxHeaderEvents {
		return d.contradiction(eventCountAt, fmt.Sprintf("counts %d events in its header, which has room for %d", n, maxHeaderEvents))
	}
	for i := range n {
		at := eventTimesAt + 4*i
		label := eventLabelsAt + eventLabelSize*i
		e := Event{Time: d.real(at), Label: text(d.head[label : label+eventLabelSize]), InHeader: true}
		if err := d.addEvent(e, int64(at)); err != nil {
			return err
		}
	}
	return nil
}

// groupEvents reads the events of the EVENT group. Their times are pairs of
// minutes and seconds and count from frame 1 of the recording, which a file
// that was cut does not begin with.
func (d *decoder) groupEvents() error {
	n, offset, _, err := d.countOf("EVENT", "USED")
	if err != nil || n == 0 {
		return err
	}
	var times []float64
	for _, p := range d.file.Parameters.run("EVENT", "TIMES") {
		times = append(times, p.Numbers()...)
		offset = p.Offset
	}
	if int64(len(times)) < 2*n {
		return d.contradiction(offset, fmt.Sprintf("counts %d events, but has %d numbers for their times, which are two each", n, len(times)))
	}
	labels, contexts, subjects := d.eventTexts("LABELS"), d.eventTexts("CONTEXTS"), d.eventTexts("SUBJECTS")
	start := d.eventStart()
	for i := range int(n) {
		e := Event{Time: 60*times[2*i] + times[2*i+1] - start, Label: labels(i), Context: contexts(i), Subject: subjects(i)}
		if err := d.addEvent(e, offset); err != nil {
			return err
		}
	}
	return nil
}

// eventStart returns the time of the file's first frame after frame 1.
func (d *decoder) eventStart() float64 {
	if d.file.First <= 1 {
		return 0
	}
	if d.file.Points.Rate == 0 {
		d.Notice("states no frame rate; the times of its events count from frame 1", "")
		return 0
	}
	return float64(d.file.First-1) / d.file.Points.Rate
}

// eventTexts returns the text that each event has in a parameter, if any.
func (d *decoder) eventTexts(name string) func(i int) string {
	all := d.file.Parameters.texts("EVENT", name)
	return func(i int) string {
		if i < len(all) {
			return all[i]
		}
		return ""
	}
}

func (d *decoder) addEvent(e Event, offset int64) error {
	if math.IsNaN(e.Time) || math.IsInf(e.Time, 0) {
		return d.fault(offset, fmt.Sprintf("has an event %q at the time %v", e.Label, e.Time), "correct or remove the event")
	}
	d.file.Events = append(d.file.Events, e)
	return nil
}
