// Package raw is the contract between ingest and the packages that each read
// one format of recordings.
//
// A format turns bytes into raw takes: numbers in the units and the channel
// order of the file, with as much identity as the file itself states. All that
// is alike for every format happens behind it, in ingest: unpacking, identity
// from the path, units, groups, one layout for all files, uniqueness of takes
// and validation. So a new format is one small package with one [Format].
package raw

import (
	"io"
	"iter"
	"sort"

	"strandwise/channels"
	"strandwise/channels/body"
)

// Format reads one kind of file.
type Format interface {
	// Extensions lists the file name extensions, with dot and in lower case,
	// by which a file met in a folder is taken for a recording of this format.
	Extensions() []string

	// Sniff tells whether a file that begins with head is of this format. The
	// head is unpacked, and shorter than [SniffSize] only when the file is.
	Sniff(head []byte, name string) bool

	// Read yields the takes of one file in its order. Errors come as in
	// [channels.Stream], as a *fault.Error wherever the file is at fault;
	// errors of r are faults already and are passed on as they are. A format
	// that needs more than one sequential read opens in.Path itself. A file
	// that only belongs to another one, such as a sidecar, yields nothing.
	Read(r io.Reader, in Input) Stream
}

// SniffSize is how many bytes of a file [Format.Sniff] is shown.
const SniffSize = 4096

// Input says what is being read, and how the user wants it read.
type Input struct {
	Name    string   // file as the user named it, for messages
	Path    string   // file on disk
	Columns []string // names of the columns of a table without a header

	// LeaveOut tells whether the user leaves a column out: its values, whatever
	// they are, need not be read. Nil leaves none out. A format may ignore it;
	// the column is then dropped later.
	LeaveOut func(column string) bool

	TimeUnit string // unit of a time column that does not state its own: s, ms, us, ns, or empty

	// Beside returns the whole of a small file that belongs to this one and
	// stands in its folder or, by a name that leads up, in one above. The error
	// is a fault; errors.Is finds fs.ErrNotExist in it when there is no such
	// file.
	Beside func(name string) ([]byte, error)

	// Notice tells the user something about this file. The same text is told
	// once for all files; the evidence, which may be empty, is that of the
	// first of them.
	Notice func(text, evidence string)
}

// Stream is a sequence of raw takes, under the contract of [channels.Stream].
type Stream = iter.Seq2[*Take, error]

// Take is one take as a file states it.
type Take struct {
	Identity
	Line   int     // 1-based line the take begins at, 0 in a binary file
	Jumps  []Jump  // where the lines of the frames do not follow on one from the other
	Layout *Layout // shared by the takes of one file
	Clock  Clock   // what Time counts
	Origin float64 // when Time is 0, in seconds since 1970 UTC; 0 when the file does not say
	Time   []float64
	Data   []float64 // frames × channels, frame-major, as recorded; NaN where a value is missing

	Synthetic   bool           // the file says that the take was made, not recorded
	Skeleton    *body.Skeleton // whose joints the channels are, nil when the file has none; shared and read-only
	Annotations []Annotation   // what the file says happened when, by start
}

// Jump says that the frames from Frame on stand in the lines from Line on.
type Jump struct{ Frame, Line int }

// LineOf returns the 1-based line a frame stands in, 0 in a binary file.
func (t *Take) LineOf(frame int) int {
	if t.Line == 0 {
		return 0
	}
	i := sort.Search(len(t.Jumps), func(i int) bool { return t.Jumps[i].Frame > frame })
	if i == 0 {
		return t.Line + frame
	}
	return t.Jumps[i-1].Line + frame - t.Jumps[i-1].Frame
}

// Annotation is a stretch of a recording that the recording itself, or a file
// beside it, names.
type Annotation struct {
	Start, End float64 // on the clock of the take; equal for an instant
	Label      string
	Subject    string // empty unless stated
	Line       int    // of the file that states it, else 0
}

// Identity is what a file or its path states about a take. What it does not
// state is empty.
type Identity struct {
	Take    string // name of the take within the file
	Label   string
	Subject string
	Session string
	Split   string
}

// Layout is the channels of one file, in its own order.
type Layout struct {
	Columns []Column
	Groups  []Group // channel groups the file states, empty when it states none
}

// Group is a channel group as a file states it.
type Group struct {
	Name, Limb string
	Channels   []string // by name
}

// Column is one channel as a file holds it.
type Column struct {
	Channel channels.Channel
	Unit    string // as the file states it, empty when it states none
}

// Clock says what the times of a take count.
type Clock int

// The clocks.
const (
	Seconds Clock = iota // time in seconds
	Frames               // frame numbers, which a rate turns into seconds
)

// Field returns the field of this lower-case name: take, label, subject,
// session or split. It returns nil for any other name.
func (id *Identity) Field(name string) *string {
	switch name {
	case "take":
		return &id.Take
	case "label":
		return &id.Label
	case "subject":
		return &id.Subject
	case "session":
		return &id.Session
	case "split":
		return &id.Split
	}
	return nil
}
