package export

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
)

const (
	manifestName = "manifest.json"
	markerName   = "unfinished.jsonl"
	markerHeader = `{"format":"strandwise.unfinished/1"}` + "\n"
)

// attached is one line of the marker, written before the attachment itself.
type attached struct {
	Attached string `json:"attached"`
}

// begin makes the folder ready: it exists, is ours alone, and holds nothing
// but the marker. What it makes is recorded in w for Discard.
func (w *Writer) begin() error {
	if err := w.makeFolders(w.dir); err != nil {
		return err
	}
	if _, err := leftovers(w.dir); err != nil {
		return err
	}
	path := filepath.Join(w.dir, markerName)
	_, missing := os.Lstat(path)
	var err error
	if w.marker, err = w.disk.claim(path); err != nil {
		return err
	}
	if missing != nil {
		w.made = append(w.made, path)
	}
	// Another process may have sealed its set before the marker was ours, so
	// only what is found now may be removed.
	left, err := leftovers(w.dir)
	if err != nil {
		return err
	}
	for _, path := range left {
		if err := w.disk.remove(path); err != nil {
			return fmt.Errorf("clean unfinished set: %w", err)
		}
	}
	if missing == nil {
		w.made = append(w.made, path) // until now an old marker vouches for what is left
	}
	if err := w.marker.Truncate(0); err != nil {
		return err
	}
	return w.note([]byte(markerHeader))
}

// note appends to the marker and makes it last.
func (w *Writer) note(line []byte) error {
	if _, err := w.marker.Write(line); err != nil {
		return err
	}
	if err := w.marker.Sync(); err != nil {
		return err
	}
	return w.disk.syncDir(w.dir)
}

// isFolder reports whether the folder exists. A file of its name is an error.
func isFolder(dir string) (bool, error) {
	info, err := os.Stat(dir)
	if errors.Is(err, fs.ErrNotExist) {
		return false, nil
	}
	if err == nil && !info.IsDir() {
		err = fmt.Errorf("%s is a file; a set needs a folder", dir)
	}
	return err == nil, err
}

// makeFolders makes the folder and its missing parents.
func (w *Writer) makeFolders(dir string) error {
	exists, err := isFolder(dir)
	if exists || err != nil {
		return err
	}
	if parent := filepath.Dir(dir); parent != dir {
		if err := w.makeFolders(parent); err != nil {
			return err
		}
	}
	return w.makeFolder(dir)
}

func (w *Writer) makeFolder(dir string) error {
	if err := w.disk.mkdir(dir); err != nil {
		return err
	}
	w.made = append(w.made, dir)
	return w.disk.syncDir(filepath.Dir(dir))
}

// leftovers lists what an unfinished set left in the folder, the marker apart,
// files before the folders that hold them. Anything else in the folder is an
// error that names it.
func leftovers(dir string) ([]string, error) {
	if _, err := os.Lstat(filepath.Join(dir, manifestName)); err == nil {
		return nil, fmt.Errorf("%s already holds a set; choose another folder or remove it", dir)
	}
	attachments, unfinished, err := readMarker(filepath.Join(dir, markerName))
	if err != nil {
		return nil, err
	}
	var ours, foreign []string
	err = walk(dir, func(path, name string, folder bool) error {
		switch {
		case unfinished && name == markerName:
		case unfinished && belongs(name, folder, attachments):
			ours = append(ours, path)
		default:
			foreign = append(foreign, name)
			if folder {
				return fs.SkipDir
			}
		}
		return nil
	})
	if err != nil {
		return nil, err
	}
	if len(foreign) > 0 {
		return nil, fmt.Errorf("%s is not empty: it holds %s; choose an empty folder", dir, list(foreign))
	}
	slices.Reverse(ours) // the walk names a folder before what it holds
	return ours, nil
}

// walk visits what a folder holds, in the order of the names, with each path
// and its name inside the folder, with slashes.
func walk(dir string, visit func(path, name string, folder bool) error) error {
	return fs.WalkDir(os.DirFS(dir), ".", func(name string, e fs.DirEntry, err error) error {
		if err != nil || name == "." {
			return err
		}
		return visit(filepath.Join(dir, filepath.FromSlash(name)), name, e.IsDir())
	})
}

// belongs reports whether a path inside a folder, with slashes, is one that a
// writer makes: a table's folders and parts, the manifest's temporary name, or
// an attachment its marker names.
func belongs(name string, folder bool, attachments map[string]bool) bool {
	parts := strings.Split(name, "/")
	if len(parts) > 1 || folder {
		return belongsToTable(parts, folder)
	}
	name = strings.TrimSuffix(name, partial)
	return name == manifestName || attachments[name]
}

func belongsToTable(parts []string, folder bool) bool {
	if !slices.Contains(AllTables(), Table(parts[0])) || len(parts) > 3 || folder != (len(parts) < 3) {
		return false
	}
	if len(parts) > 1 && !slices.Contains([]string{"split=train", "split=test"}, parts[1]) {
		return false
	}
	if len(parts) < 3 {
		return true
	}
	matched, err := filepath.Match("part-[0-9]*.parquet", strings.TrimSuffix(parts[2], partial))
	return err == nil && matched
}

// readMarker returns the attachments that the marker of an unfinished set
// names, and whether there is a marker. One cut short by a crash still is; a
// file of that name that says something else is an error.
func readMarker(path string) (attachments map[string]bool, found bool, err error) {
	data, err := os.ReadFile(path)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, false, nil
	}
	if err != nil {
		return nil, false, err
	}
	lines, whole := bytes.CutPrefix(data, []byte(markerHeader))
	if !whole && !strings.HasPrefix(markerHeader, string(data)) {
		return nil, false, fmt.Errorf("%s was not written by this program; choose another folder", path)
	}
	attachments = map[string]bool{}
	for line := range bytes.Lines(lines) {
		var a attached
		if json.Unmarshal(line, &a) == nil {
			attachments[a.Attached] = true
		}
	}
	return attachments, true, nil
}

// list joins a few names for a message.
func list(names []string) string {
	const most = 5
	if more := len(names) - most; more > 0 {
		return fmt.Sprintf("%s and %d more", strings.Join(names[:most], ", "), more)
	}
	return strings.Join(names, ", ")
}
