// Package columnar reads takes from Parquet files and from Arrow IPC, as a file
// or as a stream. It knows them by their content.
//
// A table is read in one of two forms. In the long form a row is a frame, and
// the rows of one take stand together:
//
//	take: text, label: text, subject: text, time_s: double, left_wrist.accel.x: float …
//
// In the other form a row is a take, with its times and each channel as lists:
//
//	label: text, subject: text, time_s: list<double>, left_wrist.accel.x: list<float> …
//
// Columns named take, label, subject, session and split, upper or lower case,
// state what a row belongs to; text, dictionaries and whole numbers will do. So
// do folders named key=value right above the file, as partitioned tables have
// them: split=train. The clock is the column named time, t, timestamp or
// elapsed, of numbers, time stamps, times of day or durations in any unit;
// failing that, the first column of time stamps or durations, or one named
// frame or index, which counts frames. All other columns of numbers are
// channels; what holds anything else is left out with a notice.
//
// Nested structures count as columns whose names are joined by dots, so
// struct<accel: struct<x, y, z>> gives accel.x, accel.y and accel.z. Lists may
// be of any kind (in Parquet also the two legacy forms of its specification),
// one within another they are left out. Nulls and NaN are missing values.
//
// The unit of a channel stands in brackets in its name, or in the metadata of
// its Arrow field under the key unit or units, which Parquet files keep under
// the key ARROW:schema. A file with the metadata key strandwise.layout is part
// of a set that this program wrote: its channels, quantities, units and groups
// are those the layout states, and its synthetic takes are marked as such.
//
// Memory: Parquet is read page by page and Arrow batch by batch, so reading
// takes one page of each column, or one batch, and one take.
//
// The libraries that decode both formats panic on some malformed files. Their
// panics are recovered and reported as faults of the file.
package columnar

import (
	"bytes"
	"encoding/binary"
	"errors"
	"io"

	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// Format is Parquet and Arrow IPC. It is stateless and safe for concurrent use.
type Format struct{}

var _ raw.Format = Format{}

// Extensions returns the usual extensions of Parquet files, Arrow files and
// Arrow streams.
func (Format) Extensions() []string {
	return []string{".parquet", ".pq", ".arrow", ".feather", ".ipc", ".arrows"}
}

// The first bytes of each format (Apache Parquet, File Format; Apache Arrow,
// Columnar Format, IPC).
var (
	parquetMagic   = []byte("PAR1")
	encryptedMagic = []byte("PARE")
	arrowMagic     = []byte("ARROW1")
	featherMagic   = []byte("FEA1") // what Arrow files were before Arrow 0.17
	continuation   = []byte{0xff, 0xff, 0xff, 0xff}
)

// Sniff knows all of them by their first bytes.
func (Format) Sniff(head []byte, name string) bool {
	for _, magic := range [][]byte{parquetMagic, encryptedMagic, arrowMagic, featherMagic} {
		if bytes.HasPrefix(head, magic) {
			return true
		}
	}
	return isStream(head)
}

// isStream tells whether data begins with an Arrow message: its mark, and a
// length that no more than fills memory.
func isStream(head []byte) bool {
	return len(head) >= 8 && bytes.HasPrefix(head, continuation) && binary.LittleEndian.Uint32(head[4:]) < maxMessage
}

// Read yields the takes of one file, or of a stream. Parquet is read from
// in.Path when that is the file itself; where it is packed, or r is all there
// is, it is unpacked into a temporary file first.
func (Format) Read(r io.Reader, in raw.Input) raw.Stream {
	return func(yield func(*raw.Take, error) bool) {
		if in.Notice == nil {
			in.Notice = func(string, string) {}
		}
		if err := read(r, in, yield); err != nil && err != errStopped {
			yield(nil, err)
		}
	}
}

var errStopped = errors.New("receiver stopped")

func read(r io.Reader, in raw.Input, yield func(*raw.Take, error) bool) error {
	src, err := open(r, in)
	if err != nil {
		return err
	}
	defer src.close()
	d := &reader{src: src, in: in, yield: yield, hive: hive(in)}
	return d.read()
}

// open finds out which of the formats it is.
func open(r io.Reader, in raw.Input) (source, error) {
	head := make([]byte, 8)
	n, err := io.ReadFull(r, head)
	if err != nil && err != io.EOF && err != io.ErrUnexpectedEOF {
		return nil, damaged(in, err)
	}
	head = head[:n]
	whole := io.MultiReader(bytes.NewReader(head), r)
	const again = "write it again as Parquet or as an Arrow file"
	switch {
	case bytes.HasPrefix(head, parquetMagic):
		return openParquet(r, whole, in)
	case bytes.HasPrefix(head, arrowMagic):
		return openArrow(r, true, in)
	case isStream(head):
		return openArrow(whole, false, in)
	case bytes.HasPrefix(head, encryptedMagic):
		return nil, &fault.Error{File: in.Name, Problem: "is an encrypted Parquet file", Remedy: "decrypt it first"}
	case bytes.HasPrefix(head, featherMagic):
		return nil, &fault.Error{File: in.Name, Problem: "is a Feather file of version 1", Remedy: again}
	}
	return nil, &fault.Error{File: in.Name, Problem: "is neither Parquet nor Arrow", Remedy: again}
}
