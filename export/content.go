package export

import (
	"errors"
	"fmt"
	"hash/maphash"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/parquet-go/parquet-go"

	"strandwise/channels"
)

// content gathers what the takes of a set say about themselves, to hold it
// against the manifest once all files are read.
type content struct {
	dir      string
	manifest *Manifest
	seed     maphash.Seed
	counts   counts
	ids      []uint64          // hashes of all ids
	recorded map[uint64]bool   // hashes of the recorded ids in the split train
	sources  map[uint64]source // the sources asked for
	rows     map[tableKey]int64
	windows  windowContent
	partial  bool // a file could not be read, so what is missing proves nothing
}

// source is where a source take was first asked for.
type source struct{ name, file, take string }

func newContent(dir string, m *Manifest) *content {
	return &content{
		dir: dir, manifest: m, seed: maphash.MakeSeed(), counts: counts{},
		recorded: map[uint64]bool{}, sources: map[uint64]source{}, rows: map[tableKey]int64{},
	}
}

// take checks the rows of one Parquet file, if its bytes are the sealed ones.
func (c *content) take(v *Verification, f File, sound bool) {
	if !sound {
		c.partial = true
		return
	}
	if err := c.takeFile(v, f); err != nil {
		v.problem(f.Path, "%v", err)
		c.partial = true
	}
}

func (c *content) takeFile(v *Verification, f File) error {
	key, err := placeOf(f.Path)
	if err != nil {
		return err
	}
	return c.open(f, func(p *parquet.File) error {
		if err := checkRows(p, f); err != nil {
			return err
		}
		c.rows[key] += f.Rows
		switch key.table {
		case Frames:
			return c.checkColumns(p, Frames)
		case Windows:
			return errors.Join(c.windows.file(p), c.checkColumns(p, Windows))
		}
		for _, g := range p.RowGroups() {
			if err := c.takeGroup(v, f.Path, key.split, g); err != nil {
				return err
			}
		}
		return c.checkColumns(p, key.table)
	})
}

// checkColumns holds the columns of a file against those of its table and the
// channels of the manifest.
func (c *content) checkColumns(p *parquet.File, t Table) error {
	var want, got []string
	for _, column := range ownColumns(t) {
		want = append(want, column.Name)
	}
	for _, channel := range c.manifest.Layout.Channels {
		want = append(want, channel.Column)
	}
	for _, field := range p.Schema().Fields() {
		got = append(got, field.Name())
	}
	if !slices.Equal(want, got) {
		return fmt.Errorf("its columns are %s, not %s", strings.Join(got, ", "), strings.Join(want, ", "))
	}
	return nil
}

// placeOf returns the table and split that a path stands for.
func placeOf(path string) (tableKey, error) {
	parts := strings.Split(path, "/")
	if len(parts) != 3 || !belongsToTable(parts, false) {
		return tableKey{}, errors.New("a Parquet file outside the tables")
	}
	return tableKey{Table(parts[0]), channels.Split(strings.TrimPrefix(parts[1], "split="))}, nil
}

// open reads one Parquet file of the set. Its bytes are the sealed ones, but
// who sealed them is not known: a manifest can be made to match a broken
// file, so a reader's panic counts as a broken file too.
func (c *content) open(f File, read func(*parquet.File) error) (err error) {
	defer func() {
		if r := recover(); r != nil {
			err = fmt.Errorf("cannot be read as Parquet: %v", r)
		}
	}()
	file, err := os.Open(filepath.Join(c.dir, filepath.FromSlash(f.Path)))
	if err != nil {
		return err
	}
	defer file.Close()
	p, err := parquet.OpenFile(file, f.Bytes, parquet.SkipBloomFilters(true), parquet.SkipPageIndex(true))
	if err != nil {
		return fmt.Errorf("cannot be read as Parquet: %w", err)
	}
	return read(p)
}

// checkRows holds the rows that the footer states against the manifest.
func checkRows(p *parquet.File, f File) error {
	groups := p.RowGroups()
	if p.NumRows() != f.Rows || len(groups) != len(f.RowGroups) {
		return fmt.Errorf("footer: %d rows in %d row groups, the manifest says %d in %d", p.NumRows(), len(groups), f.Rows, len(f.RowGroups))
	}
	for i, g := range groups {
		if g.NumRows() != f.RowGroups[i].Rows {
			return fmt.Errorf("footer: row group %d has %d rows, the manifest says %d", i, g.NumRows(), f.RowGroups[i].Rows)
		}
	}
	return nil
}

// takeGroup gathers the takes of one row group, reading only the columns that
// say who they are.
func (c *content) takeGroup(v *Verification, path string, split channels.Split, g parquet.RowGroup) error {
	var texts [4][]parquet.Value
	for i, name := range []string{"id", "label", "origin", "source"} {
		var err error
		if texts[i], err = readColumn(g, name, parquet.ByteArray); err != nil {
			return err
		}
	}
	frames, err := readColumn(g, "frames", parquet.Int32)
	if err != nil {
		return err
	}
	for i := range frames {
		id, label, origin := texts[0][i].String(), texts[1][i].String(), channels.Origin(texts[2][i].String())
		c.counts.add(split, label, origin, 1, int64(frames[i].Int32()))
		c.windows.take(split, int(frames[i].Int32()))
		c.takeRow(v, path, split, id, origin, texts[3][i])
	}
	v.Takes += int64(len(frames))
	return nil
}

// takeRow checks what one row says of its origin and remembers its id.
func (c *content) takeRow(v *Verification, path string, split channels.Split, id string, origin channels.Origin, from parquet.Value) {
	h := maphash.String(c.seed, id)
	c.ids = append(c.ids, h)
	switch {
	case origin == channels.Recorded && from.IsNull():
		if split == channels.Train {
			c.recorded[h] = true
		}
	case origin == channels.Recorded:
		v.problem(path, "take %s is recorded, yet has the source %s", id, from)
	case origin != channels.Synthetic || from.IsNull():
		v.problem(path, "take %s is %q without a source", id, origin)
	case split != channels.Train:
		v.problem(path, "take %s is synthetic, yet stands in the split %s", id, split)
	default:
		name := from.String()
		if h := maphash.String(c.seed, name); c.sources[h].name == "" {
			c.sources[h] = source{name, path, id}
		}
	}
}
