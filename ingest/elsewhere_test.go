package ingest_test

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"strandwise/ingest"
)

// away are recordings that lie elsewhere, in memory.
type away struct {
	t       *testing.T
	content map[string]string // by path of the stand-in
	open    int
	fetched []string
}

func (a *away) Name(path string) string { return "s3://lab/" + filepath.Base(path) }

func (a *away) Fetch(path string) (func() error, error) {
	text, ok := a.content[path]
	if !ok {
		return nil, os.ErrNotExist
	}
	a.open++
	a.fetched = append(a.fetched, filepath.Base(path))
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		return nil, err
	}
	return func() error {
		a.open--
		return os.Truncate(path, 0)
	}, nil
}

// threeFiles writes stand-ins of three files of two takes each, whose columns
// stand in another order in the last, and returns what they hold.
func threeFiles(t *testing.T) (*away, []string) {
	t.Helper()
	a, dir := &away{t: t, content: map[string]string{}}, t.TempDir()
	var paths []string
	for n, header := range []string{"ax,ay", "ax,ay", "ay,ax"} {
		var b strings.Builder
		fmt.Fprintf(&b, "take,label,time_s,%s\n", header)
		for i := range 8 {
			fmt.Fprintf(&b, "t%d%d,bow,0.%d,%d,%d\n", n, i/4, i%4, 10*n+i, i*i)
		}
		path := filepath.Join(dir, fmt.Sprintf("%d.csv", n))
		if err := os.WriteFile(path, nil, 0o666); err != nil {
			t.Fatal(err)
		}
		a.content[path] = b.String()
		paths = append(paths, path)
	}
	return a, paths
}

func openAway(t *testing.T, a *away, paths []string) *ingest.Recordings {
	t.Helper()
	r, err := ingest.Open(ingest.Options{Paths: paths})
	if err != nil {
		t.Fatal(err)
	}
	r.FetchFrom(a)
	t.Cleanup(func() { r.Close() })
	return r
}

// TestElsewhere: recordings that lie elsewhere are held only while they are read,
// and are known by the names they have there.
func TestElsewhere(t *testing.T) {
	a, paths := threeFiles(t)
	r := openAway(t, a, paths)
	var places []int
	for x, err := range r.Takes() {
		if err != nil {
			t.Fatal(err)
		}
		if a.open != 1 || !strings.HasPrefix(x.Where, "s3://lab/") {
			t.Errorf("take %s of %s: %d recordings are held", x.ID, x.Where, a.open)
		}
		places = append(places, r.Reading())
	}
	if want := []int{0, 0, 1, 1, 2, 2}; !slices.Equal(places, want) || a.open != 0 {
		t.Errorf("takes are in files %v, want %v; %d recordings are held", places, want, a.open)
	}
	if f := r.Files(); len(f) != 3 || f[2].Path != "s3://lab/2.csv" || f[2].Bytes != int64(len(a.content[paths[2]])) {
		t.Errorf("files %+v", f)
	}
	delete(a.content, paths[1])
	for _, err := range openAway(t, a, paths).Takes() {
		if err != nil && (!strings.Contains(err.Error(), "s3://lab/1.csv") || !strings.Contains(err.Error(), "cannot be fetched")) {
			t.Errorf("error %v", err)
		}
	}
}

// TestTakesOf: the takes of some files are those of a whole pass, on its layout,
// and no other file is read but for the first take.
func TestTakesOf(t *testing.T) {
	a, paths := threeFiles(t)
	whole := openAway(t, a, paths)
	want := map[string][]float64{}
	for x, err := range whole.Takes() {
		if err != nil {
			t.Fatal(err)
		}
		want[x.ID] = x.Data
	}
	some := openAway(t, a, paths)
	if err := some.Expect(whole.Files()); err != nil {
		t.Fatal(err)
	}
	a.fetched = nil
	var ids []string
	for x, err := range some.TakesOf([]int{2}) {
		if err != nil {
			t.Fatal(err)
		}
		ids = append(ids, x.ID)
		if !slices.Equal(x.Data, want[x.ID]) {
			t.Errorf("take %s is %v, and was %v", x.ID, x.Data, want[x.ID])
		}
	}
	if !slices.Equal(ids, []string{"t20", "t21"}) || !slices.Equal(a.fetched, []string{"0.csv", "2.csv"}) {
		t.Errorf("takes %v of files %v", ids, a.fetched)
	}
	for range some.TakesOf([]int{1, 2}) {
		break // and all is let go of
	}
	if a.open != 0 {
		t.Errorf("%d recordings are held", a.open)
	}
	a.content[paths[1]] = strings.ReplaceAll(a.content[paths[1]], "bow", "bob")
	var last error
	for _, err := range some.TakesOf([]int{1}) {
		last = err
	}
	if last == nil || !strings.Contains(last.Error(), "has changed since it was first read") {
		t.Errorf("error %v for another file", last)
	}
	if err := some.Expect(whole.Files()[:1]); err == nil {
		t.Error("fewer files are what was expected")
	}
	if err := openAway(t, a, paths[1:]).Expect(whole.Files()); err == nil {
		t.Error("other files are what was expected")
	}
}
