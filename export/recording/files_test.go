package recording_test

import (
	"errors"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/export/recording"
)

// tree reads every file below a folder, by its path inside it; folders are
// marked by a slash.
func tree(t testing.TB, dir string) map[string]string {
	t.Helper()
	out := map[string]string{}
	err := filepath.WalkDir(dir, func(path string, e fs.DirEntry, err error) error {
		if err != nil || path == dir {
			return err
		}
		name, _ := filepath.Rel(dir, path)
		if e.IsDir() {
			out[name+"/"] = ""
			return nil
		}
		text, err := os.ReadFile(path)
		out[name] = string(text)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return out
}

func checkTree(t testing.TB, when, dir string, want map[string]string) {
	t.Helper()
	if diff := cmp.Diff(want, tree(t, dir)); diff != "" {
		t.Errorf("%s (-want +got):\n%s", when, diff)
	}
}

// text returns what fills a file with a text.
func text(s string) func(io.Writer) error {
	return func(w io.Writer) error {
		_, err := io.WriteString(w, s)
		return err
	}
}

func put(t testing.TB, path, s string) {
	t.Helper()
	if err := os.WriteFile(path, []byte(s), 0o600); err != nil {
		t.Fatal(err)
	}
}

func TestFilesComeTogether(t *testing.T) {
	dir := t.TempDir()
	f := recording.NewFiles(false)
	for name, s := range map[string]string{"a": "1", "new/deep/b": "23", "new/c": ""} {
		n, err := f.Write(filepath.Join(dir, name), text(s))
		if err != nil || n != int64(len(s)) {
			t.Fatalf("%s: %d bytes, error %v", name, n, err)
		}
	}
	for name := range tree(t, dir) {
		if base := filepath.Base(name); !strings.HasSuffix(name, "/") && !strings.HasPrefix(base, ".") {
			t.Errorf("%s is there before the files are whole", name)
		}
	}
	if err := f.Commit(); err != nil {
		t.Fatal(err)
	}
	want := map[string]string{"a": "1", "new/": "", "new/deep/": "", "new/deep/b": "23", "new/c": ""}
	checkTree(t, "after Commit", dir, want)
	if err := f.Discard(); err != nil {
		t.Error(err)
	}
	checkTree(t, "after Discard too late", dir, want)
}

func TestFilesAreDiscarded(t *testing.T) {
	dir := t.TempDir()
	put(t, filepath.Join(dir, "old"), "before")
	before := tree(t, dir)
	f := recording.NewFiles(true)
	broken := errors.New("broken")
	for _, name := range []string{"old", "x", "new/y"} {
		if _, err := f.Write(filepath.Join(dir, name), text("after")); err != nil {
			t.Fatal(err)
		}
	}
	_, err := f.Write(filepath.Join(dir, "z"), func(w io.Writer) error { return errors.Join(text("half")(w), broken) })
	if !errors.Is(err, broken) {
		t.Errorf("error %v, want what filling the file failed with", err)
	}
	if err := f.Discard(); err != nil {
		t.Error(err)
	}
	checkTree(t, "after Discard", dir, before)
}

// TestFilesThatCannotBePlaced: when a later file cannot be put in place, the new
// ones before it go too.
func TestFilesThatCannotBePlaced(t *testing.T) {
	dir := t.TempDir()
	f := recording.NewFiles(false)
	for _, name := range []string{"a", "new/b"} {
		if _, err := f.Write(filepath.Join(dir, name), text("mine")); err != nil {
			t.Fatal(err)
		}
	}
	put(t, filepath.Join(dir, "new", "b"), "another's")
	if err := f.Commit(); err == nil || !strings.Contains(err.Error(), "exists already") {
		t.Errorf("error %v, want one that says another came first", err)
	}
	if err := f.Discard(); err == nil { // the folder is not empty
		t.Error("Discard does not say that it left a folder")
	}
	checkTree(t, "after Discard", dir, map[string]string{"new/": "", "new/b": "another's"})
}

func TestFree(t *testing.T) {
	dir := t.TempDir()
	old, link, folder := filepath.Join(dir, "old"), filepath.Join(dir, "link"), filepath.Join(dir, "folder")
	put(t, old, "")
	if err := errors.Join(os.Symlink(old, link), os.Mkdir(folder, 0o777)); err != nil {
		t.Skip(err)
	}
	for _, c := range []struct {
		path    string
		replace bool
		says    string // nothing when it is free
	}{
		{filepath.Join(dir, "new"), false, ""},
		{filepath.Join(dir, "no", "such", "folder"), false, ""},
		{old, false, "--replace"},
		{old, true, ""},
		{link, true, "no plain file"},
		{folder, true, "no plain file"},
		{os.DevNull, true, "no plain file"},
		{filepath.Join(old, "below"), true, "old"},
	} {
		err := recording.Free(c.path, c.replace)
		if (err == nil) != (c.says == "") || err != nil && (!strings.Contains(err.Error(), c.says) || !strings.Contains(err.Error(), c.path)) {
			t.Errorf("%s, replace %v: error %v, want %q", c.path, c.replace, err, c.says)
		}
		f := recording.NewFiles(c.replace)
		if _, err := f.Write(c.path, text("new")); (err == nil) != (c.says == "") {
			t.Errorf("%s, replace %v: written with error %v", c.path, c.replace, err)
		}
		if err := f.Discard(); err != nil {
			t.Error(err)
		}
	}
}

func TestFilesReplace(t *testing.T) {
	dir := t.TempDir()
	old := filepath.Join(dir, "old")
	put(t, old, "before")
	put(t, filepath.Join(dir, ".old.0.partial"), "of a process that died")
	f := recording.NewFiles(true)
	if _, err := f.Write(old, text("after")); err != nil {
		t.Fatal(err)
	}
	if err := f.Commit(); err != nil {
		t.Fatal(err)
	}
	checkTree(t, "after Commit", dir, map[string]string{"old": "after", ".old.0.partial": "of a process that died"})
	if info, err := os.Stat(old); err != nil || info.Mode().Perm()&^0o600 != 0 {
		t.Errorf("what others could not read is now open to them: %v, %v", info.Mode(), err)
	}
}

func TestFilesOfOneName(t *testing.T) {
	dir := t.TempDir()
	f := recording.NewFiles(true)
	defer f.Discard()
	if _, err := f.Write(filepath.Join(dir, "bow.bvh"), text("")); err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"bow.bvh", "x/../bow.bvh", "Bow.bvh"} {
		if _, err := f.Write(dir+"/"+name, text("")); err == nil || !strings.Contains(err.Error(), "written twice") {
			t.Errorf("%s: error %v", name, err)
		}
	}
}
