package store_test

import (
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"

	"strandwise/export/store"
)

// faulty is a folder as storage in front of which errors are put.
type faulty struct {
	store.Folder
	log    []string
	create func(name string) error // fails the begin of an object
	commit func(name string) error // fails its end
	read   func(name string, at int64) error
}

func newFaulty(dir string) *faulty {
	fine := func(string) error { return nil }
	return &faulty{Folder: store.Folder(dir), create: fine, commit: fine, read: func(string, int64) error { return nil }}
}

func (f *faulty) Create(ctx context.Context, name string) (store.Writer, error) {
	if err := f.create(name); err != nil {
		return nil, err
	}
	w, err := f.Folder.Create(ctx, name)
	return &faultyWriter{w, f, name}, err
}

func (f *faulty) Remove(ctx context.Context, name string) error {
	f.log = append(f.log, "remove "+name)
	return f.Folder.Remove(ctx, name)
}

func (f *faulty) Open(ctx context.Context, name string) (store.Reader, error) {
	r, err := f.Folder.Open(ctx, name)
	if err != nil {
		return nil, err
	}
	return &faultyReader{r, f, name}, nil
}

type faultyWriter struct {
	store.Writer
	f    *faulty
	name string
}

func (w *faultyWriter) Commit() error {
	if err := w.f.commit(w.name); err != nil {
		return err
	}
	w.f.log = append(w.f.log, "put "+w.name)
	return w.Writer.Commit()
}

type faultyReader struct {
	store.Reader
	f    *faulty
	name string
}

func (r *faultyReader) ReadAt(p []byte, at int64) (int, error) {
	if err := r.f.read(r.name, at); err != nil {
		return len(p) / 2, err
	}
	return r.Reader.ReadAt(p, at)
}

// failing returns an error the first n times.
func failing(n int, err error) func() error {
	return func() error {
		if n--; n >= 0 {
			return err
		}
		return nil
	}
}

var errTrouble = errors.New("storage in trouble")

