// Package delimited reads takes from delimited text: a header, then one row
// per frame.
//
//	take,label,subject,time_s,left_wrist.accel.x [g],left_wrist.accel.y [g]
//	t01,wave,ana,0.00,0.01,0.98
//	t01,wave,ana,0.02,0.03,0.97
//
// # Columns
//
// Columns named take, label, subject, session and split (in any order, upper
// or lower case) state what a row belongs to. Rows of one take stand together;
// without a take column the whole file is one take. Every other column that
// holds numbers is a channel, whose header may state its unit in brackets;
// columns whose first value is text are left out, with a notice.
//
// A column named frame, frame_index or index counts frames. One named time, t,
// timestamp or elapsed holds the clock, with its unit in the name (time_ms,
// "Time [us]") or not: then the unit is the one asked for, or else the one of
// s, ms, us and ns by which the median step of the first take gives a likely
// frame rate, and a notice gives that evidence. Times may be RFC 3339 stamps.
// A clock that counts from a distant epoch is made to count from the first row
// of each take, before any digit is lost. Without either, rows count frames.
//
// # Text
//
// Fields are separated by commas, semicolons, tabs or runs of spaces, found
// from the first two lines, and quoted as RFC 4180 describes. Numbers have a
// decimal point, or a decimal comma where commas do not separate; the first
// number that has one decides for the file. Blank lines, and lines that begin
// with #, % or //, are passed over. Text is UTF-8 with or without a mark, or
// UTF-16 with one. Departures from RFC 4180: a bare line feed ends a row, and a
// quote inside a field that does not begin with one stands for itself.
//
// # Speed
//
// Nearly all rows are plain: the identity of the row above, and numbers. They
// are read in one pass over the text, numbers by an exact fast path. A row that
// is anything else is read again by a slow path, which alone decides what is
// right or wrong; see [Format.Read].
package delimited

import (
	"io"

	"strandwise/ingest/raw"
)

// Format is delimited text. It is stateless and safe for concurrent use.
type Format struct{}

var _ raw.Format = Format{}

// Extensions returns the usual extensions of delimited text.
func (Format) Extensions() []string { return []string{".csv", ".tsv", ".txt", ".dat"} }

// Sniff accepts any text.
func (Format) Sniff(head []byte, name string) bool {
	return byteOrder(head) != nil || binaryByte(head) < 0
}

// Read yields the takes of one file of delimited text, under the contract of
// [raw.Stream]. It holds one take, 256 KiB of text, and at most one row of up
// to 16 MiB. Values are those of strconv.ParseFloat to the bit, in the units
// of the file.
func (Format) Read(r io.Reader, in raw.Input) raw.Stream {
	return func(yield func(*raw.Take, error) bool) {
		d := &reader{in: in, yield: yield}
		if err := d.read(r); err != nil && err != errStopped {
			yield(nil, err)
		}
	}
}
