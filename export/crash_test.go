package export_test

import (
	"errors"
	"path/filepath"
	"slices"
	"strings"
	"syscall"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/export"
)

// small asks for a set of few steps in two buckets.
func small() export.Options {
	o := both()
	o.Buckets, o.RowGroupBytes, o.FileBytes, o.Tables = 2, 0, 0, nil
	return o
}

// attempt writes the whole invented set bucket by bucket, as grow does, or
// stops at the first failure.
func attempt(t *testing.T, d *export.Disk, dir string) (*export.Writer, *export.Manifest, error) {
	t.Helper()
	w, err := export.CreateOn(d, dir, wristband(t), small())
	if err != nil {
		return nil, nil, err
	}
	todo, err := w.Todo()
	if err != nil {
		return w, nil, err
	}
	for _, number := range todo {
		if err := writeBucket(w, number, troupe(wristband(t), 1)); err != nil {
			return w, nil, err
		}
	}
	if err := w.Attach("score.json", []byte("{}")); err != nil {
		return w, nil, err
	}
	m, err := w.Seal("invented for a test")
	return w, m, err
}

// steps returns the steps on disk at which a set may fail, and the set. Of the
// many that write a column to a file it takes every seventh.
func steps(t *testing.T) ([]int, map[string]string) {
	t.Helper()
	dir := filepath.Join(t.TempDir(), "set")
	d := &export.Disk{}
	if _, _, err := attempt(t, d, dir); err != nil {
		t.Fatal(err)
	}
	var at []int
	for step := 1; step <= d.Steps; step++ {
		if i, writes := slices.BinarySearch(d.Writes, step); !writes || i%7 == 0 {
			at = append(at, step)
		}
	}
	if len(at) < 50 {
		t.Fatalf("%d steps; the test means to fail at many", len(at))
	}
	return at, tree(t, dir)
}

// sound reports whether a folder holds a set that verifies.
func sound(t testing.TB, dir string) bool {
	t.Helper()
	v, err := export.Verify(dir)
	return err == nil && v.Sound()
}

// isUnfinished reports whether a tree is an unfinished set with nothing in it
// but what is finished.
func isUnfinished(files map[string]string) bool {
	for name := range files {
		if strings.HasSuffix(name, ".partial") || strings.HasSuffix(name, "manifest.json") {
			return false
		}
	}
	return true
}

// TestEveryFailureIsReported lets each step on disk fail in turn, as a full
// disk would: the failure is returned, and after Discard nothing is left.
func TestEveryFailureIsReported(t *testing.T) {
	all, _ := steps(t)
	for _, at := range all {
		root := t.TempDir()
		d := &export.Disk{FailAt: at, Err: syscall.ENOSPC}
		dir := filepath.Join(root, "made", "set")
		w, m, err := attempt(t, d, dir)
		if !errors.Is(err, syscall.ENOSPC) {
			t.Fatalf("step %d: error %v, want that of the disk", at, err)
		}
		if m != nil {
			if !sound(t, dir) {
				t.Errorf("step %d: a manifest was returned, but the set is not sound", at)
			}
			continue
		}
		if w != nil {
			if err := w.Discard(); err != nil {
				t.Errorf("step %d: Discard: %v", at, err)
			}
		}
		if left := tree(t, root); len(left) > 0 {
			t.Errorf("step %d: a trace is left: %v", at, left)
		}
	}
}

// TestFailureStays: after a failed write a bucket takes nothing more.
func TestFailureStays(t *testing.T) {
	d := &export.Disk{}
	w, err := export.CreateOn(d, t.TempDir(), wristband(t), export.Options{RowGroupBytes: 1})
	if err != nil {
		t.Fatal(err)
	}
	defer w.Discard()
	b := w.Bucket(0)
	d.FailAt, d.Err = d.Steps+5, syscall.ENOSPC
	take := troupe(wristband(t), 0)[0]
	if err := b.Add(take); !errors.Is(err, syscall.ENOSPC) {
		t.Fatalf("error %v, want that of the disk", err)
	}
	for name, f := range map[string]func() error{"Add": func() error { return b.Add(take) }, "Finish": b.Finish} {
		if err := f(); !errors.Is(err, syscall.ENOSPC) {
			t.Errorf("a later %s returns %v, want the failure", name, err)
		}
	}
}

