package export

import (
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"path"
	"path/filepath"
	"runtime"
	"slices"
	"strings"

	"strandwise/channels"
)

// Writer writes one set. It is not safe for concurrent use: the order of the
// rows is the order of the calls, and so are the bytes.
type Writer struct {
	dir     string
	disk    disk
	layout  *channels.Layout
	options Options
	marker  file
	made    []string // files and folders in the order they were made, for Discard
	tables  map[tableKey]*table
	open    []*table // the tables in the order of their first row
	accepts *channels.Layout
	counts  counts
	files   []File
	sealed  bool
	err     error // the failure after which nothing more is written
}

type tableKey struct {
	table Table
	split channels.Split
}

// Create begins a set in a folder, which is made with its parents if need be.
// The folder must be empty, or hold a set that was never finished, which is
// removed; anything else in it is an error that names it. A process that is
// still writing a set there is noticed where the system has file locks.
//
// All takes must share the layout. When Create fails it leaves nothing behind.
func Create(dir string, layout *channels.Layout, o Options) (*Writer, error) {
	return create(osDisk{}, dir, layout, o)
}

func create(d disk, dir string, layout *channels.Layout, o Options) (*Writer, error) {
	o, err := o.withDefaults()
	if err != nil {
		return nil, fmt.Errorf("create set: %w", err)
	}
	w := &Writer{
		dir: filepath.Clean(dir), disk: d, layout: layout, options: o,
		tables: map[tableKey]*table{}, accepts: layout, counts: counts{},
	}
	if err := checkNames(layout); err != nil {
		return nil, fmt.Errorf("create set: %w", err)
	}
	if err := w.begin(); err != nil {
		return nil, fmt.Errorf("create set: %w", errors.Join(err, w.Discard()))
	}
	return w, nil
}

// Add writes one take as the next row of its split's tables. It copies what
// it needs. A take that cannot stand in a set (it has another layout, a value
// that is no 32-bit float, or is made but meant for testing) is an error that
// names the reason, and nothing of it is written. After a failed write every
// further call returns that failure.
func (w *Writer) Add(t *channels.Take) error {
	if err := w.usable(); err != nil {
		return err
	}
	if err := w.check(t); err != nil {
		return err
	}
	split := t.Split
	if split == channels.None {
		split = channels.Train
	}
	for _, kind := range w.options.Tables {
		if err := w.table(kind, split).add(t); err != nil {
			return w.fail(fmt.Errorf("write %s: %w", kind, err))
		}
	}
	w.counts.add(split, t.Label, t.Origin(), 1, int64(t.Frames()))
	return nil
}

// table returns the table for a split, new at its first take.
func (w *Writer) table(kind Table, split channels.Split) *table {
	key := tableKey{kind, split}
	t := w.tables[key]
	if t == nil {
		t = newTable(w, kind, split)
		w.tables[key] = t
		w.open = append(w.open, t)
	}
	return t
}

// Attach writes a file of the caller's beside the tables, such as score.json.
// The name must be a plain file name that the set does not use itself, and
// each may be attached once.
func (w *Writer) Attach(name string, data []byte) error {
	if err := w.usable(); err != nil {
		return err
	}
	if err := w.checkAttachment(name); err != nil {
		return fmt.Errorf("attach %q: %w", name, err)
	}
	line, err := json.Marshal(attached{name})
	if err != nil {
		return fmt.Errorf("attach %q: %w", name, err)
	}
	// The marker names the attachment first, so that a crash between the two
	// leaves nothing in the folder that the next Create does not know.
	if err := w.note(append(line, '\n')); err != nil {
		return w.fail(fmt.Errorf("attach: %w", err))
	}
	if err := w.writeFile(name, data); err != nil {
		return w.fail(fmt.Errorf("attach: %w", err))
	}
	w.files = append(w.files, describe(name, data))
	return nil
}

func (w *Writer) checkAttachment(name string) error {
	switch {
	case name != path.Base(name) || strings.HasPrefix(name, ".") || strings.ContainsAny(name, `/\:`):
		return errors.New("an attachment needs a plain file name")
	case name == manifestName, name == markerName, strings.HasSuffix(name, partial), slices.Contains(AllTables(), Table(name)):
		return errors.New("the set itself uses this name")
	case slices.ContainsFunc(w.files, func(f File) bool { return strings.EqualFold(f.Path, name) }):
		return errors.New("it is attached already")
	}
	return nil
}

// writeFile writes a whole file under its temporary name and puts it in place.
func (w *Writer) writeFile(name string, data []byte) error {
	path := filepath.Join(w.dir, name)
	f, err := w.createFile(path)
	if err != nil {
		return err
	}
	if _, err := f.Write(data); err != nil {
		f.Close()
		return err
	}
	return place(w.disk, f, path)
}

// createFile opens the temporary file of a path, both known to Discard.
func (w *Writer) createFile(path string) (file, error) {
	f, err := w.disk.create(path + partial)
	if err == nil {
		w.made = append(w.made, path, path+partial)
	}
	return f, err
}

// Seal finishes the tables, writes the manifest with these notices, and
// removes the marker of an unfinished set: from here on the folder is a set.
// A set without takes is an error. After a failure the set is not sealed; call
// Discard.
func (w *Writer) Seal(notices ...string) (*Manifest, error) {
	if err := w.usable(); err != nil {
		return nil, err
	}
	m, err := w.seal(notices)
	if err != nil {
		return nil, w.fail(fmt.Errorf("seal set: %w", err))
	}
	w.sealed = true
	return m, nil
}

func (w *Writer) seal(notices []string) (*Manifest, error) {
	if len(w.counts) == 0 {
		return nil, errors.New("no take was added")
	}
	for _, t := range w.open {
		if err := t.end(); err != nil {
			return nil, err
		}
	}
	m := w.manifest(notices)
	data, err := m.encode()
	if err != nil {
		return nil, err
	}
	if err := w.writeFile(manifestName, data); err != nil {
		return nil, err
	}
	// From here on the folder holds a whole set; until the marker is gone it
	// is one that looks unfinished, which readers do not mind.
	marker := filepath.Join(w.dir, markerName)
	if err := errors.Join(w.marker.Close(), w.disk.remove(marker)); err != nil {
		return nil, err
	}
	w.marker = nil
	return m, w.disk.syncDir(w.dir)
}

// Discard removes everything the writer made, the folder included if the
// writer made it. It may be called after any failure, and does nothing after a
// Seal that succeeded, so it can be deferred.
func (w *Writer) Discard() error {
	if w.sealed {
		return nil
	}
	w.sealed, w.err = true, errDiscarded
	var errs []error
	for _, t := range w.open {
		t.abandon()
	}
	// Backwards, so that a folder is empty when its turn comes, and the marker
	// goes after all that it vouches for.
	for _, path := range slices.Backward(w.made) {
		if runtime.GOOS == "windows" && w.marker != nil && filepath.Base(path) == markerName {
			w.marker.Close() // an open file cannot be removed there
		}
		if err := w.disk.remove(path); err != nil && !errors.Is(err, fs.ErrNotExist) {
			errs = append(errs, err)
		}
	}
	if w.marker != nil {
		w.marker.Close()
	}
	return errors.Join(errs...)
}

var errDiscarded = errors.New("the set was discarded")

func (w *Writer) usable() error {
	if w.err == nil && w.sealed {
		return errors.New("the set is sealed already")
	}
	return w.err
}

func (w *Writer) fail(err error) error {
	w.err = err
	return err
}
