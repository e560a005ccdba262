package export

import (
	"encoding/json"
	"errors"
	"fmt"
	"slices"
	"strings"
)

// Table names one of the tables a set may hold.
type Table string

// The tables of a set.
const (
	Takes  Table = "takes"  // one row per take: what a training program wants
	Frames Table = "frames" // one row per frame: what a query in SQL wants
)

// AllTables lists the tables in the order they are written.
func AllTables() []Table { return []Table{Takes, Frames} }

// ParseTable reads a table's name. The error lists the legal ones.
func ParseTable(text string) (Table, error) {
	if t := Table(text); slices.Contains(AllTables(), t) {
		return t, nil
	}
	return "", fmt.Errorf("unknown table %q; legal tables are takes and frames", text)
}

// Default sizes; see [Options].
const (
	DefaultRowGroupBytes = 8 << 20
	DefaultFileBytes     = 128 << 20

	maxRowGroupBytes = 1 << 30 // a row group is held in memory
)

// Options says what a set holds beside its takes. The zero value writes the
// table takes in default sizes.
type Options struct {
	Tables []Table // takes alone when empty; takes is always written

	// RowGroupBytes is the size of the raw 32-bit floats after which a row
	// group ends, at most 1 GiB; 0 means DefaultRowGroupBytes. A row group of this size is
	// held in memory per table and split.
	RowGroupBytes int64
	// FileBytes is the size after which a file ends and the next begins; 0
	// means DefaultFileBytes. A file ends with a row group, so it is larger by
	// up to one.
	FileBytes int64

	Version    string          // of the program, for the manifest and the files
	Seed       uint64          // that the takes were made with
	Plan       json.RawMessage // the plan as JSON; null when empty
	Recordings []Recording     // what the takes were read from, in order
	Repairs    json.RawMessage // what was repaired in them, as a JSON object of counts; null when empty
}

// Recording identifies one input file by its content.
type Recording struct {
	Path   string `json:"path"` // as the plan names it
	Bytes  int64  `json:"bytes"`
	SHA256 string `json:"sha256"` // of the file, in hexadecimal
}

// withDefaults returns the options with defaults filled in, or every reason
// why they cannot be used.
func (o Options) withDefaults() (Options, error) {
	var errs []error
	for _, t := range o.Tables {
		_, err := ParseTable(string(t))
		errs = append(errs, err)
	}
	if o.RowGroupBytes < 0 || o.RowGroupBytes > maxRowGroupBytes {
		errs = append(errs, fmt.Errorf("row groups of %d bytes: legal are 1 to %d, and 0 for the default", o.RowGroupBytes, maxRowGroupBytes))
	}
	if o.FileBytes < 0 {
		errs = append(errs, fmt.Errorf("files of %d bytes: legal are 1 and more, and 0 for the default", o.FileBytes))
	}
	for name, text := range map[string]*json.RawMessage{"plan": &o.Plan, "repairs": &o.Repairs} {
		if len(*text) == 0 {
			*text = json.RawMessage("null")
		}
		if !json.Valid(*text) {
			errs = append(errs, fmt.Errorf("the %s is not valid JSON", name))
		}
	}
	wanted := o.Tables
	o.Tables = []Table{Takes}
	if slices.Contains(wanted, Frames) {
		o.Tables = append(o.Tables, Frames)
	}
	if o.RowGroupBytes == 0 {
		o.RowGroupBytes = DefaultRowGroupBytes
	}
	if o.FileBytes == 0 {
		o.FileBytes = DefaultFileBytes
	}
	return o, errors.Join(errs...)
}

// program returns the name under which files say who wrote them.
func (o Options) program() string { return Program(o.Version) }

// Program returns the name under which files of a version of the program say who
// wrote them.
func Program(version string) string {
	return strings.TrimSpace("strandwise version " + version)
}
