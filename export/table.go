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

// table is one table of one split while it is written: a row of part files.
type table struct {
	set     *Writer
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
	file   file
	pages  *pages.Writer
	whole  hash.Hash   // of the file so far
	group  hash.Hash32 // of the row group in the making
	groups []RowGroup
	floats int64 // bytes of raw floats in the row group in the making
	facts  TakeFacts
}

func newTable(w *Writer, kind Table, split channels.Split) *table {
	takes := NewTakeRows(w.layout, false)
	columns := takes.Columns()
	if kind == Frames {
		columns = frameColumns(w.layout)
	}
	return &table{set: w, kind: kind, columns: columns, takes: takes, folder: fmt.Sprintf("%s/split=%s", kind, split)}
}

// add writes the rows of one take.
func (t *table) add(take *channels.Take) error {
	if t.kind == Frames {
		return t.addFrames(take)
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
		name:  fmt.Sprintf("%s/part-%05d.parquet", t.folder, t.parts),
		whole: sha256.New(),
		group: crc32.NewIEEE(),
	}
	var err error
	if p.file, err = t.set.createFile(filepath.Join(t.set.dir, filepath.FromSlash(p.name))); err != nil {
		return err
	}
	t.part = p
	t.parts++
	p.pages, err = pages.NewWriter(io.MultiWriter(p.file, p.whole, p.group), t.columns)
	p.group.Reset() // the file's first bytes belong to no row group
	return err
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
	if p.pages.Offset() < t.set.options.FileBytes {
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
	metadata, err := p.facts.metadata(t.set.layout, t.kind, t.set.options.Version)
	if err != nil {
		return err
	}
	if err := p.pages.Close(metadata, t.set.options.program()); err != nil {
		return err
	}
	t.part = nil // place closes the file, whatever comes
	if err := place(t.set.disk, p.file, filepath.Join(t.set.dir, filepath.FromSlash(p.name))); err != nil {
		return err
	}
	f := File{Path: p.name, Bytes: p.pages.Offset(), SHA256: hexSum(p.whole), RowGroups: p.groups}
	for _, g := range p.groups {
		f.Rows += g.Rows
	}
	t.set.files = append(t.set.files, f)
	return nil
}

// abandon closes the part being written; Discard removes it.
func (t *table) abandon() {
	if t.part != nil {
		t.part.file.Close()
		t.part = nil
	}
}

func hexSum(h hash.Hash) string { return hex.EncodeToString(h.Sum(nil)) }
