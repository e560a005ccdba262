package store

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
)

// Folder is a folder as storage. The folder and those in it are made when
// something is written into them; none is removed. A name that leads out of the folder is
// an error.
type Folder string

var _ Store = Folder("")

// unfinished begins the names of files that are being written. They are no
// objects.
const unfinished = ".unfinished-"

func (f Folder) path(name string) (string, error) {
	if !filepath.IsLocal(filepath.FromSlash(name)) || strings.HasPrefix(filepath.Base(name), unfinished) {
		return "", fmt.Errorf("%q is no name of an object in a folder", name)
	}
	return filepath.Join(string(f), filepath.FromSlash(name)), nil
}

// List returns the regular files of the folder and those below it. A folder
// that is not there holds none.
func (f Folder) List(_ context.Context, prefix string) ([]Object, error) {
	var out []Object
	err := fs.WalkDir(os.DirFS(string(f)), ".", func(name string, e fs.DirEntry, err error) error {
		if err == nil && e.Type().IsRegular() && strings.HasPrefix(name, prefix) && !strings.HasPrefix(e.Name(), unfinished) {
			var info fs.FileInfo
			if info, err = e.Info(); err == nil {
				out = append(out, Object{name, info.Size(), info.ModTime()})
			}
		}
		if errors.Is(err, fs.ErrNotExist) {
			return nil // removed meanwhile
		}
		return err
	})
	slices.SortFunc(out, func(a, b Object) int { return strings.Compare(a.Name, b.Name) })
	return out, err
}

// Open opens a file.
func (f Folder) Open(_ context.Context, name string) (Reader, error) {
	path, err := f.path(name)
	if err != nil {
		return nil, err
	}
	file, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	info, err := file.Stat()
	if err != nil {
		file.Close()
		return nil, err
	}
	return sized{file, info.Size()}, nil
}

type sized struct {
	*os.File
	size int64
}

// Size returns the size the file had when it was opened.
func (s sized) Size() int64 { return s.size }

// Create begins a file under another name, which it loses when it is committed.
func (f Folder) Create(_ context.Context, name string) (Writer, error) {
	path, err := f.path(name)
	if err != nil {
		return nil, err
	}
	if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
		return nil, err
	}
	file, err := os.CreateTemp(filepath.Dir(path), unfinished+"*")
	if err != nil {
		return nil, err
	}
	return &placing{File: file, path: path}, nil
}

// Remove removes a file.
func (f Folder) Remove(_ context.Context, name string) error {
	path, err := f.path(name)
	if err != nil {
		return err
	}
	if err := os.Remove(path); !errors.Is(err, fs.ErrNotExist) {
		return err
	}
	return nil
}

// placing is a file that is to have another name.
type placing struct {
	*os.File
	path string
	done bool
}

// Commit brings the file to the disk and gives it its name.
func (p *placing) Commit() error {
	err := p.Sync()
	if err == nil {
		err = p.Chmod(0o644) // temporary files are for their owner alone
	}
	if closed := p.Close(); err == nil {
		err = closed
	}
	if err == nil {
		err = os.Rename(p.Name(), p.path)
	}
	if err != nil {
		return errors.Join(err, p.Abort())
	}
	p.done = true
	return syncFolder(filepath.Dir(p.path))
}

// Abort removes the file.
func (p *placing) Abort() error {
	if p.done {
		return nil
	}
	p.done = true
	_ = p.Close() // it may be closed already
	return os.Remove(p.Name())
}

// syncFolder makes the names in a folder last, where the system can.
func syncFolder(path string) error {
	d, err := os.Open(path)
	if err != nil {
		return err
	}
	_ = d.Sync() // some systems refuse this for folders
	return d.Close()
}
