package look

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"sync"

	"github.com/parquet-go/parquet-go"

	"strandwise/channels"
	"strandwise/export"
)

// Set is a finished set, opened to be looked at. Goroutines may share it.
type Set struct {
	dir      string
	root     *os.Root
	manifest *export.Manifest
	layout   *channels.Layout
	columns  []string // of the channels, in the order of the layout
	files    []*file  // of the table takes
	takes    *index

	mu     sync.Mutex // of what follows
	groups groupCache
	bones  map[int32][][2]int // found, by the take they were found in
}

// file is one file of the table takes.
type file struct {
	path    string // inside the set
	split   channels.Split
	handle  *os.File
	parquet *parquet.File
	groups  []parquet.RowGroup
	frames  []int32 // of all takes of each row group
}

// Open opens the set in a folder and reads who its takes are. The error says
// what is wrong with the folder. The caller closes the set.
func Open(dir string) (*Set, error) {
	info, err := os.Stat(dir)
	if err != nil {
		return nil, err
	}
	if !info.IsDir() {
		return nil, fmt.Errorf("%s is a file, not the folder of a set", dir)
	}
	m, err := export.ReadManifest(dir)
	if err != nil {
		return nil, err
	}
	root, err := os.OpenRoot(dir)
	if err != nil {
		return nil, err
	}
	s := &Set{dir: dir, root: root, manifest: m, bones: map[int32][][2]int{}}
	if err := s.open(); err != nil {
		return nil, errors.Join(fmt.Errorf("%s: %w", dir, err), s.Close())
	}
	return s, nil
}

func (s *Set) open() error {
	var err error
	if s.layout, s.columns, err = layoutOf(s.manifest.Layout); err != nil {
		return err
	}
	others := map[string]bool{}
	for _, f := range s.manifest.Files {
		table, rest, _ := strings.Cut(f.Path, "/")
		if len(f.RowGroups) == 0 {
			continue
		}
		if table != string(export.Takes) {
			others[table] = true
			continue
		}
		split, _, _ := strings.Cut(strings.TrimPrefix(rest, "split="), "/")
		if err := s.openFile(f, channels.Split(split)); err != nil {
			return fmt.Errorf("%s: %w", f.Path, err)
		}
	}
	if len(s.files) == 0 && len(others) > 0 {
		return fmt.Errorf("holds no table takes, only %s: takes can be looked at only in a set with that table; grow it again with --tables takes", list(others))
	}
	if len(s.files) == 0 {
		return errors.New("holds no takes")
	}
	s.takes, err = readIndex(s.files)
	return err
}

// openFile opens one file of the table takes.
func (s *Set) openFile(f export.File, split channels.Split) error {
	handle, err := s.root.Open(filepath.FromSlash(f.Path))
	if err != nil {
		return err
	}
	opened := &file{path: f.Path, split: split, handle: handle}
	s.files = append(s.files, opened)
	return guarded(func() error {
		info, err := handle.Stat()
		if err != nil {
			return err
		}
		if info.Size() != f.Bytes {
			return fmt.Errorf("holds %d bytes, the manifest says %d; 'strandwise verify' tells more", info.Size(), f.Bytes)
		}
		opened.parquet, err = parquet.OpenFile(handle, f.Bytes, parquet.SkipBloomFilters(true), parquet.SkipPageIndex(true))
		if err != nil {
			return fmt.Errorf("cannot be read as Parquet: %w", err)
		}
		opened.groups = opened.parquet.RowGroups()
		return nil
	})
}

// guarded turns a panic of the Parquet reader into an error: a set may come from
// anybody, and its manifest can be made to match a broken file.
func guarded(read func() error) (err error) {
	defer func() {
		if r := recover(); r != nil {
			err = fmt.Errorf("cannot be read as Parquet: %v", r)
		}
	}()
	return read()
}

// Close closes the files of the set.
func (s *Set) Close() error {
	errs := []error{s.root.Close()}
	for _, f := range s.files {
		errs = append(errs, f.handle.Close())
	}
	return errors.Join(errs...)
}

// Takes returns the number of takes.
func (s *Set) Takes() int { return len(s.takes.rows) }

// layoutOf returns the layout that a manifest describes, and the columns of its
// channels.
func layoutOf(l export.Layout) (*channels.Layout, []string, error) {
	out := &channels.Layout{}
	var columns []string
	at := map[string]int{}
	for i, c := range l.Channels {
		at[c.Name] = i
		columns = append(columns, c.Column)
		out.Channels = append(out.Channels, channels.Channel{
			Name: c.Name, TrackedPoint: c.TrackedPoint, Quantity: c.Quantity, Component: c.Component, Unit: c.Unit,
		})
	}
	var groups []channels.Group
	for _, g := range l.Groups {
		group := channels.Group{Name: g.Name, Limb: g.Limb}
		for _, name := range g.Channels {
			i, ok := at[name]
			if !ok {
				return nil, nil, fmt.Errorf("the manifest's group %s names the channel %s, which there is not", g.Name, name)
			}
			group.Channels = append(group.Channels, i)
		}
		groups = append(groups, group)
	}
	grouped, err := out.WithGroups(groups)
	if err != nil {
		return nil, nil, fmt.Errorf("the manifest's groups: %w", err)
	}
	return grouped, columns, nil
}
