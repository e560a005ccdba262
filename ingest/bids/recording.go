package bids

import (
	"fmt"
	"io"
	"io/fs"
	"path/filepath"

	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// recording is a table of motion and all that describes it.
type recording struct {
	in      raw.Input
	name    name
	folders []string // in which files that describe it may stand
}

// decode reads a recording.
func (c *recording) decode(r io.Reader) (*raw.Take, error) {
	list, err := c.readChannels()
	if err != nil {
		return nil, err
	}
	stated, err := c.readMetadata()
	if err != nil {
		return nil, err
	}
	m := &motion{recording: c, channels: list, absence: stated.absence(), take: &raw.Take{}}
	if m.absence.isNumber {
		c.in.Notice("states that a number stands for missing values", m.absence.word)
	}
	if err := m.arrange(); err != nil {
		return nil, err
	}
	if err := stated.check(list, c.in.Notice); err != nil {
		return nil, err
	}
	rate := 0.0
	if m.clock == nil { // asked for first: a long table need not be read for nothing
		if rate, err = c.rate(stated, list); err != nil {
			return nil, err
		}
	}
	if err := m.read(r); err != nil {
		return nil, err
	}
	if err := m.setTime(stated, rate); err != nil {
		return nil, err
	}
	if err := c.identify(m.take, stated); err != nil {
		return nil, err
	}
	return m.take, nil
}

// identify names a take from the name of its file, and annotates it.
func (c *recording) identify(t *raw.Take, stated metadata) error {
	events, err := c.readEvents()
	if err != nil {
		return err
	}
	t.Identity = raw.Identity{Take: c.name.stem(), Subject: c.name.value("sub"), Session: c.name.value("ses"), Label: c.name.value("task")}
	t.Annotations = events
	if annotates(events) {
		t.Label = ""
	}
	if start, _, err := stated.number("StartTime"); len(events) > 0 && err == nil && start != 0 {
		c.in.Notice("states a StartTime, which is not used: its events are taken to count from its first row", fmt.Sprintf("%g s", start))
	}
	return nil
}

// fault makes a fault of the recording itself.
func (c *recording) fault(line int, channel, problem, remedy string) *fault.Error {
	return &fault.Error{File: c.in.Name, Line: line, Channel: channel, Problem: problem, Remedy: remedy}
}

// wanted returns the name of the file of a suffix that belongs to this
// recording alone.
func (c *recording) wanted(suffix, ext string) string {
	return filepath.Join(filepath.Dir(c.in.Name), c.name.with(c.name.entities, suffix, ext))
}

// lacks is the fault of a recording without a file it cannot be read without.
func (c *recording) lacks(suffix, ext, what string) error {
	return &fault.Error{
		File: c.wanted(suffix, ext), Err: fs.ErrNotExist,
		Problem: "is needed to say " + what + ", and no file above applies to " + filepath.Base(c.in.Name),
		Remedy:  "put it beside the recording",
	}
}
