package main

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"time"

	"strandwise/cmd/internal/job"
	"strandwise/cmd/strandwise-beam/cloud"
	"strandwise/export"
	"strandwise/export/store"
)

// Place names where something lies, a folder or an address in object storage. It
// is passed between processes, so a folder must be one that all of them have.
type Place struct{ Text string }

// open returns the place as storage, and what stands before the names of its
// objects. The caller calls shut.
func (p Place) open(ctx context.Context) (t store.Transfer, prefix string, shut func() error, err error) {
	if !cloud.IsAddress(p.Text) {
		return store.Transfer{Store: store.Folder(p.Text)}, "", func() error { return nil }, nil
	}
	a, err := cloud.Parse(p.Text)
	if err != nil {
		return t, "", nil, err
	}
	bucket, err := cloud.Open(ctx, a)
	if err != nil {
		return t, "", nil, err
	}
	if prefix = strings.TrimSuffix(a.Name, "/"); prefix != "" {
		prefix += "/"
	}
	return store.Transfer{Store: bucket}, prefix, bucket.Close, nil
}

// beside returns the place of this name beside p.
func (p Place) beside(ending string) Place {
	address, query, asked := strings.Cut(p.Text, "?")
	if !cloud.IsAddress(p.Text) {
		return Place{filepath.Clean(p.Text) + ending}
	}
	out := strings.TrimSuffix(address, "/") + ending
	if asked {
		out += "?" + query
	}
	return Place{out}
}

// recordings returns the recordings that lie in storage, with stand-ins below a
// folder; nil when all are files.
func recordings(ctx context.Context, named []string, dir string) (*store.Recordings, func() error, error) {
	var opened []func() error
	shut := func() error {
		var errs []error
		for _, f := range opened {
			errs = append(errs, f())
		}
		return errors.Join(errs...)
	}
	files := slices.DeleteFunc(slices.Clone(named), cloud.IsAddress)
	if len(files) == len(named) {
		return nil, shut, nil
	}
	if len(files) > 0 {
		return nil, shut, mixed(files[0])
	}
	out := store.NewRecordings(dir)
	for _, name := range named {
		a, err := cloud.Parse(name)
		if err != nil {
			return nil, shut, &job.UsageError{Problem: err.Error()}
		}
		bucket, err := cloud.Open(ctx, a)
		if err != nil {
			return nil, shut, err
		}
		opened = append(opened, bucket.Close)
		if err := out.Add(ctx, store.Transfer{Store: bucket}, a.Base(), a.Name, isRecording); err != nil {
			return nil, shut, err
		}
	}
	return out, shut, nil
}

func mixed(name string) error {
	return &job.UsageError{Problem: fmt.Sprintf("%s is a file, and other recordings lie in storage; all must lie in one kind of place", name)}
}

// isRecording tells of an object below one that was named whether it is read, by
// the ending of its name.
func isRecording(name string) bool {
	base := filepath.Base(name)
	for _, packed := range []string{".gz", ".zst"} {
		base = strings.TrimSuffix(base, packed)
	}
	return filepath.Ext(base) != "" && !strings.HasPrefix(base, ".")
}

// workshop is a set while this process works at it: the folder itself, or a
// folder of its own from which what is finished goes into storage.
type workshop struct {
	dir  string
	set  *store.Set // nil when the folder is the set
	shut func() error
}

// openWorkshop opens the set at a place. scratch is a folder that is not there
// yet. wanted tells of which buckets this process must know; nil is all.
func openWorkshop(ctx context.Context, p Place, scratch string, wanted func(bucket int) bool) (*workshop, error) {
	if !cloud.IsAddress(p.Text) {
		return &workshop{dir: p.Text, shut: func() error { return nil }}, nil
	}
	t, prefix, shut, err := p.open(ctx)
	if err != nil {
		return nil, err
	}
	w := &workshop{dir: scratch, set: &store.Set{Transfer: t, Prefix: prefix, Dir: scratch, Wanted: wanted}, shut: shut}
	if err := w.set.Fetch(ctx); err != nil {
		return nil, errors.Join(err, w.close())
	}
	return w, nil
}

// push puts what is finished where it belongs.
func (w *workshop) push(ctx context.Context) error {
	if w.set == nil {
		return nil
	}
	return w.set.Push(ctx)
}

// whole reports whether the set is sealed.
func (w *workshop) whole() bool {
	_, err := os.Lstat(filepath.Join(w.dir, "manifest.json"))
	return err == nil
}

// again brings the folder up to what others have made meanwhile.
func (w *workshop) again(ctx context.Context) error {
	if w.set == nil {
		return nil
	}
	return w.set.Fetch(ctx)
}

func (w *workshop) close() error {
	var err error
	if w.set != nil {
		err = os.RemoveAll(w.dir)
	}
	return errors.Join(err, w.shut())
}

// patiently does something that needs a set for as long as another process has
// it for itself.
func patiently(ctx context.Context, do func() error) error {
	const pause = 200 * time.Millisecond
	for {
		err := do()
		if !errors.Is(err, export.ErrBusy) {
			return err
		}
		select {
		case <-ctx.Done():
			return errors.Join(err, ctx.Err())
		case <-time.After(pause):
		}
	}
}
