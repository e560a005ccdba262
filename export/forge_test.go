package export_test

import (
	"bytes"
	"errors"
	"maps"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"strandwise/channels"
	"strandwise/export"
	"strandwise/export/pages"
)

// TestVerifyForgedManifest: a manifest that was changed and sealed again still
// has to agree with the tables.
func TestVerifyForgedManifest(t *testing.T) {
	const train = "takes/split=train/part-00000.parquet"
	file := func(m *export.Manifest, name string) *export.File {
		return &m.Files[slices.IndexFunc(m.Files, func(f export.File) bool { return f.Path == name })]
	}
	drop := func(table string) func(dir string, m *export.Manifest) {
		return func(dir string, m *export.Manifest) {
			m.Files = slices.DeleteFunc(m.Files, func(f export.File) bool {
				gone := strings.HasPrefix(f.Path, table)
				if gone {
					_ = os.Remove(filepath.Join(dir, f.Path))
				}
				return gone
			})
		}
	}
	replace := func(dir string, m *export.Manifest, name, text string) {
		put(t, filepath.Join(dir, name), text)
		f := file(m, name)
		f.Bytes, f.SHA256 = int64(len(text)), sha(text)
	}
	for name, tc := range map[string]struct {
		forge func(dir string, m *export.Manifest)
		want  string
	}{
		"a count":      {func(_ string, m *export.Manifest) { m.Counts[0].Takes++ }, "manifest.json: split test, label curtain, recorded: it says 2 takes of 30 frames, the table has 1 of 30"},
		"a count less": {func(_ string, m *export.Manifest) { m.Counts = m.Counts[1:] }, "it says 0 takes of 0 frames, the table has 1 of 30"},
		"a count more": {func(_ string, m *export.Manifest) {
			m.Counts = append(m.Counts, export.Count{Split: "train", Label: "bow", Origin: "recorded", Takes: 1})
		}, "label bow, recorded: it says 1 takes"},
		"rows":                      {func(_ string, m *export.Manifest) { file(m, train).Rows++ }, train + ": footer: "},
		"rows of group":             {func(_ string, m *export.Manifest) { g := file(m, train).RowGroups; g[0].Rows++; g[1].Rows-- }, train + ": footer: row group 0"},
		"a split's takes left out":  {drop("takes/split=test"), "manifest.json: split test, label curtain"},
		"a split's frames left out": {drop("frames/split=test"), "manifest.json: split test has 61 frames in the takes and 0 rows in the table frames"},
		"a file outside":            {func(_ string, m *export.Manifest) { file(m, "score.json").Path = "../score.json" }, "../score.json: the manifest names a file outside the set"},
		"a table elsewhere": {func(dir string, m *export.Manifest) {
			_ = os.Rename(filepath.Join(dir, train), filepath.Join(dir, "x.parquet"))
			file(m, train).Path = "x.parquet"
		}, "x.parquet: a Parquet file outside the tables"},
		"synthetic takes for testing": {func(dir string, m *export.Manifest) {
			moved := "takes/split=test/part-00009.parquet"
			_ = os.Rename(filepath.Join(dir, train), filepath.Join(dir, moved))
			file(m, train).Path = moved
		}, "is synthetic, yet stands in the split test"},
		"no Parquet": {func(dir string, m *export.Manifest) { replace(dir, m, train, "PAR1 nothing PAR1") }, train + ": "},
		"overlapping group": {func(_ string, m *export.Manifest) {
			file(m, train).RowGroups[1].Offset = 4
			file(m, train).SHA256 = sha("")
		}, train + ": row group 1"},
	} {
		t.Run(name, func(t *testing.T) {
			dir := sealed(t)
			if err := export.Reseal(dir, func(m *export.Manifest) { tc.forge(dir, m) }); err != nil {
				t.Fatal(err)
			}
			if got := verify(t, dir); !slices.ContainsFunc(got, func(p string) bool { return strings.Contains(p, tc.want) }) {
				t.Errorf("%q, want one with %q", got, tc.want)
			}
		})
	}
}

