package export

import (
	"errors"
	"fmt"
	"path"
	"path/filepath"
	"slices"
	"strings"
	"sync"

	"strandwise/channels"
)

// Writer writes one set, or one shard of it, bucket by bucket; see [Bucket].
// Its methods are for one goroutine at a time.
type Writer struct {
	state
	layout  *channels.Layout
	options Options
	lock    file
	locked  bool            // the lock's file was made by this writer
	fresh   bool            // and so was the plan
	begun   map[int]*Bucket // through Add
	names   []string        // attached
	card    Card
	resumed int
	sealed  bool
	err     error // the failure after which nothing more is written

	mu   sync.Mutex
	made []string // folders in the order they were made, for Discard
}

// Create begins a set in a folder, which is made with its parents if need be,
// or goes on with an unfinished set there: its finished buckets stay, all else
// of it is made again. An unfinished set that was to be another one is an error
// that says in what. Anything else in the folder is an error that names it, as
// is a process that is writing a set there, where the system has file locks;
// shards of one set may be written at the same time.
//
// All takes must share the layout. When Create fails it leaves the folder as it
// was.
func Create(dir string, layout *channels.Layout, o Options) (*Writer, error) {
	return create(osDisk{}, dir, layout, o)
}

func create(d disk, dir string, layout *channels.Layout, o Options) (*Writer, error) {
	o, err := o.withDefaults()
	if err != nil {
		return nil, fmt.Errorf("create set: %w", err)
	}
	if o.Windowing, err = o.Windowing.withDefaults(len(layout.Channels)); err != nil {
		return nil, fmt.Errorf("create set: %w", err)
	}
	w := &Writer{state: state{filepath.Clean(dir), d}, layout: layout, options: o, begun: map[int]*Bucket{}}
	if err := checkNames(layout); err != nil {
		return nil, fmt.Errorf("create set: %w", err)
	}
	if err := w.begin(); err != nil {
		return nil, fmt.Errorf("create set: %w", errors.Join(err, w.retreat()))
	}
	todo, err := w.missing(o.Buckets)
	w.resumed = o.Buckets - len(todo)
	return w, err
}

func (w *Writer) sharded() bool { return w.options.Shards > 0 }

// Buckets returns the number of buckets of the whole set.
func (w *Writer) Buckets() int { return w.options.Buckets }

// Resumed returns the number of buckets that were finished when the writer was
// created.
func (w *Writer) Resumed() int { return w.resumed }

// Todo lists the buckets that are this writer's to make and not finished, in
// ascending order.
func (w *Writer) Todo() ([]int, error) {
	todo, err := w.missing(w.options.Buckets)
	if w.sharded() {
		todo = slices.DeleteFunc(todo, func(b int) bool { return b%w.options.Shards != w.options.Shard })
	}
	return todo, err
}

// Add writes one take into its bucket, which is begun with its first take and
// finished by [Writer.Seal]: a short way for sets of few buckets, which are all
// held open. See [Bucket.Add].
func (w *Writer) Add(t *channels.Take) error {
	if err := w.usable(); err != nil {
		return err
	}
	number := BucketOf(sourceOf(t), w.options.Buckets)
	b := w.begun[number]
	if b == nil {
		b = w.Bucket(number)
		w.begun[number] = b
	}
	err := b.Add(t)
	if b.err != nil {
		w.err = b.err
	}
	return err
}

// Attach writes a file of the caller's beside the tables, such as score.json.
// The name must be a plain file name that the set does not use itself, and
// each may be attached once. What an earlier run attached is replaced.
func (w *Writer) Attach(name string, data []byte) error {
	if err := w.usable(); err != nil {
		return err
	}
	if err := w.checkAttachment(name); err != nil {
		return fmt.Errorf("attach %q: %w", name, err)
	}
	if err := w.attach(describe(name, data), data); err != nil {
		return w.fail(fmt.Errorf("attach %s: %w", name, err))
	}
	w.names = append(w.names, name)
	return nil
}

// attach names the attachment in a record first, so that a crash between the
// two leaves nothing in the folder that the next Create does not know.
func (s state) attach(f File, data []byte) error {
	if err := s.record(attachmentRecord(f.Path), f); err != nil {
		return err
	}
	return writeFile(s.disk, s.path(f.Path), data)
}

func (w *Writer) checkAttachment(name string) error {
	_, partly := final(name)
	switch {
	case name != path.Base(name) || strings.HasPrefix(name, ".") || strings.ContainsAny(name, `/\:`):
		return errors.New("an attachment needs a plain file name")
	case name == manifestName, name == stateFolder, isDescription(name), partly, slices.Contains(AllTables(), Table(name)):
		return errors.New("the set itself uses this name")
	case slices.ContainsFunc(w.names, func(other string) bool { return strings.EqualFold(other, name) }):
		return errors.New("it is attached already")
	}
	return nil
}

