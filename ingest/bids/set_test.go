package bids_test

import (
	"fmt"
	"io/fs"
	"math"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"strandwise/ingest/bids"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// set is a data set in memory: the texts of its files by their paths.
type set map[string]string

// read reads one file of the set without these columns.
func (s set) read(name string, leaveOut ...string) (takes []*raw.Take, notices []string, err error) {
	in := raw.Input{
		Name: name, Path: "/nowhere/" + name,
		LeaveOut: func(column string) bool { return slices.Contains(leaveOut, column) },
		Notice:   func(text, evidence string) { notices = append(notices, text+" ("+evidence+")") },
		Beside: func(other string) ([]byte, error) {
			file := path.Join(path.Dir(name), other)
			if text, ok := s[file]; ok {
				return []byte(text), nil
			}
			return nil, &fault.Error{File: file, Problem: "cannot be opened", Err: fs.ErrNotExist}
		},
	}
	for t, err := range (bids.Format{}).Read(strings.NewReader(s[name]), in) {
		if err != nil {
			return takes, notices, err
		}
		takes = append(takes, t)
	}
	return takes, notices, nil
}

// take reads a recording that is sound.
func (s set) take(t testing.TB, name string) (*raw.Take, []string) {
	t.Helper()
	takes, notices, err := s.read(name)
	if err != nil || len(takes) != 1 {
		t.Fatalf("%s: %d takes, error %v", name, len(takes), err)
	}
	return takes[0], notices
}

// with returns a copy of the set in which a file holds another text. An empty
// text removes it.
func (s set) with(name, text string) set {
	out := set{}
	for k, v := range s {
		out[k] = v
	}
	if out[name] = text; text == "" {
		delete(out, name)
	}
	return out
}

// onDisk reads a set from a folder.
func onDisk(t testing.TB, root string) set {
	t.Helper()
	s := set{}
	err := filepath.WalkDir(root, func(file string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		b, err := os.ReadFile(file)
		s[filepath.ToSlash(strings.TrimPrefix(file, root+string(filepath.Separator)))] = string(b)
		return err
	})
	if err != nil || len(s) == 0 {
		t.Fatalf("%s: %d files, error %v", root, len(s), err)
	}
	return s
}

// Files of the set below.
const (
	motionFile   = "sub-gretel_task-wave_tracksys-strings_motion.tsv"
	jsonFile     = "sub-gretel_task-wave_tracksys-strings_motion.json"
	channelsFile = "sub-gretel_task-wave_tracksys-strings_channels.tsv"
	eventsFile   = "sub-gretel_task-wave_tracksys-strings_events.tsv"
)

// small is a sound recording of two channels and a latency.
func small() set {
	return set{
		motionFile:   "0\t1\t2\n0.5\t3\t4\n1\t5\t6\n",
		jsonFile:     `{"SamplingFrequency": 2, "MotionChannelCount": 2}`,
		channelsFile: channelTable("t\tn/a\tLATENCY\tn/a\ts", "px\tx\tPOS\thand\tm", "py\ty\tPOS\thand\tm"),
	}
}

// channelTable is a table of channels, each name, component, type, tracked
// point and units.
func channelTable(rows ...string) string {
	return "name\tcomponent\ttype\ttracked_point\tunits\n" + strings.Join(rows, "\n") + "\n"
}

// described gives a take in words, for golden files and comparisons.
func described(t *raw.Take) string {
	var b strings.Builder
	fmt.Fprintf(&b, "take %s: label %q, subject %q, session %q, line %d\n", t.Take, t.Label, t.Subject, t.Session, t.Line)
	for _, j := range t.Jumps {
		fmt.Fprintf(&b, "  frame %d is in line %d\n", j.Frame, j.Line)
	}
	for _, c := range t.Layout.Columns {
		fmt.Fprintf(&b, "  channel %s: %s of %q, component %q, held in %q, stated in %q\n",
			c.Channel.Name, c.Channel.Quantity, c.Channel.TrackedPoint, c.Channel.Component, c.Channel.Unit, c.Unit)
	}
	width := len(t.Layout.Columns)
	for i, v := range t.Data {
		if math.IsNaN(v) {
			fmt.Fprintf(&b, "  missing: frame %d, column %d, line %d\n", i/width, i%width, t.LineOf(i/width))
		}
	}
	for _, a := range t.Annotations {
		fmt.Fprintf(&b, "  %g to %g s: %s (line %d)\n", a.Start, a.End, a.Label, a.Line)
	}
	for i, now := range t.Time {
		fmt.Fprintf(&b, "  %.6g: %v\n", now, t.Data[i*width:(i+1)*width])
	}
	return b.String()
}
