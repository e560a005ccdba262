package export_test

import (
	"errors"
	"path/filepath"
	"strings"
	"syscall"
	"testing"

	"strandwise/export"
)

// TestDiskFull writes to a file system too small for the set. Mounting one
// needs the superuser; elsewhere TestEveryFailureIsReported stands in for it.
func TestDiskFull(t *testing.T) {
	root := t.TempDir()
	if err := syscall.Mount("strandwise-test", root, "tmpfs", 0, "size=64k"); err != nil {
		t.Skipf("cannot mount a small file system here: %v", err)
	}
	t.Cleanup(func() {
		if err := syscall.Unmount(root, 0); err != nil {
			t.Errorf("unmount: %v", err)
		}
	})
	dir := filepath.Join(root, "set")
	l := wristband(t)
	w, err := export.Create(dir, l, both())
	if err != nil {
		t.Fatal(err)
	}
	if _, err = fill(w, troupe(l, 40)); !errors.Is(err, syscall.ENOSPC) {
		t.Fatalf("error %v, want a full disk", err)
	}
	if text := err.Error(); !strings.Contains(text, filepath.Join(dir, "takes")) && !strings.Contains(text, filepath.Join(dir, "frames")) {
		t.Errorf("%q does not name the file", text)
	}
	if err := w.Discard(); err != nil {
		t.Fatal(err)
	}
	if left := tree(t, root); len(left) > 0 {
		t.Errorf("Discard left %v", left)
	}
}

// TestReadOnly: a file system that cannot be written is named as such.
func TestReadOnly(t *testing.T) {
	root := t.TempDir()
	if err := syscall.Mount("strandwise-test", root, "tmpfs", syscall.MS_RDONLY, ""); err != nil {
		t.Skipf("cannot mount a read-only file system here: %v", err)
	}
	t.Cleanup(func() {
		if err := syscall.Unmount(root, 0); err != nil {
			t.Errorf("unmount: %v", err)
		}
	})
	for _, dir := range []string{root, filepath.Join(root, "set")} {
		_, err := export.Create(dir, wristband(t), export.Options{})
		if !errors.Is(err, syscall.EROFS) || !strings.Contains(err.Error(), dir) {
			t.Errorf("%s: error %v, want one that names it and the cause", dir, err)
		}
	}
}
