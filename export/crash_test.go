package export_test

import (
	"errors"
	"os"
	"path/filepath"
	"syscall"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/export"
)

// attempt writes the whole invented set, or stops at the first failure.
func attempt(t *testing.T, d *export.Disk, dir string) (*export.Writer, error) {
	t.Helper()
	w, err := export.CreateOn(d, dir, wristband(t), both())
	if err != nil {
		return nil, err
	}
	_, err = fill(w, troupe(wristband(t), 1))
	return w, err
}

// steps returns how many steps on disk the set takes, and the set.
func steps(t *testing.T) (int, map[string]string) {
	t.Helper()
	dir := filepath.Join(t.TempDir(), "set")
	d := &export.Disk{}
	if _, err := attempt(t, d, dir); err != nil {
		t.Fatal(err)
	}
	if d.Steps < 50 {
		t.Fatalf("%d steps; the test means to fail at many", d.Steps)
	}
	return d.Steps, tree(t, dir)
}

// TestEveryFailureIsReported lets each step on disk fail in turn, as a full
// disk would: the failure is returned, and after Discard nothing is left.
func TestEveryFailureIsReported(t *testing.T) {
	total, _ := steps(t)
	for at := 1; at <= total; at++ {
		root := t.TempDir()
		d := &export.Disk{FailAt: at, Err: syscall.ENOSPC}
		w, err := attempt(t, d, filepath.Join(root, "made", "set"))
		if !errors.Is(err, syscall.ENOSPC) {
			t.Fatalf("step %d: error %v, want that of the disk", at, err)
		}
		if w != nil {
			if again := w.Add(troupe(wristband(t), 0)[0]); !errors.Is(again, syscall.ENOSPC) {
				t.Errorf("step %d: a later Add returns %v, want the failure", at, again)
			}
			if err := w.Discard(); err != nil {
				t.Errorf("step %d: Discard: %v", at, err)
			}
		}
		if left := tree(t, root); len(left) > 0 {
			t.Errorf("step %d: a trace is left: %v", at, left)
		}
	}
}

// TestEveryCrash stops the process at each step on disk in turn: what is left
// is a whole set or a folder that the next run begins again, with the same
// bytes in the end.
func TestEveryCrash(t *testing.T) {
	total, want := steps(t)
	whole := 0
	for at := 1; at <= total; at++ {
		dir := filepath.Join(t.TempDir(), "set")
		d := &export.Disk{FailAt: at, Err: errors.New("the process is dead"), Crash: true}
		if _, err := attempt(t, d, dir); err == nil {
			t.Fatalf("step %d: no error", at)
		}
		d.Die()
		if _, err := os.Stat(filepath.Join(dir, "manifest.json")); err == nil {
			whole++
			if v, err := export.Verify(dir); err != nil || !v.Sound() {
				t.Errorf("step %d: a manifest, but the set is not sound: %v, %v", at, v, err)
			}
			continue
		}
		if _, err := export.ReadManifest(dir); err == nil {
			t.Errorf("step %d: no manifest, yet one is read", at)
		}
		if _, err := attempt(t, &export.Disk{}, dir); err != nil {
			t.Fatalf("step %d: begin again: %v", at, err)
		}
		if diff := cmp.Diff(want, tree(t, dir)); diff != "" {
			t.Errorf("step %d: the second run differs (-want +got):\n%s", at, diff)
		}
	}
	if whole == 0 || whole > 5 {
		t.Errorf("the manifest was in place before %d of the last steps; it should come near the end", whole)
	}
}

// TestCrashInDiscard: removing stops anywhere, and the rest is still known as
// an unfinished set.
func TestCrashInDiscard(t *testing.T) {
	_, want := steps(t)
	for at := 0; ; at++ {
		dir := filepath.Join(t.TempDir(), "set")
		d := &export.Disk{}
		w, err := export.CreateOn(d, dir, wristband(t), both())
		if err != nil {
			t.Fatal(err)
		}
		for _, take := range troupe(wristband(t), 1) {
			if err := w.Add(take); err != nil {
				t.Fatal(err)
			}
		}
		if err := w.Attach("score.json", nil); err != nil {
			t.Fatal(err)
		}
		d.FailAt, d.Err, d.Crash = d.Steps+1+at, errors.New("the process is dead"), true
		if w.Discard() == nil {
			return // nothing failed: all steps were tried
		}
		d.Die()
		if _, err := attempt(t, &export.Disk{}, dir); err != nil {
			t.Fatalf("step %d: begin again: %v", at, err)
		}
		if diff := cmp.Diff(want, tree(t, dir)); diff != "" {
			t.Errorf("step %d: the second run differs (-want +got):\n%s", at, diff)
		}
	}
}

// TestEveryFailureOverUnfinishedSet lets each step fail while an unfinished
// set is cleaned and begun again: after Discard the folder can still be used.
func TestEveryFailureOverUnfinishedSet(t *testing.T) {
	total, want := steps(t)
	for at := 1; ; at++ {
		dir := filepath.Join(t.TempDir(), "set")
		old := &export.Disk{FailAt: total - 4, Err: errors.New("the process is dead"), Crash: true}
		if _, err := attempt(t, old, dir); err == nil {
			t.Fatal("the old set was finished")
		}
		old.Die()
		w, err := attempt(t, &export.Disk{FailAt: at, Err: syscall.EIO}, dir)
		if err == nil {
			return // nothing failed: all steps were tried
		}
		if w != nil {
			if err := w.Discard(); err != nil {
				t.Errorf("step %d: Discard: %v", at, err)
			}
		}
		if _, err := attempt(t, &export.Disk{}, dir); err != nil {
			t.Fatalf("step %d: begin again: %v", at, err)
		}
		if diff := cmp.Diff(want, tree(t, dir)); diff != "" {
			t.Errorf("step %d: the second run differs (-want +got):\n%s", at, diff)
		}
	}
}
