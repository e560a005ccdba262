package export

import (
	"errors"
	"io"
	"io/fs"
	"os"
	"runtime"
	"syscall"
)

// disk is what a set asks of a file system. Tests put one in front of the
// operating system's that fails, or stops, at a chosen step.
type disk interface {
	mkdir(path string) error
	create(path string) (file, error)            // a new file; an existing one is an error
	claim(path string, alone bool) (file, error) // a file, new or not, locked by this process
	rename(from, to string) error
	publish(from, to string) error // a rename that never takes the place of a file
	remove(path string) error
	syncDir(path string) error // makes the names in a folder last
}

// file is a file being written.
type file interface {
	io.WriteCloser
	Sync() error
}

// osDisk is the operating system's file system.
type osDisk struct{}

func (osDisk) mkdir(path string) error      { return os.Mkdir(path, 0o777) }
func (osDisk) rename(from, to string) error { return os.Rename(from, to) }
func (osDisk) remove(path string) error     { return os.Remove(path) }

func (osDisk) create(path string) (file, error) {
	return os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
}

func (d osDisk) claim(path string, alone bool) (file, error) {
	f, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE, 0o666)
	if err != nil {
		return nil, err
	}
	if err := lock(f, alone); err != nil {
		f.Close()
		return nil, err
	}
	// The process that had it may have removed it before it let go.
	held, err := f.Stat()
	named, missing := os.Stat(path)
	if err == nil && (missing != nil || !os.SameFile(held, named)) {
		f.Close()
		return d.claim(path, alone)
	}
	return f, err
}

func (osDisk) publish(from, to string) error {
	switch err := os.Link(from, to); {
	case err == nil:
		return os.Remove(from)
	case errors.Is(err, fs.ErrExist):
		return err
	}
	// Some file systems know no links. Two first shards that begin at one
	// moment with different plans are not told apart there.
	if _, err := os.Lstat(to); err == nil {
		return &os.PathError{Op: "publish", Path: to, Err: fs.ErrExist}
	}
	return os.Rename(from, to)
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
