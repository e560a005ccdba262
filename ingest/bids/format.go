package bids

import (
	"bytes"
	"fmt"
	"io"
	"path/filepath"
	"slices"

	"strandwise/ingest/delimited"
	"strandwise/ingest/raw"
)

// Format is Motion-BIDS. A table of motion is one take; the files that
// describe it, and other files of a BIDS data set, hold none. It is stateless
// and safe for concurrent use.
type Format struct{}

var _ raw.Format = Format{}

// Extensions returns the extension of BIDS tables.
func (Format) Extensions() []string { return []string{".tsv"} }

// Sniff knows a table of motion by its name and its first row: it has no
// header, unless its name leaves no doubt what it is. It also accepts the
// tables and JSON files that stand around motion in a data set.
func (Format) Sniff(head []byte, name string) bool {
	if bytes.IndexByte(head, 0) >= 0 {
		return false
	}
	if word := mark(filepath.Base(name)); word != "" {
		return bytes.Contains(head, []byte(word))
	}
	n, ok := parseName(name)
	switch {
	case !ok || len(n.entities) == 0:
		return false
	case n.isMotion():
		return n.value("tracksys") != "" || beginsWithNumbers(head)
	}
	return (n.ext == ".tsv" || n.ext == ".json") && (n.describes() || n.isOther())
}

// mark returns a word that tells a file at the top of a data set, whose name
// is too plain, from any other file of that name. It is empty for other names.
func mark(base string) string {
	switch base {
	case "dataset_description.json":
		return "BIDSVersion"
	case "participants.tsv":
		return "participant_id"
	case "channels.tsv":
		return "tracked_point"
	case "motion.json":
		return "SamplingFrequency"
	}
	return ""
}

// isMotion tells whether this is the name of a table of motion.
func (n name) isMotion() bool {
	return n.suffix == "motion" && n.ext == ".tsv" && n.value("sub") != ""
}

// describes tells whether this is the name of a file that describes others.
func (n name) describes() bool {
	switch n.suffix {
	case "motion":
		return n.ext == ".json"
	case "channels", "events", "scans", "sessions", "coordsystem":
		return true
	}
	return false
}

// isOther tells whether this is the name of a BIDS file that has nothing to do
// with motion.
func (n name) isOther() bool {
	switch n.suffix {
	case "beh", "eeg", "electrodes", "emg", "eyetrack", "ieeg", "meg", "nirs", "optodes", "physio", "stim":
		return true
	}
	return false
}

// beginsWithNumbers tells whether the first row of a table is numbers, or says
// that there are none.
func beginsWithNumbers(head []byte) bool {
	if len(head) == raw.SniffSize && bytes.IndexByte(head, '\n') < 0 {
		head = head[:bytes.LastIndexByte(head, '\t')+1] // without the field that is cut
	}
	rows, err := delimited.NewRows(bytes.NewReader(head), "", '\t')
	if err != nil {
		return false
	}
	fields, _, err := rows.Text()
	return err == nil && !slices.ContainsFunc(fields, func(f []byte) bool { return !isValue(f) })
}

// Read yields the one take of a table of motion, whole in memory, and nothing
// for any other file. The files that describe it are read by in.Beside, with
// names that lead to the folders above ("../task-bow_motion.json") where they
// may stand there.
func (Format) Read(r io.Reader, in raw.Input) raw.Stream {
	return func(yield func(*raw.Take, error) bool) {
		n, _ := parseName(in.Name)
		switch {
		case n.isMotion():
			c := &recording{in: in, name: n, folders: n.folders(in.Path)}
			yield(c.decode(r))
		case n.isOther():
			in.Notice(fmt.Sprintf("is a BIDS file of another kind (%s) and is left out", n.suffix), "")
		}
	}
}
