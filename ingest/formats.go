package ingest

import (
	"slices"

	"strandwise/ingest/bids"
	"strandwise/ingest/bvh"
	"strandwise/ingest/c3d"
	"strandwise/ingest/columnar"
	"strandwise/ingest/delimited"
	"strandwise/ingest/jsonlines"
	"strandwise/ingest/raw"
)

// formats lists what can be read, in the order of asking. Delimited text
// stands last: it takes any text.
func (o *Options) formats() []raw.Format {
	return []raw.Format{
		bids.Format{},
		bvh.Format{LengthUnit: o.LengthUnit},
		c3d.Format{Stream: o.Signals},
		columnar.Format{},
		jsonlines.Format{},
		delimited.Format{},
	}
}

// extensions lists the extensions of all formats.
func (o *Options) extensions() []string {
	var out []string
	for _, f := range o.formats() {
		out = append(out, f.Extensions()...)
	}
	return slices.Compact(out)
}

// formatOf returns the format of a file that begins with head, nil when none
// knows it.
func (o *Options) formatOf(head []byte, name string) raw.Format {
	for _, f := range o.formats() {
		if f.Sniff(head, name) {
			return f
		}
	}
	return nil
}

// magics names well-known kinds of file that hold no recordings for us, by
// their first bytes (each format's own specification).
var magics = []struct{ head, kind string }{
	{"\x89PNG", "a PNG image"},
	{"\xff\xd8\xff", "a JPEG image"},
	{"PK\x03\x04", "a zip archive (or an office document)"},
	{"%PDF", "a PDF document"},
	{"\x89HDF", "an HDF5 file"},
	{"BZh", "packed with bzip2"},
	{"\xfd7zXZ", "packed with xz"},
	{"7z\xbc\xaf", "a 7z archive"},
	{"SQLite format 3", "an SQLite database"},
	{"MATLAB 5.0", "a MATLAB file"},
}
