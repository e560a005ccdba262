package store

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"time"
)

// Transfer moves whole files and objects. What fails is tried again, after a
// pause that doubles each time: a part of the object when reading, all of it when
// writing, for what was written before is not there. An object that is not there,
// something that is not allowed or makes no sense (fs.ErrPermission,
// fs.ErrInvalid), and a context that has ended are not tried again.
type Transfer struct {
	Store Store
	Tries int           // in all, 1 at least; 0 means 5
	Pause time.Duration // before the second try; 0 means 200 ms
	Part  int64         // bytes read at a time; 0 means 16 MiB

	// Retried, unless nil, is told of each failure that is tried again.
	Retried func(what string, err error)
}

const (
	defaultTries = 5
	defaultPause = 200 * time.Millisecond
	defaultPart  = 16 << 20
)

// again does something until it succeeds, cannot succeed, or was tried often
// enough.
func (t Transfer) again(ctx context.Context, what string, do func() error) error {
	tries, pause := t.Tries, t.Pause
	if tries == 0 {
		tries = defaultTries
	}
	if pause == 0 {
		pause = defaultPause
	}
	for n := 1; ; n++ {
		err := do()
		switch {
		case err == nil:
			return nil
		case errors.Is(err, fs.ErrNotExist), errors.Is(err, fs.ErrPermission), errors.Is(err, fs.ErrInvalid), ctx.Err() != nil:
			return fmt.Errorf("%s: %w", what, err)
		case n >= tries:
			return fmt.Errorf("%s: tried %d times: %w", what, n, err)
		}
		if t.Retried != nil {
			t.Retried(what, err)
		}
		select {
		case <-ctx.Done():
			return fmt.Errorf("%s: %w", what, ctx.Err())
		case <-time.After(pause):
			pause *= 2
		}
	}
}

// List returns the objects whose names begin with the prefix.
func (t Transfer) List(ctx context.Context, prefix string) (out []Object, err error) {
	err = t.again(ctx, "list "+prefix, func() error {
		out, err = t.Store.List(ctx, prefix)
		return err
	})
	return out, err
}

// Remove removes an object.
func (t Transfer) Remove(ctx context.Context, name string) error {
	return t.again(ctx, "remove "+name, func() error { return t.Store.Remove(ctx, name) })
}

// Put writes an object from its beginning to its end, as often as need be.
func (t Transfer) Put(ctx context.Context, name string, open func() (io.ReadCloser, error)) error {
	return t.again(ctx, "write "+name, func() error {
		from, err := open()
		if err != nil {
			return err
		}
		defer from.Close()
		w, err := t.Store.Create(ctx, name)
		if err != nil {
			return err
		}
		if _, err := io.Copy(w, from); err != nil {
			return errors.Join(err, w.Abort())
		}
		if err := w.Commit(); err != nil {
			return errors.Join(err, w.Abort())
		}
		return nil
	})
}

// PutFile writes a file as an object.
func (t Transfer) PutFile(ctx context.Context, path, name string) error {
	return t.Put(ctx, name, func() (io.ReadCloser, error) { return os.Open(path) })
}

// PutBytes writes these bytes as an object.
func (t Transfer) PutBytes(ctx context.Context, data []byte, name string) error {
	return t.Put(ctx, name, func() (io.ReadCloser, error) { return io.NopCloser(bytes.NewReader(data)), nil })
}

// Get writes what an object holds to w, part by part in order.
func (t Transfer) Get(ctx context.Context, name string, w io.Writer) error {
	var from Reader
	if err := t.again(ctx, "open "+name, func() (err error) {
		from, err = t.Store.Open(ctx, name)
		return err
	}); err != nil {
		return err
	}
	defer from.Close()
	size := t.Part
	if size == 0 {
		size = defaultPart
	}
	part := make([]byte, min(size, from.Size()))
	for at := int64(0); at < from.Size(); at += int64(len(part)) {
		part = part[:min(int64(len(part)), from.Size()-at)]
		err := t.again(ctx, fmt.Sprintf("read %s from byte %d", name, at), func() error {
			n, err := from.ReadAt(part, at)
			if n == len(part) {
				return nil // io.EOF may come with the last bytes
			}
			if err == nil || err == io.EOF {
				err = io.ErrUnexpectedEOF
			}
			return err
		})
		if err != nil {
			return err
		}
		if _, err := w.Write(part); err != nil {
			return fmt.Errorf("keep %s: %w", name, err)
		}
	}
	return nil
}

// GetFile writes what an object holds into a file, new or not.
func (t Transfer) GetFile(ctx context.Context, name, path string) error {
	f, err := os.Create(path)
	if err != nil {
		return err
	}
	err = t.Get(ctx, name, f)
	return errors.Join(err, f.Close())
}

// GetBytes returns what an object holds.
func (t Transfer) GetBytes(ctx context.Context, name string) ([]byte, error) {
	var b bytes.Buffer
	err := t.Get(ctx, name, &b)
	return b.Bytes(), err
}
