package store

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"time"
)

// Names inside a set; see package export.
const (
	manifest    = "manifest.json"
	ownFolder   = "unfinished/"
	ownPlan     = ownFolder + "plan.json"
	ownLock     = ownFolder + "lock"
	attachments = ownFolder + "attached-"
	partial     = ".partial"
)

// Set is a set in storage, with the folder in which one process works at it.
// [Set.Fetch] makes the folder look as if all that is in storage lay there, and
// [Set.Push] puts into storage what the process has made since. It is for one
// goroutine.
type Set struct {
	Transfer
	Prefix string // of the names of the set's objects: "", or something that ends in a slash
	Dir    string // the folder, of which the set has the whole

	// Wanted tells which of the numbered files, the tables and records of buckets,
	// are brought into the folder, by their number; nil brings all. A process that
	// makes a few of many buckets needs to know of no others, but must not seal.
	Wanted func(bucket int) bool

	known map[string]stamp // what was in storage and in the folder when they were last alike
}

// stamp tells whether a file was written since.
type stamp struct {
	bytes    int64
	modified time.Time
}

// Sealed reports whether the set in storage is whole.
func (s *Set) Sealed(ctx context.Context) (bool, error) {
	found, err := s.List(ctx, s.Prefix+manifest)
	return len(found) > 0 && found[0].Name == s.Prefix+manifest, err
}

// Fetch empties the folder and brings into it the manifest and the records of
// the unfinished set. In place of every other file stands an empty one of its
// size, which takes no room: it tells that the file is there.
func (s *Set) Fetch(ctx context.Context) error {
	if err := os.RemoveAll(s.Dir); err != nil {
		return err
	}
	if err := os.MkdirAll(s.Dir, 0o777); err != nil {
		return err
	}
	objects, err := s.List(ctx, s.Prefix)
	if err != nil {
		return err
	}
	s.known = map[string]stamp{}
	for _, o := range objects {
		name := strings.TrimPrefix(o.Name, s.Prefix)
		if !filepath.IsLocal(filepath.FromSlash(name)) {
			return fmt.Errorf("%s: no file of a set has this name; choose another place", o.Name)
		}
		if n, numbered := number(name); numbered && s.Wanted != nil && !s.Wanted(n) {
			continue
		}
		err := s.bring(ctx, o, name)
		if errors.Is(err, fs.ErrNotExist) && strings.HasPrefix(name, ownFolder) {
			continue // another process sealed the set meanwhile
		}
		if err != nil {
			return err
		}
	}
	return nil
}

var ofBucket = regexp.MustCompile(`/(?:bucket|part)-([0-9]+)[._][^/]*$`)

// number returns the number of the bucket that a file is of.
func number(name string) (n int, numbered bool) {
	m := ofBucket.FindStringSubmatch(name)
	if m == nil {
		return 0, false
	}
	n, err := strconv.Atoi(m[1])
	return n, err == nil
}

func (s *Set) bring(ctx context.Context, o Object, name string) error {
	path := filepath.Join(s.Dir, filepath.FromSlash(name))
	if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
		return err
	}
	if name == manifest || strings.HasPrefix(name, ownFolder) {
		if err := s.GetFile(ctx, o.Name, path); err != nil {
			return errors.Join(err, os.Remove(path))
		}
	} else if err := standIn(path, o.Bytes); err != nil {
		return err
	}
	return s.remember(name, path)
}

// remember notes that a file is the same here and in storage. It is given a time
// that no file has that is written later.
func (s *Set) remember(name, path string) error {
	if err := os.Chtimes(path, time.Unix(0, 0), time.Unix(0, 0)); err != nil {
		return err
	}
	info, err := os.Stat(path)
	if err == nil {
		s.known[name] = stampOf(info)
	}
	return err
}

// standIn makes an empty file of a size.
func standIn(path string, bytes int64) error {
	f, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_TRUNC, 0o666)
	if err != nil {
		return err
	}
	return errors.Join(f.Truncate(bytes), f.Close())
}

func stampOf(info fs.FileInfo) stamp { return stamp{info.Size(), info.ModTime()} }