// TestEveryFailureCanBeGoneOnFrom lets each step fail, closes the writer, and
// creates it again: finished buckets are not made again, and the bytes are the
// same.
func TestEveryFailureCanBeGoneOnFrom(t *testing.T) {
	all, want := steps(t)
	resumed := 0
	for _, at := range all {
		root := t.TempDir()
		dir := filepath.Join(root, "set")
		w, m, err := attempt(t, &export.Disk{FailAt: at, Err: syscall.EIO}, dir)
		if err == nil || m != nil || w == nil {
			continue
		}
		kept, err := w.Close()
		if err != nil {
			t.Fatalf("step %d: Close: %v", at, err)
		}
		if files := tree(t, root); !isUnfinished(files) || !kept && len(files) > 0 {
			t.Errorf("step %d: kept %v, and left %v", at, kept, files)
		}
		again, _, err := attempt(t, &export.Disk{}, dir)
		if err != nil {
			t.Fatalf("step %d: go on: %v", at, err)
		}
		if kept != (again.Resumed() > 0) {
			t.Errorf("step %d: kept %v, resumed %d buckets", at, kept, again.Resumed())
		}
		resumed += again.Resumed()
		if diff := cmp.Diff(want, tree(t, dir)); diff != "" {
			t.Errorf("step %d: the second run differs (-want +got):\n%s", at, diff)
		}
	}
	if resumed < 20 {
		t.Errorf("buckets were gone on from %d times; the test means to see it often", resumed)
	}
}

// TestEveryCrash stops the process at each step on disk in turn: what is left
// is a whole set or a folder that the next run goes on with, to the same bytes
// in the end.
func TestEveryCrash(t *testing.T) {
	all, want := steps(t)
	whole, resumed := 0, 0
	for _, at := range all {
		dir := filepath.Join(t.TempDir(), "set")
		d := &export.Disk{FailAt: at, Err: errors.New("the process is dead"), Crash: true}
		if _, _, err := attempt(t, d, dir); err == nil {
			t.Fatalf("step %d: no error", at)
		}
		d.Die()
		if _, err := export.ReadManifest(dir); err == nil {
			whole++
			if !sound(t, dir) {
				t.Errorf("step %d: a manifest, but the set is not sound", at)
			}
			continue
		}
		w, _, err := attempt(t, &export.Disk{}, dir)
		if err != nil {
			t.Fatalf("step %d: go on: %v", at, err)
		}
		resumed += w.Resumed()
		if diff := cmp.Diff(want, tree(t, dir)); diff != "" {
			t.Errorf("step %d: the second run differs (-want +got):\n%s", at, diff)
		}
	}
	if whole == 0 || whole > len(all)/4 || resumed < 20 {
		t.Errorf("of %d crashes %d came after the manifest; %d buckets were gone on from", len(all), whole, resumed)
	}
}

// TestCrashInDiscard: removing stops anywhere, and the rest is still known as
// an unfinished set.
func TestCrashInDiscard(t *testing.T) {
	_, want := steps(t)
	for at := 0; ; at++ {
		dir := filepath.Join(t.TempDir(), "set")
		d := &export.Disk{}
		w, err := export.CreateOn(d, dir, wristband(t), small())
		if err != nil {
			t.Fatal(err)
		}
		if err := writeBucket(w, 0, troupe(wristband(t), 1)); err != nil {
			t.Fatal(err)
		}
		if err := w.Attach("score.json", nil); err != nil {
			t.Fatal(err)
		}
		d.FailAt, d.Err, d.Crash = d.Steps+1+at, errors.New("the process is dead"), true
		if w.Discard() == nil && d.Steps < d.FailAt {
			return // nothing failed: all steps were tried
		}
		d.Die()
		if _, _, err := attempt(t, &export.Disk{}, dir); err != nil {
			t.Fatalf("step %d: begin again: %v", at, err)
		}
		if diff := cmp.Diff(want, tree(t, dir)); diff != "" {
			t.Errorf("step %d: the second run differs (-want +got):\n%s", at, diff)
		}
	}
}

// TestEveryFailureOverUnfinishedSet lets each step fail while an unfinished
// set is gone on with: after Close the folder can still be used.
func TestEveryFailureOverUnfinishedSet(t *testing.T) {
	all, want := steps(t)
	for at := 1; ; at++ {
		dir := filepath.Join(t.TempDir(), "set")
		old := &export.Disk{FailAt: all[len(all)/2], Err: errors.New("the process is dead"), Crash: true}
		if _, _, err := attempt(t, old, dir); err == nil {
			t.Fatal("the old set was finished")
		}
		old.Die()
		w, m, err := attempt(t, &export.Disk{FailAt: at, Err: syscall.EIO}, dir)
		if err == nil {
			return // nothing failed: all steps were tried
		}
		if m != nil {
			continue
		}
		if w != nil {
			if _, err := w.Close(); err != nil {
				t.Errorf("step %d: Close: %v", at, err)
			}
		}
		if _, _, err := attempt(t, &export.Disk{}, dir); err != nil {
			t.Fatalf("step %d: begin again: %v", at, err)
		}
		if diff := cmp.Diff(want, tree(t, dir)); diff != "" {
			t.Errorf("step %d: the second run differs (-want +got):\n%s", at, diff)
		}
	}
}
