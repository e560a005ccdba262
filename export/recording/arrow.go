package recording

import (
	"bufio"
	"errors"
	"io"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/apache/arrow/go/v15/arrow/ipc"

	"strandwise/channels"
	"strandwise/export"
	"strandwise/export/pages"
)

// batchBytes is the size of floats after which a record batch ends: large enough
// for what describes a batch not to matter, small enough for a reader at the
// other end of a pipe to have something soon.
const batchBytes = 1 << 20

// Arrow writes one row a take as record batches of Arrow IPC. It holds a batch
// of 1 MiB, or one take if that is larger.
type Arrow struct {
	out      *bufio.Writer
	ipc      recordWriter
	schema   *arrow.Schema
	rows     *export.TakeRows
	batch    batch
	contents *Contents
	floats   int64 // bytes of floats in the batch in the making
	err      error
}

var _ Writer = (*Arrow)(nil)

// recordWriter is a writer of arrow/go for either form.
type recordWriter interface {
	Write(arrow.Record) error
	Close() error
}

// NewArrowStream begins an Arrow IPC stream of these contents on out, which may
// be a pipe; version is that of the program, for the metadata.
func NewArrowStream(out io.Writer, c *Contents, version string) (*Arrow, error) {
	w, err := newArrow(out, c, version)
	if err == nil {
		w.ipc = ipc.NewWriter(w.out, ipc.WithSchema(w.schema))
	}
	return w, err
}

// NewArrowFile begins an Arrow IPC file of these contents on out, as
// [NewArrowStream] does a stream.
func NewArrowFile(out io.Writer, c *Contents, version string) (*Arrow, error) {
	w, err := newArrow(out, c, version)
	if err == nil {
		w.ipc, err = ipc.NewFileWriter(&position{Writer: w.out}, ipc.WithSchema(w.schema))
	}
	return w, err
}

// NewGrownStream begins an Arrow IPC stream of takes of which most are only made
// while it is written. Contents has noted the recorded ones among them. The rows
// end in a column split, and the metadata are those of a set with these options;
// see [export.TakeFacts.StreamMetadata].
func NewGrownStream(out io.Writer, c *Contents, o export.Options) (*Arrow, error) {
	metadata, err := c.facts.StreamMetadata(c.Layout, o)
	if err != nil {
		return nil, err
	}
	grown := *c
	grown.Splits = true
	w := newArrowOf(out, &grown, metadata)
	w.ipc = ipc.NewWriter(w.out, ipc.WithSchema(w.schema))
	return w, nil
}

func newArrow(out io.Writer, c *Contents, version string) (*Arrow, error) {
	metadata, err := c.facts.Metadata(c.Layout, version)
	if err != nil {
		return nil, err
	}
	return newArrowOf(out, c, metadata), nil
}

func newArrowOf(out io.Writer, c *Contents, metadata []pages.KeyValue) *Arrow {
	rows := export.NewTakeRows(c.Layout, c.Splits)
	w := &Arrow{out: bufio.NewWriterSize(out, 64<<10), rows: rows, contents: c}
	w.batch, w.schema = newBatch(rows.Columns(), metadata)
	return w
}

// Add writes a take as the next row.
func (w *Arrow) Add(t *channels.Take) error {
	if w.err != nil {
		return w.err
	}
	if err := w.contents.check(t, true); err != nil {
		return err
	}
	w.rows.Append(w.batch, t)
	if w.floats += takeBytes(t); w.floats >= batchBytes {
		w.err = w.flush()
	}
	return w.err
}

// flush writes the batch in the making.
func (w *Arrow) flush() error {
	w.floats = 0
	record := w.batch.record(w.schema)
	defer record.Release()
	if err := w.ipc.Write(record); err != nil {
		return err
	}
	return w.out.Flush() // whoever reads a pipe can begin on the batch
}

// Close writes the last batch and the end of the stream or the file.
func (w *Arrow) Close() error {
	if w.err == nil && w.floats > 0 {
		w.err = w.flush()
	}
	if w.err != nil {
		return w.err
	}
	w.err = errors.Join(w.ipc.Close(), w.out.Flush())
	return w.err
}

// position is a writer that tells how much was written, which is all the
// seeking that arrow/go does.
type position struct {
	io.Writer
	at int64
}

// Write writes and counts.
func (p *position) Write(b []byte) (int, error) {
	n, err := p.Writer.Write(b)
	p.at += int64(n)
	return n, err
}

// Seek returns the position. It moves nowhere.
func (p *position) Seek(offset int64, whence int) (int64, error) {
	if offset != 0 || whence != io.SeekCurrent {
		return p.at, errors.ErrUnsupported
	}
	return p.at, nil
}