// Push puts into storage what was written into the folder since it was last
// like the storage, and removes from storage what was removed. Files of tables
// take no room in the folder from then on. Whatever moment a
// process ends at, storage holds what a crash of one run on one machine could
// have left: the plan is there before anything else, a file before the record
// that vouches for it, and the manifest last.
func (s *Set) Push(ctx context.Context) error {
	here, err := s.files()
	if err != nil {
		return err
	}
	var names []string
	for name, stamp := range here {
		if s.known[name] != stamp {
			names = append(names, name)
		}
	}
	slices.SortFunc(names, byRank)
	if slices.Contains(names, manifest) {
		// What no record vouches for goes before the set is whole, the records
		// themselves after.
		if err := s.dropped(ctx, here, false); err != nil {
			return err
		}
	}
	for _, name := range names {
		put := s.put
		if name == ownPlan {
			put = s.declare
		}
		if err := put(ctx, name); err != nil {
			return err
		}
		path := filepath.Join(s.Dir, filepath.FromSlash(name))
		if strings.HasSuffix(name, ".parquet") {
			if err := standIn(path, here[name].bytes); err != nil {
				return err
			}
		}
		if err := s.remember(name, path); err != nil {
			return err
		}
	}
	return s.dropped(ctx, here, true)
}

// rank is the order in which files are put into storage.
func rank(name string) int {
	switch {
	case name == ownPlan:
		return 0
	case strings.HasPrefix(name, attachments):
		return 1 // says whose the attachment is, before it is there
	case name == manifest:
		return 4
	case strings.HasPrefix(name, ownFolder):
		return 3
	}
	return 2
}

func byRank(a, b string) int {
	if d := rank(a) - rank(b); d != 0 {
		return d
	}
	return strings.Compare(a, b)
}

// files lists the finished files of the folder.
func (s *Set) files() (map[string]stamp, error) {
	out := map[string]stamp{}
	err := fs.WalkDir(os.DirFS(s.Dir), ".", func(name string, e fs.DirEntry, err error) error {
		if err != nil || e.IsDir() || name == ownLock || strings.HasSuffix(name, partial) {
			return err
		}
		info, err := e.Info()
		if err == nil {
			out[name] = stampOf(info)
		}
		return err
	})
	return out, err
}

func (s *Set) put(ctx context.Context, name string) error {
	return s.PutFile(ctx, filepath.Join(s.Dir, filepath.FromSlash(name)), s.Prefix+name)
}

// declare puts the plan into storage. Storage has no way that all providers know
// to put an object only where none is, so the plan is read again: of two runs of
// different plans that begin in the same instant, the one that was overwritten
// finds out here, or else when it seals.
func (s *Set) declare(ctx context.Context, name string) error {
	mine, err := os.ReadFile(filepath.Join(s.Dir, filepath.FromSlash(name)))
	if err != nil {
		return err
	}
	for _, written := range []bool{false, true} {
		there, err := s.GetBytes(ctx, s.Prefix+name)
		switch {
		case errors.Is(err, fs.ErrNotExist) && !written:
			if err := s.PutBytes(ctx, mine, s.Prefix+name); err != nil {
				return err
			}
		case err != nil:
			return err
		case !bytes.Equal(there, mine):
			return fmt.Errorf("%s: another run is writing a set of another plan there; choose another place", s.Prefix+name)
		}
	}
	return nil
}

// dropped removes from storage what is not in the folder any more: records, or
// everything else.
func (s *Set) dropped(ctx context.Context, here map[string]stamp, records bool) error {
	for _, name := range gone(s.known, here) {
		if strings.HasPrefix(name, ownFolder) != records {
			continue
		}
		if err := s.Remove(ctx, s.Prefix+name); err != nil {
			return err
		}
		delete(s.known, name)
	}
	return nil
}

// gone lists what is known and not here, the plan last.
func gone(known, here map[string]stamp) []string {
	var out []string
	for name := range known {
		if _, there := here[name]; !there {
			out = append(out, name)
		}
	}
	slices.SortFunc(out, func(a, b string) int { return byRank(b, a) })
	return out
}

// Tidy removes what is left of the unfinished set once the set is sealed, such as
// the records of a process that finished a shard again in that instant.
func (s *Set) Tidy(ctx context.Context) error {
	left, err := s.List(ctx, s.Prefix+ownFolder)
	for _, o := range left {
		if err == nil {
			err = s.Remove(ctx, o.Name)
		}
	}
	return err
}
