package pages

import (
	"errors"
	"fmt"
	"io"

	"github.com/parquet-go/parquet-go/format"
)

const magic = "PAR1"

// Writer writes one Parquet file. Rows are appended column by column: each
// Append method, Fixed and List adds to one column; [Writer.EndRows] says that
// every column has received n more rows. The caller ends a row group with
// [Writer.Flush] when [Writer.Buffered] is as large as it likes: memory is the
// row group in the making and one page per column.
//
// A Writer is not safe for concurrent use. After a failed write every method
// that can fail returns that error.
type Writer struct {
	out     io.Writer
	offset  int64
	columns []*column
	press   press
	groups  []format.RowGroup
	rows    int64 // of the row group in the making
	scratch []byte
	err     error
}

// Group tells where a row group stands in its file: Bytes bytes from Offset on.
type Group struct {
	Rows   int64
	Offset int64
	Bytes  int64
}

// NewWriter begins a Parquet file of these columns on out, compressed with
// Snappy. It does not close out, nor buffer: each write is a column of a row
// group.
func NewWriter(out io.Writer, columns []Column) (*Writer, error) {
	return NewCompressedWriter(out, columns, Snappy)
}

// NewCompressedWriter is [NewWriter] with another compression.
func NewCompressedWriter(out io.Writer, columns []Column, by Compression) (*Writer, error) {
	w := &Writer{out: out}
	var err error
	if w.press.codec, err = newCodec(by); err != nil {
		return nil, err
	}
	for _, c := range columns {
		if c.Kind.list() && c.Optional {
			return nil, fmt.Errorf("column %s: a list cannot be optional", c.Name)
		}
		w.columns = append(w.columns, newColumn(c))
	}
	w.write([]byte(magic))
	return w, w.err
}

// AppendText adds n rows of the same text to column c. The text is kept until
// the row group ends.
func (w *Writer) AppendText(c int, s string, n int) {
	col := w.column(c, Text)
	col.indexes.add(col.dictionary.at(s), n)
	col.present(n)
}

// AppendNull adds n nulls to column c, which must be optional.
func (w *Writer) AppendNull(c, n int) {
	if !w.columns[c].Optional {
		panic("pages: null in a required column")
	}
	w.columns[c].absent(n)
}

// AppendInt32 adds one number to column c.
func (w *Writer) AppendInt32(c int, v int32) {
	w.column(c, Int32)
	putInt32(w.Fixed(c, 1), v)
}

// AppendFloat64 adds one number to column c.
func (w *Writer) AppendFloat64(c int, v float64) {
	w.column(c, Float64)
	putFloat64(w.Fixed(c, 1), v)
}

// Fixed adds n rows to column c, of any flat numeric kind, and returns the
// bytes of their values for the caller to fill, little-endian, before the next
// call for that column. What they hold before is not defined.
func (w *Writer) Fixed(c, n int) []byte {
	col := w.columns[c]
	if col.width == 0 || col.Kind.list() {
		panic("pages: not a flat numeric column")
	}
	col.present(n)
	return col.extend(n)
}

// List adds one row holding a list of n numbers of four bytes to column c, of
// either list kind, and returns their bytes for the caller to fill, as
// [Writer.Fixed] does.
func (w *Writer) List(c, n int) []byte {
	col := w.columns[c]
	if !col.Kind.list() {
		panic("pages: not a column of lists")
	}
	col.list(n)
	return col.extend(n)
}

func (w *Writer) column(c int, want Kind) *column {
	if w.columns[c].Kind != want {
		panic("pages: value of another kind than the column")
	}
	return w.columns[c]
}

// EndRows ends n rows: every column must have received as many since the last
// call. It finishes the pages that are full.
func (w *Writer) EndRows(n int) error {
	w.rows += int64(n)
	for _, c := range w.columns {
		if c.rows != w.rows {
			panic("pages: columns of different lengths")
		}
		if w.err == nil && c.full() {
			w.err = w.press.cut(c)
		}
	}
	return w.err
}

// Rows returns the number of rows in the row group in the making.
func (w *Writer) Rows() int64 { return w.rows }

// Offset returns the bytes written to the file so far.
func (w *Writer) Offset() int64 { return w.offset }

// Flush writes the row group in the making and returns its place. Without
// rows it writes nothing and returns the zero Group.
func (w *Writer) Flush() (Group, error) {
	if w.err != nil || w.rows == 0 {
		return Group{}, w.err
	}
	g := format.RowGroup{NumRows: w.rows, FileOffset: w.offset, Ordinal: int16(len(w.groups))}
	if len(w.groups) > 32767 {
		w.err = errors.New("more than 32768 row groups in one Parquet file; make the row groups larger or the files smaller")
		return Group{}, w.err
	}
	for _, c := range w.columns {
		g.Columns = append(g.Columns, format.ColumnChunk{MetaData: w.writeColumn(c)})
		meta := &g.Columns[len(g.Columns)-1].MetaData
		g.TotalByteSize += meta.TotalUncompressedSize
		g.TotalCompressedSize += meta.TotalCompressedSize
		c.reset()
	}
	w.groups = append(w.groups, g)
	w.rows = 0
	return Group{Rows: g.NumRows, Offset: g.FileOffset, Bytes: w.offset - g.FileOffset}, w.err
}

// writeColumn writes the dictionary and the pages of one column and returns
// what the footer says about them.
func (w *Writer) writeColumn(c *column) format.ColumnMetaData {
	if w.err == nil {
		w.err = w.press.cut(c)
	}
	from := w.offset
	meta := c.metadata()
	meta.Codec = w.press.codec.format
	if c.Kind == Text && w.err == nil {
		var size int64
		w.scratch, size, w.err = w.press.appendDictionary(w.scratch[:0], c)
		w.write(w.scratch)
		meta.DictionaryPageOffset = from
		meta.TotalUncompressedSize += size
	}
	meta.DataPageOffset = w.offset
	w.write(c.finished)
	meta.TotalCompressedSize = w.offset - from
	return meta
}

// Close writes the last row group, if it holds rows, and the footer with the
// key-value metadata, in the order given. It does not close the file under it.
// The Writer must not be used afterwards.
func (w *Writer) Close(metadata []KeyValue, createdBy string) error {
	if _, err := w.Flush(); err != nil {
		return err
	}
	footer, err := w.footer(metadata, createdBy)
	if err != nil {
		return err
	}
	w.write(footer)
	return w.err
}

func (w *Writer) write(b []byte) {
	if w.err != nil {
		return
	}
	n, err := w.out.Write(b)
	w.offset += int64(n)
	w.err = err
}
