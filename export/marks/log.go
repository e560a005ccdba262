package marks

import (
	"errors"
	"fmt"
	"io/fs"
	"maps"
	"os"
	"path/filepath"
	"runtime"
	"sync"
	"syscall"
	"time"
)

// Log adds marks to the file of a set. Goroutines may share it, and several
// programs may add to one file. It makes the file with the first mark, so that
// to open a log changes nothing.
type Log struct {
	mu   sync.Mutex
	path string
	by   string
	now  func() time.Time
	past *history
}

// Open reads the marks of the set in a folder and returns a log to add to them.
// New marks are said to be by this person, who may be unnamed, at the time that
// now tells.
func Open(dir, by string, now func() time.Time) (*Log, error) {
	path := filepath.Join(dir, Name)
	past, err := load(path)
	if err != nil {
		return nil, err
	}
	return &Log{path: path, by: by, now: now, past: past}, nil
}

// Of returns the mark of a take.
func (l *Log) Of(take string) Mark {
	l.mu.Lock()
	defer l.mu.Unlock()
	return l.past.of(take)
}

// All returns a copy of all marks, without those that are none.
func (l *Log) All() map[string]Mark {
	l.mu.Lock()
	defer l.mu.Unlock()
	return maps.Clone(l.past.marks)
}

// Undoable returns how many marks can be taken back.
func (l *Log) Undoable() int {
	l.mu.Lock()
	defer l.mu.Unlock()
	return len(l.past.made)
}

// Set marks a take. When it returns without an error the mark is on the disk.
// A mark that the take has already adds no line.
func (l *Log) Set(take string, m Mark) error {
	if _, err := Parse(string(m)); err != nil {
		return err
	}
	l.mu.Lock()
	defer l.mu.Unlock()
	return l.add(func() (line, bool) { return line{take: take, mark: m}, l.past.of(take) != m })
}

// Undo takes back the last mark that was not taken back yet, and returns the
// take it was of and the mark that take has now. It is not ok when there is none
// to take back.
func (l *Log) Undo() (take string, m Mark, ok bool, err error) {
	l.mu.Lock()
	defer l.mu.Unlock()
	err = l.add(func() (line, bool) {
		n := len(l.past.made)
		if n == 0 {
			return line{}, false
		}
		last := l.past.made[n-1]
		take, m, ok = last.take, last.before, true
		return line{take: take, mark: m, undo: true}, true
	})
	return take, m, ok && err == nil, err
}

// add writes the line that next returns, once what others wrote is read.
func (l *Log) add(next func() (line, bool)) (err error) {
	if err := l.catchUp(); err != nil {
		return err
	}
	row, wanted := next()
	if !wanted {
		return nil
	}
	row.time, row.by = l.now().UTC().Format(time.RFC3339), l.by
	text, err := row.encode()
	if err != nil {
		return err
	}
	if err := l.write(text); err != nil {
		return fmt.Errorf("the mark was not saved: %w", err)
	}
	l.past.apply(row)
	return nil
}

// catchUp reads the file again when it is not as long as it was left.
func (l *Log) catchUp() error {
	size := int64(0)
	switch info, err := os.Stat(l.path); {
	case err == nil:
		size = info.Size()
	case !errors.Is(err, fs.ErrNotExist):
		return err
	}
	if size == l.past.size {
		return nil
	}
	past, err := load(l.path)
	if err == nil {
		l.past = past
	}
	return err
}

// write adds a line to the file and waits for the disk. When that fails the
// file is put back as it was, as far as the disk allows.
func (l *Log) write(text []byte) (err error) {
	p := l.past
	if p.whole == 0 {
		text = append([]byte(header+"\n"), text...)
	} else if !p.ended {
		text = append([]byte("\n"), text...)
	}
	f, err := os.OpenFile(l.path, os.O_WRONLY|os.O_CREATE|os.O_APPEND, 0o666)
	if err != nil {
		return err
	}
	defer func() { err = errors.Join(err, f.Close()) }()
	if p.whole < p.size { // a torn line, which never counted
		if err := f.Truncate(p.whole); err != nil {
			return err
		}
		p.size = p.whole
	}
	if _, err := f.Write(text); err != nil {
		return errors.Join(err, f.Truncate(p.whole))
	}
	if err := f.Sync(); err != nil {
		return errors.Join(err, f.Truncate(p.whole))
	}
	created := p.whole == 0
	p.whole += int64(len(text))
	p.size, p.ended = p.whole, true
	if created {
		return syncFolder(filepath.Dir(l.path))
	}
	return nil
}

// syncFolder makes the name of a new file last, where the file system can; see
// the function of that name in package export, which may import this one.
func syncFolder(dir string) error {
	if runtime.GOOS == "windows" {
		return nil
	}
	d, err := os.Open(dir)
	if err != nil {
		return err
	}
	defer d.Close()
	if err := d.Sync(); err != nil && !errors.Is(err, errors.ErrUnsupported) && !errors.Is(err, syscall.EINVAL) {
		return err
	}
	return nil
}