// Note records what the run has to say about itself, for the manifest, and the
// card. A set cannot be sealed without it; of several shards one notes, the same that
// attaches.
func (w *Writer) Note(notices ...string) error {
	if err := w.usable(); err != nil {
		return err
	}
	if err := w.record(notesName, notes{append([]string{}, notices...), w.card}); err != nil {
		return w.fail(fmt.Errorf("note: %w", err))
	}
	return nil
}

// Seal finishes the buckets begun by Add, notes these notices, writes the
// manifest and removes the folder of an unfinished set: from here on the folder
// is a set. Buckets that nobody wrote hold no takes. A set without takes is an
// error. After a failure the set is not sealed; call Close or Discard. But an
// error that comes with a manifest is one of tidying up: the set is whole, only
// something is left of its unfinished folder, which readers do not mind. A shard
// is not sealed by its writer; see the function [Seal].
func (w *Writer) Seal(notices ...string) (*Manifest, error) {
	if w.sharded() {
		panic("export: Seal by the writer of a shard")
	}
	if err := w.usable(); err != nil {
		return nil, err
	}
	m, err := w.seal(notices)
	if err != nil {
		err = w.fail(fmt.Errorf("seal set: %w", err))
	}
	w.sealed = m != nil
	return m, err
}

func (w *Writer) seal(notices []string) (*Manifest, error) {
	todo, err := w.Todo()
	if err != nil {
		return nil, err
	}
	for _, number := range todo {
		b := w.begun[number]
		if b == nil {
			b = w.Bucket(number)
		}
		if err := b.Finish(); err != nil {
			return nil, err
		}
	}
	if err := w.Note(notices...); err != nil {
		return nil, err
	}
	return w.state.seal(w.lock)
}

// Close ends the writing of a set that is not sealed, or of a shard. What is
// not finished is removed. Finished buckets stay, and then so does the
// unfinished set, which Create goes on with; without any, the folder is left as
// it was before Create, unless other shards may be at work in it. It does
// nothing after a Seal that succeeded, so it can be deferred.
func (w *Writer) Close() (kept bool, err error) {
	if w.sealed {
		return false, nil
	}
	w.abandon()
	if w.sharded() {
		return true, w.lock.Close()
	}
	todo, err := w.missing(w.options.Buckets)
	if err == nil && len(todo) == w.options.Buckets {
		return false, w.undo()
	}
	return true, errors.Join(err, w.tidy(), w.lock.Close())
}

// tidy removes what is unfinished.
func (w *Writer) tidy() error {
	if err := w.remove(manifestName); err != nil { // of a Seal that failed
		return err
	}
	left, err := w.leftovers()
	if err != nil {
		return err
	}
	return w.clean(left, false)
}

// Discard removes everything of the unfinished set, finished buckets too, and
// the folder if the writer made it. It may be called after any failure, and does
// nothing after a Seal that succeeded, so it can be deferred. It is not for
// shards.
func (w *Writer) Discard() error {
	if w.sealed {
		return nil
	}
	w.abandon()
	return w.undo()
}

// abandon ends the writer and its buckets.
func (w *Writer) abandon() {
	w.sealed, w.err = true, errDiscarded
	for _, b := range w.begun {
		_ = b.Abandon() // what it cannot remove, clean or undo will try again
	}
}

// retreat leaves the folder as it was before a Create that failed.
func (w *Writer) retreat() error {
	switch {
	case w.lock == nil:
		return w.removeMade()
	case w.sharded():
		return w.lock.Close()
	case w.fresh:
		return w.undo()
	case w.locked && !releasesLate:
		return errors.Join(w.disk.remove(w.path(lockName)), w.lock.Close(), w.removeMade())
	}
	return w.lock.Close()
}

// undo removes the unfinished set and the folders made for it.
func (w *Writer) undo() error {
	if err := w.remove(manifestName); err != nil { // of a Seal that failed
		return errors.Join(err, w.lock.Close())
	}
	left, err := w.leftovers()
	if err != nil {
		return errors.Join(err, w.lock.Close())
	}
	return errors.Join(w.empty(left, w.lock), w.removeMade())
}

// removeMade removes the folders the writer made that are empty, backwards, so
// that each is empty when its turn comes.
func (w *Writer) removeMade() error {
	for _, dir := range slices.Backward(w.made) {
		_ = w.disk.remove(dir) // one that still holds something stays
	}
	return nil
}

var errDiscarded = errors.New("the set was given up")

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

// empty removes what is left of an unfinished set, and then its own folder. It
// closes the lock.
func (s state) empty(left []leftover, lock file) error {
	err := s.drop(left)
	if err == nil {
		err = s.remove(planName)
	}
	if err == nil && !releasesLate {
		err = s.remove(lockName) // while it is ours
	}
	if err := errors.Join(err, lock.Close()); err != nil {
		return err
	}
	return errors.Join(s.remove(lockName), s.remove(stateFolder))
}
