package bids

import (
	"cmp"
	"fmt"
	"io"
	"math"
	"slices"

	"strandwise/ingest/raw"
)

// Columns of *_events.tsv; the first two are required.
const (
	onsetColumn = iota
	durationColumn
	trialTypeColumn
)

// readEvents reads what happened when: the events that say what they are, by
// their start.
func (c *recording) readEvents() ([]raw.Annotation, error) {
	s, err := c.nearest("events", ".tsv")
	if err != nil || s == nil {
		return nil, err
	}
	t, err := openTable(s, []string{"onset", "duration", "trial_type"}, 2)
	if err != nil {
		return nil, err
	}
	var out []raw.Annotation
	for {
		err := t.next()
		if err == io.EOF {
			break
		}
		if err != nil {
			return nil, err
		}
		a, ok, err := t.event()
		switch {
		case err != nil:
			return nil, err
		case !ok:
			c.in.Notice("has events without an onset, which are left out", fmt.Sprintf("the first is at %s:%d", t.file, t.line))
		case a.Label == "":
			c.in.Notice("has events without a trial_type, which are left out", fmt.Sprintf("the first is at %s:%d", t.file, t.line))
		default:
			out = append(out, a)
		}
	}
	slices.SortStableFunc(out, func(a, b raw.Annotation) int { return cmp.Compare(a.Start, b.Start) })
	return out, nil
}

// event reads the event of a row, and whether it says when it began.
func (t *table) event() (a raw.Annotation, ok bool, err error) {
	onset, ok, err := t.number(onsetColumn)
	if err != nil {
		return a, false, err
	}
	duration, _, err := t.number(durationColumn)
	if err == nil && (duration < 0 || math.IsInf(onset+duration, 0)) {
		err = t.fault(t.line, "", fmt.Sprintf("has an event of %g s", duration), "write a duration of zero or more seconds, or n/a")
	}
	return raw.Annotation{Start: onset, End: onset + duration, Label: t.cells[trialTypeColumn], Line: t.line}, ok, err
}

// annotates tells whether events say what was done over stretches of time.
func annotates(events []raw.Annotation) bool {
	return slices.ContainsFunc(events, func(a raw.Annotation) bool { return a.End > a.Start })
}