// TestVerifyForgedRows builds tables that no Writer would write.
func TestVerifyForgedRows(t *testing.T) {
	full := map[string]string{"id": "a", "label": "bow", "origin": "recorded", "frames": "int"}
	with := func(column, value string) map[string]string {
		m := maps.Clone(full)
		m[column] = value
		return m
	}
	for name, tc := range map[string]struct {
		row  map[string]string
		want string
	}{
		"no column":           {map[string]string{"id": "a", "frames": "int"}, "no column label of type BYTE_ARRAY"},
		"recorded, yet made":  {with("source", "b"), "take a is recorded, yet has the source b"},
		"made from nothing":   {with("origin", "synthetic"), `take a is "synthetic" without a source`},
		"an unknown origin":   {with("origin", "dreamt"), `take a is "dreamt" without a source`},
		"frames are no count": {with("frames", "text"), "no column frames of type INT32"},
	} {
		t.Run(name, func(t *testing.T) {
			dir := sealed(t)
			const train = "takes/split=train/part-00000.parquet"
			text := forgeRow(t, tc.row)
			put(t, filepath.Join(dir, train), text)
			err := export.Reseal(dir, func(m *export.Manifest) {
				for i := range m.Files {
					if f := &m.Files[i]; f.Path == train {
						*f = export.File{Path: train, Bytes: int64(len(text)), SHA256: sha(text), Rows: 1, RowGroups: []export.RowGroup{{Rows: 1, Offset: 4}}}
					}
				}
			})
			if err != nil {
				t.Fatal(err)
			}
			if got := verify(t, dir); len(got) == 0 || !strings.Contains(got[0], train+": "+tc.want) {
				t.Errorf("%q, want one with %q", got, tc.want)
			}
		})
	}
}

// forgeRow returns a Parquet file of one row with these text columns; the
// columns label, origin and source are null unless given, and "int" stands for
// a number.
func forgeRow(t testing.TB, row map[string]string) string {
	t.Helper()
	var columns []pages.Column
	for _, name := range slices.Sorted(maps.Keys(row)) {
		kind := pages.Text
		if row[name] == "int" {
			kind = pages.Int32
		}
		columns = append(columns, pages.Column{Name: name, Kind: kind})
	}
	if row["source"] == "" {
		columns = append(columns, pages.Column{Name: "source", Kind: pages.Text, Optional: true})
	}
	var b bytes.Buffer
	w, err := pages.NewWriter(&b, columns)
	if err != nil {
		t.Fatal(err)
	}
	for c, column := range columns {
		switch {
		case column.Optional:
			w.AppendNull(c, 1)
		case column.Kind == pages.Int32:
			w.AppendInt32(c, 7)
		default:
			w.AppendText(c, row[column.Name], 1)
		}
	}
	if err := errors.Join(w.EndRows(1), w.Close(nil, "")); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// TestVerifyBrokenParquet changes a byte of a table and seals the manifest
// again, so that every checksum holds: whatever the reader of Parquet makes of
// it, Verify ends with an answer.
func TestVerifyBrokenParquet(t *testing.T) {
	l := &channels.Layout{Channels: []channels.Channel{{Name: "x"}}}
	dir := t.TempDir()
	write(t, dir, l, export.Options{}, []*channels.Take{{ID: "a", Label: "curtain", Layout: l, Time: []float64{0, 1}, Data: []float64{1, 2}}})
	const part = "takes/split=train/part-00000.parquet"
	whole := tree(t, dir)[part]
	found := 0
	for at := 0; at < len(whole); at += 3 {
		changed := []byte(whole)
		changed[at] ^= 1 << (at % 8)
		put(t, filepath.Join(dir, part), string(changed))
		err := export.Reseal(dir, func(m *export.Manifest) {
			m.Files[1].SHA256 = sha(string(changed))
		})
		if err != nil {
			t.Fatal(err)
		}
		v, err := export.Verify(dir)
		if err != nil {
			t.Fatalf("byte %d: %v", at, err)
		}
		if !v.Sound() {
			found++
		}
	}
	// Much of the file is signals and text that nobody can know to be wrong.
	if found < 50 {
		t.Errorf("%d changes were found; the test means to break the file", found)
	}
}
