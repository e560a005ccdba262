package ingest

import (
	"io"

	"strandwise/channels"
	"strandwise/channels/group"
)

// Options says what to read and how.
type Options struct {
	// Paths are files, folders, globs, or "-". A folder is walked in sorted
	// order; hidden files and files of no known extension are left. "-" is
	// standard input, kept in a temporary file because recordings are read
	// more than once.
	Paths []string

	// Pattern reads identity from the tail of a path:
	// "{subject}/{label}_{session}_{take}.csv". A field is take, label,
	// subject, session or split and stands for one or more characters other
	// than '/', as many as possible for the fields on the left; * stands for
	// any number of them. Empty reads nothing from paths.
	Pattern string

	// Label is the label of takes for which neither recording nor path states
	// one.
	Label string

	// Rate is the frames per second of recordings without a time column; 0
	// states none.
	Rate float64

	// TimeUnit is the unit of time columns that do not state their own: s, ms,
	// us or ns. Empty leaves it to the reader.
	TimeUnit string

	// Columns names the columns of delimited text that has no header.
	Columns []string

	// LeaveOut names columns that are not wanted as channels, by name or glob.
	LeaveOut []string

	// LengthUnit is the unit of length of files that state none: m, cm, mm or
	// in. Empty leaves it to the reader, which says what it takes.
	LengthUnit string

	// Signals is what of a C3D file is read: "points" or "analog". Empty is
	// points.
	Signals string

	// Repair says what may be repaired. The zero value repairs nothing.
	Repair Repair

	// Cut says how long recordings are cut into takes; empty is ByAnnotation.
	Cut Cut

	// Annotations is a file that says when which label was performed in the one
	// recording that is read; see [cut.Read]. Empty leaves it to the recording.
	Annotations string

	// Lenient passes takes on as they are recorded: without a label, with
	// values missing (NaN) and whatever [channels.Take.Validate] would refuse,
	// and the synthetic takes of a set too, which are left out otherwise.
	Lenient bool

	// Units add to or override the units the recordings state. Where several
	// rules match a channel, the last one holds.
	Units []UnitRule

	// Groups say which channels move together; none leaves it to what the
	// first file states or, failing that, to the names of the channels.
	Groups []group.Rule

	// Stdin is what "-" reads; nil is the standard input of the process.
	Stdin io.Reader
}

// UnitRule states the unit of the channels a pattern names.
type UnitRule struct {
	Pattern string // as in [group.Match]
	Unit    channels.Unit
}

// UsageError says that what was asked for cannot be done, whatever the
// recordings hold: a mistaken option, or one that is missing.
type UsageError struct {
	Key     string // the option that is mistaken or missing, as a plan names it: "rate"; empty for several
	Problem string // what is wrong and what would be legal
	Err     error  // the cause, if any
}

// Error gives the problem and its cause.
func (e *UsageError) Error() string {
	if e.Err == nil {
		return e.Problem
	}
	return e.Problem + ": " + e.Err.Error()
}

// Unwrap returns the cause.
func (e *UsageError) Unwrap() error { return e.Err }
