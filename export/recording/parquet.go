package recording

import (
	"io"

	"strandwise/channels"
	"strandwise/export"
	"strandwise/export/pages"
)

// Parquet writes one row a take, as in the table takes of a set. It holds one
// row group of [export.DefaultRowGroupBytes], or one take if that is larger.
type Parquet struct {
	pages    *pages.Writer
	rows     *export.TakeRows
	contents *Contents
	version  string
	floats   int64 // bytes of floats in the row group in the making
}

var _ Writer = (*Parquet)(nil)

// NewParquet begins a Parquet file of these contents on out; version is that of
// the program, for the metadata.
func NewParquet(out io.Writer, c *Contents, version string) (*Parquet, error) {
	rows := export.NewTakeRows(c.Layout, c.Splits)
	p, err := pages.NewWriter(out, rows.Columns())
	return &Parquet{pages: p, rows: rows, contents: c, version: version}, err
}

// Add writes a take as the next row.
func (w *Parquet) Add(t *channels.Take) error {
	if err := w.contents.check(t, true); err != nil {
		return err
	}
	w.rows.Append(w.pages, t)
	if err := w.pages.EndRows(1); err != nil {
		return err
	}
	if w.floats += takeBytes(t); w.floats < export.DefaultRowGroupBytes {
		return nil
	}
	w.floats = 0
	_, err := w.pages.Flush()
	return err
}

// takeBytes returns the bytes of a take's times and values as 32-bit floats.
func takeBytes(t *channels.Take) int64 { return int64(4 * t.Frames() * (1 + t.Width())) }

// Close writes the last row group and the footer.
func (w *Parquet) Close() error {
	metadata, err := w.contents.facts.Metadata(w.contents.Layout, w.version)
	if err != nil {
		return err
	}
	return w.pages.Close(metadata, export.Program(w.version))
}