func contents(t *testing.T, dir string) map[string]string {
	t.Helper()
	out := map[string]string{}
	err := fs.WalkDir(os.DirFS(dir), ".", func(name string, e fs.DirEntry, err error) error {
		if err != nil || e.IsDir() {
			return err
		}
		data, err := os.ReadFile(filepath.Join(dir, name))
		out[name] = string(data)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// TestPut: an object is written again until it is there, and nothing is seen of
// the tries before; what cannot succeed is tried once.
func TestPut(t *testing.T) {
	for _, tc := range []struct {
		name           string
		create, commit func() error
		want           string // part of the error; empty when it succeeds
		tries          int
	}{
		{"at once", failing(0, nil), failing(0, nil), "", 1},
		{"begin fails twice", failing(2, errTrouble), failing(0, nil), "", 3},
		{"end fails twice", failing(0, nil), failing(2, errTrouble), "", 3},
		{"both fail", failing(1, errTrouble), failing(1, errTrouble), "", 3},
		{"never", failing(99, errTrouble), failing(0, nil), "write a/b: tried 3 times: storage in trouble", 3},
		{"never ends", failing(0, nil), failing(99, errTrouble), "tried 3 times", 3},
		{"not allowed", failing(99, fs.ErrPermission), failing(0, nil), "write a/b: permission denied", 1},
		{"makes no sense", failing(0, nil), failing(99, fs.ErrInvalid), "invalid", 1},
	} {
		t.Run(tc.name, func(t *testing.T) {
			dir := t.TempDir()
			f := newFaulty(dir)
			tries := 0
			f.create = func(string) error { tries++; return tc.create() }
			f.commit = func(string) error { return tc.commit() }
			retried := 0
			to := store.Transfer{Store: f, Tries: 3, Pause: time.Microsecond, Retried: func(string, error) { retried++ }}
			err := to.PutBytes(context.Background(), []byte("text"), "a/b")
			want := map[string]string{"a/b": "text"}
			if tc.want != "" {
				want = map[string]string{}
				if err == nil || !strings.Contains(err.Error(), tc.want) {
					t.Errorf("error %v, want one with %q", err, tc.want)
				}
			} else if err != nil {
				t.Error(err)
			}
			if tries != tc.tries || retried != tc.tries-1 {
				t.Errorf("tried %d times and told of %d, want %d", tries, retried, tc.tries)
			}
			if diff := cmp.Diff(want, contents(t, dir)); diff != "" {
				t.Error(diff)
			}
		})
	}
}

// TestGetGoesOn: a read that fails goes on with the part in which it failed.
func TestGetGoesOn(t *testing.T) {
	ctx, dir := context.Background(), t.TempDir()
	f := newFaulty(dir)
	for _, size := range []int{0, 1, 9, 10, 11, 35} {
		text := strings.Repeat("abcdefg", 5)[:size]
		to := store.Transfer{Store: f, Tries: 3, Pause: time.Microsecond, Part: 10}
		if err := to.PutBytes(ctx, []byte(text), "object"); err != nil {
			t.Fatal(err)
		}
		var at []int64
		fail := failing(2, io.ErrUnexpectedEOF)
		f.read = func(_ string, from int64) error {
			at = append(at, from)
			if from == 20 {
				return fail()
			}
			return nil
		}
		got, err := to.GetBytes(ctx, "object")
		if err != nil || string(got) != text {
			t.Errorf("%d bytes: read %q (%v)", size, got, err)
		}
		if want := []int64{0, 10, 20, 20, 20, 30}; size == 35 && !slices.Equal(at, want) {
			t.Errorf("read from %v, want %v", at, want)
		}
	}
	f.read = func(string, int64) error { return errTrouble }
	to := store.Transfer{Store: f, Tries: 2, Pause: time.Microsecond}
	if _, err := to.GetBytes(ctx, "object"); err == nil || !strings.Contains(err.Error(), "read object from byte 0: tried 2 times") {
		t.Errorf("error %v", err)
	}
	if _, err := to.GetBytes(ctx, "nothing"); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("error %v for an object that is not there", err)
	}
	ended, end := context.WithCancel(ctx)
	end()
	if _, err := to.GetBytes(ended, "object"); err == nil || strings.Contains(err.Error(), "tried") {
		t.Errorf("error %v after the end", err)
	}
}

// TestFolder: a folder is storage.
func TestFolder(t *testing.T) {
	ctx, dir := context.Background(), filepath.Join(t.TempDir(), "not", "there")
	f := store.Folder(dir)
	if found, err := f.List(ctx, ""); len(found) > 0 || err != nil {
		t.Errorf("a folder that is not there holds %v (%v)", found, err)
	}
	for _, name := range []string{"b/2", "a", "b/1", "c"} {
		w, err := f.Create(ctx, name)
		if err != nil {
			t.Fatal(err)
		}
		fmt.Fprintf(w, "this is %s", name)
		if name == "c" {
			err = w.Abort()
		} else {
			err = errors.Join(w.Commit(), w.Abort())
		}
		if err != nil {
			t.Fatal(err)
		}
	}
	half, err := f.Create(ctx, "b/3")
	if err != nil {
		t.Fatal(err)
	}
	defer half.Abort()
	var names []string
	found, err := f.List(ctx, "b/")
	for _, o := range found {
		names = append(names, fmt.Sprint(o.Name, " ", o.Bytes))
	}
	if want := []string{"b/1 11", "b/2 11"}; !slices.Equal(names, want) || err != nil {
		t.Errorf("below b/ there are %v, want %v (%v)", names, want, err)
	}
	if err := errors.Join(f.Remove(ctx, "a"), f.Remove(ctx, "a")); err != nil {
		t.Error(err)
	}
	if _, err := f.Open(ctx, "a"); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("error %v for a file that was removed", err)
	}
	for _, name := range []string{"../a", "/a", "", "b/.unfinished-1"} {
		if _, err := f.Create(ctx, name); err == nil {
			t.Errorf("%q is taken as a name", name)
		}
	}
}

// TestRecordings: stand-ins have the sizes of their objects and hold them while
// they are read.
func TestRecordings(t *testing.T) {
	ctx, dir := context.Background(), t.TempDir()
	from := store.Transfer{Store: store.Folder(filepath.Join(dir, "lab"))}
	for name, text := range map[string]string{"in/ann/bow_1.csv": "one", "in/ann/bow_2.csv": "two", "in/notes.txt": "no", "other/x.csv": "three", "inner.csv": "four"} {
		if err := from.PutBytes(ctx, []byte(text), name); err != nil {
			t.Fatal(err)
		}
	}
	wanted := func(name string) bool { return strings.HasSuffix(name, ".csv") }
	for name, want := range map[string]string{
		"in":               "s3://lab/in/ann/bow_1.csv s3://lab/in/ann/bow_2.csv",
		"in/":              "s3://lab/in/ann/bow_1.csv s3://lab/in/ann/bow_2.csv",
		"in/notes.txt":     "s3://lab/in/notes.txt",
		"in/ann/bow_?.csv": "s3://lab/in/ann/bow_1.csv s3://lab/in/ann/bow_2.csv",
		"*/x.csv":          "s3://lab/other/x.csv",
		"nothing":          "",
		"in/ann/[.csv":     "",
	} {
		r := store.NewRecordings(t.TempDir())
		err := r.Add(ctx, from, "s3://lab/", name, wanted)
		var names []string
		for _, path := range r.Paths() {
			names = append(names, r.Name(path))
		}
		if got := strings.Join(names, " "); got != want || (err == nil) != (want != "") {
			t.Errorf("%s: %s, want %s (%v)", name, got, want, err)
		}
	}
	r := store.NewRecordings(t.TempDir())
	if err := errors.Join(r.Add(ctx, from, "s3://lab/", "in", wanted), r.Add(ctx, from, "s3://lab/", "in/ann/bow_2.csv", wanted)); err == nil {
		t.Log("an object that is named twice is read once")
	}
	path := r.Paths()[0]
	read := func() string {
		data, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		return string(data)
	}
	empty := string(make([]byte, 3))
	if got := read(); got != empty {
		t.Errorf("a stand-in holds %q", got)
	}
	first, err := r.Fetch(path)
	if err != nil {
		t.Fatal(err)
	}
	second, err := r.Fetch(path)
	if err != nil {
		t.Fatal(err)
	}
	if err := first(); err != nil || read() != "one" {
		t.Errorf("while one reads on it holds %q (%v)", read(), err)
	}
	if err := second(); err != nil || read() != empty {
		t.Errorf("afterwards it holds %q (%v)", read(), err)
	}
	if err := from.PutBytes(ctx, []byte("longer"), "in/ann/bow_1.csv"); err != nil {
		t.Fatal(err)
	}
	if _, err := r.Fetch(path); err == nil || !strings.Contains(err.Error(), "it has 6 bytes, and had 3") {
		t.Errorf("error %v for an object that was changed", err)
	}
}
