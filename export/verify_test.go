package export_test

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"strandwise/channels"
	"strandwise/export"
)

// verify returns what Verify finds, one line per problem.
func verify(t testing.TB, dir string) []string {
	t.Helper()
	v, err := export.Verify(dir)
	if err != nil {
		t.Fatal(err)
	}
	var out []string
	for _, p := range v.Problems {
		out = append(out, p.String())
	}
	return out
}

// sealed writes a small set of both tables and returns its folder.
func sealed(t testing.TB, takes ...*channels.Take) string {
	t.Helper()
	dir := t.TempDir()
	l := wristband(t)
	if len(takes) == 0 {
		takes = troupe(l, 2)
	}
	w, err := export.CreateOn(&export.Disk{}, dir, l, both())
	writeTo(t, w, err, takes)
	return dir
}

func TestVerifySoundSet(t *testing.T) {
	dir := sealed(t)
	v, err := export.Verify(dir)
	if err != nil || !v.Sound() {
		t.Fatalf("%v, %v", v, err)
	}
	files := tree(t, dir)
	var bytes int64
	n := 0
	for name, text := range files {
		if !strings.HasSuffix(name, "/") && name != "manifest.json" {
			n++
			bytes += int64(len(text))
		}
	}
	if v.Files != n || v.Bytes != bytes || v.Takes != 14 {
		t.Errorf("checked %d files of %d bytes with %d takes, want %d of %d with 14", v.Files, v.Bytes, v.Takes, n, bytes)
	}
}

// TestVerifyNamesEveryChangedByte changes bytes all over the set, one at a
// time, in several ways.
func TestVerifyNamesEveryChangedByte(t *testing.T) {
	dir := sealed(t)
	for name, text := range tree(t, dir) {
		if strings.HasSuffix(name, "/") {
			continue
		}
		step := 97
		if name == "manifest.json" {
			step = 3 // its bytes are quick to check
		}
		f, err := os.OpenFile(filepath.Join(dir, name), os.O_RDWR, 0)
		if err != nil {
			t.Fatal(err)
		}
		defer f.Close()
		for at := 0; at < len(text); at += step {
			change(t, f, at, text[at]^1<<(at%8))
			v, err := export.Verify(dir)
			if err != nil {
				t.Fatalf("%s, byte %d: %v", name, at, err)
			}
			if !slices.ContainsFunc(v.Problems, func(p export.Problem) bool { return p.File == name }) {
				t.Errorf("%s: byte %d changed, Verify says %v", name, at, v.Problems)
			}
			change(t, f, at, text[at])
		}
	}
	if problems := verify(t, dir); len(problems) > 0 {
		t.Errorf("the set put back is not sound: %v", problems)
	}
}

func change(t testing.TB, f *os.File, at int, b byte) {
	t.Helper()
	if _, err := f.WriteAt([]byte{b}, int64(at)); err != nil {
		t.Fatal(err)
	}
}

// TestVerifyNamesThePart: damage in a row group is said to be there, damage
// elsewhere to be in the footer or header.
func TestVerifyNamesThePart(t *testing.T) {
	dir := sealed(t, troupe(wristband(t), 8)...)
	m, err := export.ReadManifest(dir)
	if err != nil {
		t.Fatal(err)
	}
	f := m.Files[slices.IndexFunc(m.Files, func(f export.File) bool { return len(f.RowGroups) > 2 })]
	path := filepath.Join(dir, f.Path)
	whole := tree(t, dir)[f.Path]
	last := f.RowGroups[len(f.RowGroups)-1]
	for _, tc := range []struct {
		at   int64
		want string
	}{
		{0, "footer or header"},
		{3, "footer or header"},
		{f.RowGroups[0].Offset, "row group 0"},
		{f.RowGroups[1].Offset - 1, "row group 0"},
		{f.RowGroups[1].Offset, "row group 1"},
		{last.Offset + last.Bytes - 1, fmt.Sprintf("row group %d", len(f.RowGroups)-1)},
		{last.Offset + last.Bytes, "footer or header"},
		{f.Bytes - 1, "footer or header"},
	} {
		changed := []byte(whole)
		changed[tc.at] ^= 0x10
		put(t, path, string(changed))
		want := []string{f.Path + ": " + tc.want + ": its bytes are not those that were sealed"}
		if got := verify(t, dir); !slices.Equal(got, want) {
			t.Errorf("byte %d: %v, want %v", tc.at, got, want)
		}
	}
}

