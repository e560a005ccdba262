package export

import (
	"errors"
	"io"
	"os"
	"path/filepath"
	"runtime"
	"syscall"
)

// disk is what a set asks of a file system. Tests put one in front of the
// operating system's that fails, or stops, at a chosen step.
type disk interface {
	mkdir(path string) error
	create(path string) (file, error) // a new file; an existing one is an error
	claim(path string) (file, error)  // a file, new or not, locked by this process
	rename(from, to string) error
	remove(path string) error
	syncDir(path string) error // makes the names in a folder last
}

// file is a file being written.
type file interface {
	io.WriteCloser
	Sync() error
	Truncate(size int64) error
}

// osDisk is the operating system's file system.
type osDisk struct{}

func (osDisk) mkdir(path string) error      { return os.Mkdir(path, 0o777) }
func (osDisk) rename(from, to string) error { return os.Rename(from, to) }
func (osDisk) remove(path string) error     { return os.Remove(path) }

func (osDisk) create(path string) (file, error) {
	return os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
}

func (osDisk) claim(path string) (file, error) {
	f, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_APPEND, 0o666)
	if err != nil {
		return nil, err
	}
	if err := lock(f); err != nil {
		f.Close()
		return nil, err
	}
	return f, nil
}

func (osDisk) syncDir(path string) error { return SyncFolder(path) }

// SyncFolder makes the names in a folder last: what was made, renamed or
// removed there is still so after a power failure. It does nothing where the
// file system cannot.
func SyncFolder(path string) error {
	if runtime.GOOS == "windows" {
		return nil // a folder cannot be synced there; renames are journalled
	}
	d, err := os.Open(path)
	if err != nil {
		return err
	}
	defer d.Close()
	err = d.Sync()
	if errors.Is(err, syscall.EINVAL) || errors.Is(err, errors.ErrUnsupported) {
		return nil // some network file systems cannot sync a folder
	}
	return err
}

// partial is the ending of a file that is not finished.
const partial = ".partial"

// place finishes a file written under its temporary name: its bytes and then
// its name reach the disk before place returns.
func place(d disk, f file, path string) error {
	if err := f.Sync(); err != nil {
		f.Close()
		return err
	}
	if err := f.Close(); err != nil {
		return err
	}
	if err := d.rename(path+partial, path); err != nil {
		return err
	}
	return d.syncDir(filepath.Dir(path))
}
