package store

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path"
	"path/filepath"
	"strings"
	"sync"
)

// Recordings are objects that are read as files: in place of each stands an
// empty file of its name and size, which holds the object while it is read. So
// no more room is needed than for the files that are read at a time. Its methods
// may be called at the same time.
type Recordings struct {
	dir   string
	paths []string

	mu      sync.Mutex
	objects map[string]*recording // by path
}

type recording struct {
	from   Transfer
	name   string // under which it is known
	object Object
	users  int
}

// NewRecordings returns recordings that have their stand-ins below a folder,
// which must be empty.
func NewRecordings(dir string) *Recordings {
	return &Recordings{dir: dir, objects: map[string]*recording{}}
}

// Add takes up an object, or all objects below one's name, or those that match
// it as a pattern in the sense of [path.Match]. base is what stands before the
// names of the objects of this storage when they are spoken of, such as
// "s3://bucket/". wanted tells which objects below a name are recordings, by
// their names; nil wants all.
func (r *Recordings) Add(ctx context.Context, from Transfer, base, name string, wanted func(string) bool) error {
	fixed, _, _ := strings.Cut(name, "*")
	fixed, _, _ = strings.Cut(fixed, "?")
	fixed, _, _ = strings.Cut(fixed, "[")
	found, err := from.List(ctx, fixed)
	if err != nil {
		return err
	}
	before := len(r.paths)
	folder := strings.TrimSuffix(name, "/") + "/"
	for _, o := range found {
		below := strings.HasPrefix(o.Name, folder) || name == ""
		matched, err := path.Match(name, o.Name)
		switch {
		case err != nil && fixed != name:
			return fmt.Errorf("%s%s: %w", base, name, err)
		case o.Name == name, matched, below && (wanted == nil || wanted(o.Name)):
			if err := r.add(from, base, o); err != nil {
				return err
			}
		}
	}
	if len(r.paths) == before {
		return fmt.Errorf("%s%s: there is no recording of this name, or below it", base, name)
	}
	return nil
}

func (r *Recordings) add(from Transfer, base string, o Object) error {
	_, rest, _ := strings.Cut(base, "://")
	at := filepath.Join(r.dir, filepath.FromSlash(path.Join("/", rest, o.Name)))
	if r.objects[at] != nil {
		return nil // named twice
	}
	if err := os.MkdirAll(filepath.Dir(at), 0o777); err != nil {
		return err
	}
	if err := standIn(at, o.Bytes); err != nil {
		return err
	}
	r.objects[at] = &recording{from: from, name: base + o.Name, object: o}
	r.paths = append(r.paths, at)
	return nil
}

// Paths returns the stand-ins in the order the objects were added.
func (r *Recordings) Paths() []string { return append([]string(nil), r.paths...) }

// Name returns the name under which the recording of a stand-in is known.
func (r *Recordings) Name(path string) string {
	if o := r.objects[path]; o != nil {
		return o.name
	}
	return path
}

// Fetch makes a stand-in hold its object until release is called. Other files are
// left as they are.
func (r *Recordings) Fetch(path string) (release func() error, err error) {
	r.mu.Lock()
	defer r.mu.Unlock()
	o := r.objects[path]
	if o == nil {
		return func() error { return nil }, nil
	}
	if o.users == 0 {
		if err := o.fill(path); err != nil {
			return nil, errors.Join(err, standIn(path, o.object.Bytes))
		}
	}
	o.users++
	return func() error {
		r.mu.Lock()
		defer r.mu.Unlock()
		if o.users--; o.users > 0 {
			return nil
		}
		return standIn(path, o.object.Bytes)
	}, nil
}

func (o *recording) fill(path string) error {
	if err := o.from.GetFile(context.Background(), o.object.Name, path); err != nil {
		return err
	}
	info, err := os.Stat(path)
	if err == nil && info.Size() != o.object.Bytes {
		err = fmt.Errorf("it has %d bytes, and had %d when it was listed", info.Size(), o.object.Bytes)
	}
	return errors.Join(err, os.Chtimes(path, o.object.Modified, o.object.Modified))
}
