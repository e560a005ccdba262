package export

import (
	"encoding/json"
	"errors"
	"fmt"
	"slices"
	"strings"

	"strandwise/export/pages"
)

// Table names one of the tables a set may hold.
type Table string

// The tables of a set.
const (
	Takes   Table = "takes"   // one row per take: what a training program wants
	Frames  Table = "frames"  // one row per frame: what a query in SQL wants
	Windows Table = "windows" // one row per window of a fixed number of frames: what a microcontroller wants
)

// AllTables lists the tables in the order they are written.
func AllTables() []Table { return []Table{Takes, Frames, Windows} }

// ParseTable reads a table's name. The error lists the legal ones.
func ParseTable(text string) (Table, error) {
	if t := Table(text); slices.Contains(AllTables(), t) {
		return t, nil
	}
	return "", fmt.Errorf("unknown table %q; legal tables are takes, frames and windows", text)
}

// Default sizes; see [Options].
const (
	DefaultRowGroupBytes = 8 << 20
	DefaultFileBytes     = 128 << 20

	MaxRowGroupBytes = 1 << 30 // a row group is held in memory
)

// Options says what a set holds beside its takes. The zero value writes the
// table takes in default sizes. As JSON it says everything that decides the
// bytes of a set, but for the takes.
type Options struct {
	Tables []Table `json:"tables"` // takes alone when empty; takes is always written

	// RowGroupBytes is the size of the raw 32-bit floats after which a row
	// group ends, at most 1 GiB; 0 means DefaultRowGroupBytes. A row group of this size is
	// held in memory per bucket being written, table and split.
	RowGroupBytes int64 `json:"row_group_bytes"`
	// FileBytes is the size that files are meant to have; 0 means
	// DefaultFileBytes. The number of buckets decides it, see [Buckets]; but a
	// file that has twice this size ends with its row group, and the next begins.
	FileBytes int64 `json:"file_bytes"`
	// Buckets is the number of parts the set is written in, by the source take;
	// see [BucketOf]. 0 means 1.
	Buckets int `json:"buckets"`

	Compression pages.Compression `json:"compression"` // of the Parquet files; Snappy when empty
	Windowing   Windowing         `json:"windowing"`   // how the table windows is cut

	About About `json:"about"` // what its makers say of the set

	// Of Shards shards that are written apart, Shard is the one to write, from
	// 0: the buckets that leave this remainder. 0 shards write the whole set.
	Shard  int `json:"-"`
	Shards int `json:"-"`

	Version    string          `json:"program_version"` // for the manifest and the files
	Seed       uint64          `json:"seed,string"`     // that the takes were made with
	Plan       json.RawMessage `json:"plan"`            // the plan as JSON; null when empty
	Recordings []Recording     `json:"recordings"`      // what the takes were read from, in order
	Repairs    json.RawMessage `json:"repairs"`         // what was repaired in them, as a JSON object of counts; null when empty
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
	if o.RowGroupBytes < 0 || o.RowGroupBytes > MaxRowGroupBytes {
		errs = append(errs, fmt.Errorf("row groups of %d bytes: legal are 1 to %d, and 0 for the default", o.RowGroupBytes, MaxRowGroupBytes))
	}
	if o.FileBytes < 0 {
		errs = append(errs, fmt.Errorf("files of %d bytes: legal are 1 and more, and 0 for the default", o.FileBytes))
	}
	if o.Buckets < 0 || o.Buckets > maxBuckets {
		errs = append(errs, fmt.Errorf("%d buckets: legal are 1 to %d, and 0 for one", o.Buckets, maxBuckets))
	}
	if o.Shards < 0 || o.Shards > 0 && (o.Shard < 0 || o.Shard >= o.Shards) {
		errs = append(errs, fmt.Errorf("shard %d of %d: legal are 0 to the number of shards less one", o.Shard, o.Shards))
	}
	for name, text := range map[string]*json.RawMessage{"plan": &o.Plan, "repairs": &o.Repairs} {
		if len(*text) == 0 {
			*text = json.RawMessage("null")
		}
		if !json.Valid(*text) {
			errs = append(errs, fmt.Errorf("the %s is not valid JSON", name))
		}
	}
	errs = append(errs, o.About.Validate())
	wanted := o.Tables
	o.Tables = []Table{Takes}
	for _, t := range []Table{Frames, Windows} {
		if slices.Contains(wanted, t) {
			o.Tables = append(o.Tables, t)
		}
	}
	if _, err := pages.ParseCompression(string(o.Compression)); err != nil {
		errs = append(errs, err)
	}
	if o.RowGroupBytes == 0 {
		o.RowGroupBytes = DefaultRowGroupBytes
	}
	if o.FileBytes == 0 {
		o.FileBytes = DefaultFileBytes
	}
	o.Buckets = max(o.Buckets, 1)
	return o, errors.Join(errs...)
}

// program returns the name under which files say who wrote them.
func (o Options) program() string { return Program(o.Version) }

// Program returns the name under which files of a version of the program say who
// wrote them.
func Program(version string) string {
	return strings.TrimSpace("strandwise version " + version)
}