func TestVerifyFindsFiles(t *testing.T) {
	const part, score = "takes/split=train/part-00000.parquet", "score.json"
	for _, tc := range []struct {
		name   string
		change func(dir string) error
		want   string
	}{
		{"missing part", func(dir string) error { return os.Remove(filepath.Join(dir, part)) }, part + ": missing"},
		{"missing score", func(dir string) error { return os.Remove(filepath.Join(dir, score)) }, score + ": missing"},
		{"cut short", func(dir string) error { return os.Truncate(filepath.Join(dir, part), 50) }, part + ": holds 50 bytes, the manifest says"},
		{"empty", func(dir string) error { return os.Truncate(filepath.Join(dir, part), 0) }, part + ": holds 0 bytes"},
		{"longer", func(dir string) error { return os.Truncate(filepath.Join(dir, score), 50) }, score + ": holds 50 bytes"},
		{"a folder in its place", func(dir string) error {
			return errors.Join(os.Remove(filepath.Join(dir, score)), os.Mkdir(filepath.Join(dir, score), 0o777))
		}, score + ": cannot be read"},
		{"one more", func(dir string) error { return os.WriteFile(filepath.Join(dir, "notes.txt"), nil, 0o666) }, "notes.txt: nobody sealed this file"},
		{"one more part", func(dir string) error {
			return os.WriteFile(filepath.Join(dir, "takes/split=train/part-00009.parquet"), nil, 0o666)
		}, "takes/split=train/part-00009.parquet: nobody sealed this file"},
	} {
		t.Run(tc.name, func(t *testing.T) {
			dir := sealed(t)
			if err := tc.change(dir); err != nil {
				t.Fatal(err)
			}
			got := verify(t, dir)
			if len(got) == 0 || !strings.HasPrefix(got[0], tc.want) {
				t.Errorf("%q, want one that begins with %q", got, tc.want)
			}
			for _, p := range got {
				if !strings.HasPrefix(p, strings.SplitN(tc.want, ":", 2)[0]) {
					t.Errorf("another file is blamed: %s", p)
				}
			}
		})
	}
}

// TestVerifyAcceptsLeftMarker: a crash between the manifest and the removal of
// the marker leaves a whole set.
func TestVerifyAcceptsLeftMarker(t *testing.T) {
	dir := sealed(t)
	for name, text := range left(t, both()) {
		put(t, filepath.Join(dir, name), text)
	}
	put(t, filepath.Join(dir, "unfinished", "bucket-00002.json"), "{}")
	if got := verify(t, dir); len(got) > 0 {
		t.Errorf("%q, want no problem", got)
	}
}

func TestVerifyNeedsSet(t *testing.T) {
	unfinished := t.TempDir()
	w, err := export.Create(unfinished, wristband(t), export.Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer w.Discard()
	for _, dir := range []string{t.TempDir(), unfinished, filepath.Join(t.TempDir(), "nowhere")} {
		if _, err := export.Verify(dir); !errors.Is(err, fs.ErrNotExist) || !strings.Contains(err.Error(), dir+" holds no finished set") {
			t.Errorf("error %v, want one that says there is no set", err)
		}
	}
	other := t.TempDir()
	put(t, filepath.Join(other, "manifest.json"), "{}")
	if got := verify(t, other); len(got) != 1 || !strings.HasPrefix(got[0], "manifest.json: ") {
		t.Errorf("a manifest that is none: %q", got)
	}
}

// TestVerifyReadsTakes: rows that break the rules of a set are found although
// every checksum holds.
func TestVerifyReadsTakes(t *testing.T) {
	l := wristband(t)
	good := troupe(l, 1)
	r := newRand()
	twice := []*channels.Take{good[0], good[1], good[1]}
	lost := []*channels.Take{good[0], vary(&channels.Take{ID: "nobody", Layout: l, Time: good[0].Time, Data: good[0].Data}, 0, r)}
	held := troupe(l, 0)[4] // a take for testing
	fromHeld := vary(held, 0, r)
	fromHeld.Split = channels.Train
	fromSynthetic := vary(good[1], 0, r)
	for _, tc := range []struct {
		name  string
		takes []*channels.Take
		want  string
	}{
		{"an id twice", twice, "take ada-curtain~000 stands in 2 rows; the first is in takes/split=train/"},
		{"the same id in both splits", []*channels.Take{good[0], inTest(good[0])}, "take ada-curtain stands in 2 rows"},
		{"a source that is not there", lost, "take nobody~000 has the source nobody, which is no recorded take in the split train"},
		{"a source held out", []*channels.Take{held, fromHeld}, "has the source cleo-curtain, which is no recorded take in the split train"},
		{"a source that is synthetic", append(slices.Clone(good), fromSynthetic), "has the source ada-curtain~000, which is no recorded take"},
	} {
		t.Run(tc.name, func(t *testing.T) {
			got := verify(t, sealed(t, tc.takes...))
			if len(got) != 1 || !strings.Contains(got[0], tc.want) {
				t.Errorf("%q, want one with %q", got, tc.want)
			}
		})
	}
}

// inTest returns a recorded take moved to the split test.
func inTest(t *channels.Take) *channels.Take {
	moved := *t
	moved.Split = channels.Test
	return &moved
}
