package recording

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"strandwise/export"
)

// Files are files that come into being together: each is written under a
// temporary name beside its own, and Commit puts all in place. It is not safe
// for concurrent use.
type Files struct {
	replace bool
	named   map[string]bool // paths in lower case
	staged  []staged
	placed  []string // new files in place, for Discard
	folders []string // made for them, in order
	done    bool
}

// staged is a file that is written but not in place.
type staged struct{ path, temporary string }

// NewFiles returns an empty set of files. With replace they may take the place
// of files that exist.
func NewFiles(replace bool) *Files { return &Files{replace: replace, named: map[string]bool{}} }

// Free reports why a file cannot be written at a path: there is one already and
// it is not to be replaced, or there is something that is no plain file, such as
// a folder, a device or a link.
func Free(path string, replace bool) error {
	info, err := os.Lstat(path)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return nil
	case err != nil:
		return err
	case !info.Mode().IsRegular():
		return fmt.Errorf("%s exists and is no plain file; choose another name", path)
	case !replace:
		return fmt.Errorf("%s exists already; choose another name, or replace it by --replace", path)
	}
	return nil
}

// Write writes one file by calling fill, makes its bytes last and returns their
// number. Folders that are missing are made. A path may be written once, upper
// and lower case apart, which many file systems do not tell from one another.
func (f *Files) Write(path string, fill func(io.Writer) error) (int64, error) {
	path = filepath.Clean(path)
	key := strings.ToLower(path)
	if f.named[key] {
		return 0, fmt.Errorf("%s would be written twice", path)
	}
	f.named[key] = true
	if err := Free(path, f.replace); err != nil {
		return 0, err
	}
	if err := f.makeFolders(filepath.Dir(path)); err != nil {
		return 0, err
	}
	file, err := create(path)
	if err != nil {
		return 0, err
	}
	f.staged = append(f.staged, staged{path, file.Name()})
	return finish(file, fill)
}

// finish fills a file, makes it last and closes it.
func finish(file *os.File, fill func(io.Writer) error) (size int64, err error) {
	defer func() { err = errors.Join(err, file.Close()) }()
	if err := fill(file); err != nil {
		return 0, err
	}
	info, err := file.Stat()
	if err != nil {
		return 0, err
	}
	return info.Size(), file.Sync()
}

// create opens a new hidden file beside the path. It is open to nobody who could
// not read the file it is to replace, if there is one.
func create(path string) (*os.File, error) {
	mode := fs.FileMode(0o666)
	if old, err := os.Lstat(path); err == nil {
		mode = old.Mode().Perm()
	}
	for n := 0; ; n++ {
		name := filepath.Join(filepath.Dir(path), fmt.Sprintf(".%s.%d.partial", filepath.Base(path), n))
		file, err := os.OpenFile(name, os.O_WRONLY|os.O_CREATE|os.O_EXCL, mode)
		if !errors.Is(err, fs.ErrExist) { // of another process, or of one that died
			return file, err
		}
	}
}

func (f *Files) makeFolders(dir string) error {
	if _, err := os.Stat(dir); !errors.Is(err, fs.ErrNotExist) {
		return err
	}
	if parent := filepath.Dir(dir); parent != dir {
		if err := f.makeFolders(parent); err != nil {
			return err
		}
	}
	if err := os.Mkdir(dir, 0o777); err != nil {
		return err
	}
	f.folders = append(f.folders, dir)
	return export.SyncFolder(filepath.Dir(dir))
}

// Commit puts all files in place, in the order they were written, and makes
// their names last. Where it fails, those that replaced others have done so;
// Discard removes the rest.
func (f *Files) Commit() error {
	for len(f.staged) > 0 {
		s := f.staged[0]
		if err := Free(s.path, f.replace); err != nil { // another process may have come first
			return err
		}
		_, missing := os.Lstat(s.path)
		if err := os.Rename(s.temporary, s.path); err != nil {
			return err
		}
		f.staged = f.staged[1:]
		if missing != nil {
			f.placed = append(f.placed, s.path)
		}
		if len(f.staged) == 0 || filepath.Dir(f.staged[0].path) != filepath.Dir(s.path) {
			if err := export.SyncFolder(filepath.Dir(s.path)); err != nil {
				return err
			}
		}
	}
	f.done = true
	return nil
}

// Discard removes what was written and the folders made for it. It does nothing
// after a Commit that succeeded, so it can be deferred.
func (f *Files) Discard() error {
	if f.done {
		return nil
	}
	f.done = true
	var errs []error
	for _, s := range f.staged {
		errs = append(errs, os.Remove(s.temporary))
	}
	for _, path := range f.placed {
		errs = append(errs, os.Remove(path))
	}
	for _, dir := range slices.Backward(f.folders) {
		errs = append(errs, os.Remove(dir))
	}
	return errors.Join(errs...)
}
