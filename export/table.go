package export

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"hash"
	"hash/crc32"
	"io"
	"path/filepath"

	"strandwise/channels"
	"strandwise/export/pages"
)

type tableKey struct {
	table Table
	split channels.Split
}

// table is one table of one split of one bucket while it is written: a row of part files.
type table struct {
	set     *Writer
	bucket  *Bucket
	kind    Table
	folder  string // inside the set, with slashes
	columns []pages.Column
	parts   int   // files begun
	part    *part // the file being written, nil between two
	takes   *TakeRows
}

// part is one Parquet file being written.
type part struct {
	name   string // inside the set, with slashes
	file   *temporary
	pages  *pages.Writer
	whole  hash.Hash   // of the file so far
	group  hash.Hash32 // of the row group in the making
	groups []RowGroup
	floats int64 // bytes of raw floats in the row group in the making
	facts  TakeFacts

	saturated []int64 // values per channel, table windows only
}

func newTable(b *Bucket, kind Table, split channels.Split) *table {
	w := b.set
	takes := NewTakeRows(w.layout, false)
	columns := takes.Columns()
	switch kind {
	case Frames:
		columns = frameColumns(w.layout)
	case Windows:
		columns = windowColumns(w.layout, w.options.Windowing)
	}
	return &table{set: w, bucket: b, kind: kind, columns: columns, takes: takes, folder: fmt.Sprintf("%s/split=%s", kind, split)}
}

// ownColumns returns the columns of a table before those of the channels.
func ownColumns(kind Table) []pages.Column {
	switch kind {
	case Frames:
		return fixedFrameColumns()
	case Windows:
		return fixedWindowColumns()
	}
	return fixedTakeColumns()
}

// add writes the rows of one take.
func (t *table) add(take *channels.Take) error {
	switch t.kind {
	case Frames:
		return t.addFrames(take)
	case Windows:
		return t.addWindows(take)
	}
	return t.addTake(take)
}

// begin opens the next part unless one is open.
func (t *table) begin() error {
	if t.part != nil {
		return nil
	}
	dir := filepath.Join(t.set.dir, filepath.FromSlash(t.folder))
	if err := t.set.makeFolders(dir); err != nil {
		return err
	}
	p := &part{
		name:  t.partName(),
		whole: sha256.New(),
		group: crc32.NewIEEE(),
	}
	var err error
	if p.file, err = createTemporary(t.set.disk, t.set.path(p.name)); err != nil {
		return err
	}
	t.part = p
	t.parts++
	p.pages, err = pages.NewCompressedWriter(io.MultiWriter(p.file, p.whole, p.group), t.columns, t.set.options.Compression)
	p.group.Reset() // the file's first bytes belong to no row group
	return err
}

// partName names the next part: after the bucket, and from the bucket's second
// part on by a number too.
func (t *table) partName() string {
	if t.parts == 0 {
		return fmt.Sprintf("%s/part-%05d.parquet", t.folder, t.bucket.number)
	}
	return fmt.Sprintf("%s/part-%05d_%05d.parquet", t.folder, t.bucket.number, t.parts+1)
}

// endRows ends rows that hold this many bytes of floats, and the row group and
// the file when they are full.
func (t *table) endRows(rows int, floats int64) error {
	p := t.part
	if err := p.pages.EndRows(rows); err != nil {
		return err
	}
	if p.floats += floats; p.floats < t.set.options.RowGroupBytes {
		return nil
	}
	if err := p.endGroup(); err != nil {
		return err
	}
	if p.pages.Offset() < 2*t.set.options.FileBytes {
		return nil
	}
	return t.end()
}

func (p *part) endGroup() error {
	g, err := p.pages.Flush()
	if err != nil || g.Rows == 0 {
		return err
	}
	p.groups = append(p.groups, RowGroup{Rows: g.Rows, Offset: g.Offset, Bytes: g.Bytes, CRC32: hexSum(p.group)})
	p.group.Reset()
	p.floats = 0
	return nil
}

// end finishes the part, if one is open, and puts it in place.
func (t *table) end() error {
	p := t.part
	if p == nil {
		return nil
	}
	if err := p.endGroup(); err != nil {
		return err
	}
	metadata, err := t.metadata()
	if err != nil {
		return err
	}
	if err := p.pages.Close(metadata, t.set.options.program()); err != nil {
		return err
	}
	t.part = nil // place closes the file, whatever comes
	if err := p.file.place(); err != nil {
		return err
	}
	f := File{Path: p.name, Bytes: p.pages.Offset(), SHA256: hexSum(p.whole), RowGroups: p.groups}
	for _, g := range p.groups {
		f.Rows += g.Rows
	}
	t.bucket.files = append(t.bucket.files, f)
	return nil
}

// metadata returns what the part being written says of itself.
func (t *table) metadata() ([]pages.KeyValue, error) {
	o := t.set.options
	out, err := t.part.facts.metadata(t.set.layout, t.kind, o.Version)
	if err != nil {
		return nil, err
	}
	run, err := o.Run().metadata()
	if err != nil {
		return nil, err
	}
	out = append(out, run)
	if t.kind == Windows {
		more, err := o.Windowing.metadata(t.set.layout, t.part.saturated)
		return append(out, more...), err
	}
	return out, nil
}

// abandon removes the part being written.
func (t *table) abandon() error {
	if t.part == nil {
		return nil
	}
	f := t.part.file
	t.part = nil
	return f.abandon()
}

func hexSum(h hash.Hash) string { return hex.EncodeToString(h.Sum(nil)) }
