package bids_test

import (
	"errors"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"strandwise/ingest/bids"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// FuzzRead holds for any texts of the files of a recording: reading does not
// panic; what is refused is a fault that says where and what to do; what is
// read is consistent, has the values of its table, and comes out the same when
// it is read again.
func FuzzRead(f *testing.F) {
	theatre := onDisk(f, "testdata/theatre")
	const chase = "sub-crocodile/motion/sub-crocodile_task-chase_"
	f.Add(theatre[chase+"tracksys-strings_motion.tsv"], theatre[chase+"tracksys-strings_channels.tsv"], theatre[chase+"tracksys-strings_motion.json"], theatre[chase+"events.tsv"])
	const bow = "sub-kasper/ses-matinee/motion/sub-kasper_ses-matinee_task-bow_tracksys-band_run-1_motion.tsv"
	f.Add(theatre[bow], theatre["tracksys-band_channels.tsv"], theatre["task-bow_tracksys-band_motion.json"], "")
	s := small()
	f.Add(s[motionFile], s[channelsFile], s[jsonFile], s[eventsFile])
	f.Add("\"1\"\r\n\n-\n2e5\n", "\ufefftype\tname\tcomponent\ttracked_point\tunits\nMISC\t\"a\"\"b\"\tn/a\tn/a\tdB\n", `{"SamplingFrequency": 1e2, "MissingValues": 7}`, "onset\tduration\n1\t2\n")
	f.Fuzz(func(t *testing.T, motion, channels, metadata, events string) {
		s := set{motionFile: motion}.with(channelsFile, channels).with(jsonFile, metadata).with(eventsFile, events)
		(bids.Format{}).Sniff([]byte(motion[:min(len(motion), raw.SniffSize)]), motionFile)
		takes, notices, err := s.read(motionFile)
		again, notices2, err2 := s.read(motionFile)
		if d := cmp.Diff(takes, again, cmpopts.EquateNaNs()); d != "" || errorText(err) != errorText(err2) || !cmp.Equal(notices, notices2) {
			t.Fatalf("%v, then %v\n%s", err, err2, d)
		}
		if err != nil {
			var known *fault.Error
			if !errors.As(err, &known) || known.File == "" || known.Problem == "" || known.Remedy == "" || len(takes) > 0 {
				t.Fatalf("%d takes, error %v", len(takes), err)
			}
			return
		}
		if len(takes) != 1 {
			t.Fatalf("%d takes", len(takes))
		}
		checkSound(t, takes[0])
		checkValues(t, takes[0], motion)
	})
}

func errorText(err error) string {
	if err == nil {
		return ""
	}
	return err.Error()
}

// checkSound holds a take to the contract of raw takes.
func checkSound(t *testing.T, x *raw.Take) {
	t.Helper()
	frames, width := len(x.Time), len(x.Layout.Columns)
	if frames == 0 || width == 0 || len(x.Data) != frames*width || x.Clock != raw.Seconds {
		t.Fatalf("%d frames of %d channels, %d values, clock %v", frames, width, len(x.Data), x.Clock)
	}
	names := map[string]bool{}
	for _, c := range x.Layout.Columns {
		if c.Channel.Name == "" || names[c.Channel.Name] {
			t.Fatalf("channel %q again", c.Channel.Name)
		}
		names[c.Channel.Name] = true
	}
	for i, now := range x.Time {
		if math.IsNaN(now) || math.IsInf(now, 0) || i > 0 && x.LineOf(i) <= x.LineOf(i-1) {
			t.Fatalf("frame %d: %g s, line %d", i, now, x.LineOf(i))
		}
	}
	if slices.ContainsFunc(x.Data, func(v float64) bool { return math.IsInf(v, 0) }) {
		t.Fatal("an infinite value")
	}
	for i, a := range x.Annotations {
		if !(a.Start <= a.End) || a.Label == "" || a.Line < 2 || i > 0 && a.Start < x.Annotations[i-1].Start {
			t.Fatalf("annotations %v", x.Annotations)
		}
	}
}

// checkValues looks up every value in the text of its table, which must hold
// it, in the order of the take, in the line of its frame.
func checkValues(t *testing.T, x *raw.Take, motion string) {
	t.Helper()
	if strings.ContainsAny(motion, "\"\ufeff") || strings.IndexByte(motion, 0xfe) >= 0 || strings.IndexByte(motion, 0xff) >= 0 { // quoted, or in another encoding: left to the tests
		return
	}
	width, frame := len(x.Layout.Columns), 0
	var rows [][]string
	var lines []int
	n := 0
	for line := range strings.Lines(motion) {
		if n++; strings.Trim(line, " \r\n") != "" {
			rows = append(rows, strings.Split(strings.TrimRight(line, "\r\n"), "\t"))
			lines = append(lines, n)
		}
	}
	rows, lines = rows[len(rows)-len(x.Time):], lines[len(lines)-len(x.Time):] // a header may stand before them
	for _, row := range rows {
		if x.LineOf(frame) != lines[frame] {
			t.Fatalf("frame %d is said to be in line %d, not %d", frame, x.LineOf(frame), lines[frame])
		}
		for _, v := range x.Data[frame*width : (frame+1)*width] {
			for !math.IsNaN(v) {
				if len(row) == 0 {
					t.Fatalf("frame %d: %v is not in the text", frame, v)
				}
				field := row[0]
				row = row[1:]
				if read := plainNumber(field); math.Float64bits(read) == math.Float64bits(v) {
					break
				}
			}
		}
		frame++
	}
}

// plainNumber reads a field by strconv alone, NaN when it cannot.
func plainNumber(field string) float64 {
	v, err := strconv.ParseFloat(strings.TrimSpace(field), 64)
	if err != nil {
		return math.NaN()
	}
	return v
}
