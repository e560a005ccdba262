package export

import (
	"errors"
	"fmt"
	"io/fs"
	"maps"
	"os"
	"path/filepath"
	"slices"
	"strings"
)

// begin makes the folder ready: it exists, holds nothing but our set, is ours
// alone unless we write one shard of several, and says what the set is to be.
func (w *Writer) begin() error {
	if err := w.makeFolders(w.dir); err != nil {
		return err
	}
	if _, err := w.leftovers(); err != nil {
		return err
	}
	if err := w.makeFolders(w.path(stateFolder)); err != nil {
		return err
	}
	_, missing := os.Lstat(w.path(lockName))
	lock, err := w.disk.claim(w.path(lockName), !w.sharded())
	if err != nil {
		return err
	}
	w.lock, w.locked = lock, missing != nil
	// Another process may have sealed its set before the lock was ours, so only
	// what is found now may be removed.
	left, err := w.leftovers()
	if err != nil {
		return err
	}
	if err := w.agree(); err != nil {
		return err
	}
	if w.sharded() {
		return nil // others may be writing what looks unfinished
	}
	return w.clean(left, false)
}

// agree records what the set is to be, or holds it against what an unfinished
// set was to be.
func (w *Writer) agree() error {
	mine := planned{Format: planFormat, Options: w.options, Layout: describeLayout(w.layout)}
	there, err := w.plan()
	if err != nil {
		return err
	}
	if there == nil {
		w.fresh = true
		if there, err = w.declare(&mine); there == nil || err != nil {
			return err
		}
	}
	differ, err := mine.differences(there)
	if err == nil && len(differ) > 0 {
		err = fmt.Errorf("%s holds an unfinished set of another plan: %s; carry on with that plan, remove the folder, or choose another one", w.dir, listed(differ, "; "))
	}
	return err
}

// declare writes the plan, unless another process was faster: then that one's
// is returned.
func (w *Writer) declare(mine *planned) (*planned, error) {
	data, err := marshal(mine, "")
	if err != nil {
		return nil, err
	}
	t, err := filled(w.disk, w.path(planName), append(data, '\n'))
	if err != nil {
		return nil, err
	}
	if err := t.publish(); errors.Is(err, fs.ErrExist) {
		return w.plan()
	} else if err != nil {
		return nil, err
	}
	return nil, w.disk.syncDir(w.dir)
}

// clean removes what an unfinished set left, but for its finished buckets and,
// when they are wanted, attachments. It needs the lock, alone.
func (s state) clean(left []leftover, attached bool) error {
	keep, err := s.recorded(attached)
	if err != nil {
		return fmt.Errorf("clean unfinished set: %w", err)
	}
	left = slices.DeleteFunc(slices.Clone(left), func(l leftover) bool { return l.folder || keep[l.name] })
	if err := s.drop(left); err != nil {
		return fmt.Errorf("clean unfinished set: %w", err)
	}
	return nil
}

// drop removes files and folders, and the records that vouch for them only
// when all those are gone.
func (s state) drop(left []leftover) error {
	var errs []error
	for _, vouching := range []bool{false, true} {
		for _, l := range left {
			if strings.HasPrefix(l.name, stateFolder+"/") == vouching {
				errs = append(errs, s.remove(l.name))
			}
		}
		if err := errors.Join(errs...); err != nil {
			return err
		}
	}
	return nil
}

// remove removes a file or an empty folder, if it is there.
func (s state) remove(name string) error {
	if err := s.disk.remove(s.path(name)); !errors.Is(err, fs.ErrNotExist) {
		return err
	}
	return nil
}

// recorded lists the files of finished buckets and their records and, when they
// are wanted, those of attachments and notes, by name.
func (s state) recorded(attached bool) (map[string]bool, error) {
	keep := map[string]bool{}
	p, err := s.plan()
	if err != nil || p == nil {
		return keep, err
	}
	for number := range p.Buckets {
		b, err := s.bucket(number)
		if err != nil {
			return nil, err
		}
		if b == nil {
			continue
		}
		keep[bucketRecord(number)] = true
		for _, f := range b.Files {
			keep[f.Path] = true
		}
	}
	if !attached {
		return keep, nil
	}
	keep[notesName] = true
	files, err := s.attachments()
	for _, f := range files {
		keep[f.Path], keep[attachmentRecord(f.Path)] = true, true
	}
	return keep, err
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
	if err := w.disk.mkdir(dir); errors.Is(err, fs.ErrExist) {
		return nil // another bucket, or another process, was faster
	} else if err != nil {
		return err
	}
	w.mu.Lock()
	w.made = append(w.made, dir)
	w.mu.Unlock()
	return w.disk.syncDir(filepath.Dir(dir))
}

// leftover is a file or folder of an unfinished set, the lock and the plan
// apart.
type leftover struct {
	name    string // inside the set, with slashes
	folder  bool
	partial bool // under its temporary name
}

// leftovers lists what an unfinished set left in the folder, files before the
// folders that hold them. Anything else in the folder is an error that names it.
func (s state) leftovers() ([]leftover, error) {
	if _, err := os.Lstat(s.path(manifestName)); err == nil {
		return nil, fmt.Errorf("%s already holds a set; choose another folder or remove it", s.dir)
	}
	o, err := s.owner()
	for err == nil {
		var ours []leftover
		var foreign []string
		ours, foreign, err = s.sort(o)
		if len(foreign) == 0 || err != nil {
			return ours, err
		}
		before := o
		if o, err = s.owner(); err == nil && maps.Equal(o.attached, before.attached) && o.planned == before.planned {
			err = fmt.Errorf("%s is not empty: it holds %s; choose an empty folder", s.dir, listed(foreign, ", "))
		} // else another shard has said meanwhile what is its own
	}
	return nil, err
}

// sort tells what the owner made, files before the folders that hold them, from
// what somebody else did.
func (s state) sort(o owner) (ours []leftover, foreign []string, err error) {
	err = walk(s.dir, func(_, name string, folder bool) error {
		switch {
		case name == lockName || name == planName || name == stateFolder && folder:
		case o.owns(name, folder):
			_, partly := final(name)
			ours = append(ours, leftover{name, folder, partly})
		default:
			foreign = append(foreign, name)
			if folder {
				return fs.SkipDir
			}
		}
		return nil
	})
	slices.Reverse(ours) // the walk names a folder before what it holds
	return ours, foreign, err
}

// owner reads what of the folder's content is the unfinished set's.
func (s state) owner() (owner, error) {
	o := owner{attached: map[string]bool{}}
	p, err := s.plan()
	if err != nil {
		return o, err
	}
	o.planned = p != nil
	attached, err := s.attachments()
	for _, f := range attached {
		o.attached[f.Path] = true
	}
	return o, err
}

// walk visits what a folder holds, in the order of the names, with each path
// and its name inside the folder, with slashes.
func walk(dir string, visit func(path, name string, folder bool) error) error {
	return fs.WalkDir(os.DirFS(dir), ".", func(name string, e fs.DirEntry, err error) error {
		if errors.Is(err, fs.ErrNotExist) && name != "." {
			return nil // another process put it in place or removed it
		}
		if err != nil || name == "." {
			return err
		}
		return visit(filepath.Join(dir, filepath.FromSlash(name)), name, e.IsDir())
	})
}

// listed joins a few names for a message.
func listed(names []string, by string) string {
	const most = 5
	if more := len(names) - most; more > 0 {
		return fmt.Sprintf("%s and %d more", strings.Join(names[:most], by), more)
	}
	return strings.Join(names, by)
}
