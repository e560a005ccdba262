package main

import (
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
)

// TestGrowNeedsRoom: a set that will not fit is refused before it is made, with
// what it needs and what there is.
func TestGrowNeedsRoom(t *testing.T) {
	root := t.TempDir()
	if err := syscall.Mount("strandwise-test", root, "tmpfs", 0, "size=512k"); err != nil {
		t.Skipf("cannot mount a small file system here: %v", err)
	}
	t.Cleanup(func() {
		if err := syscall.Unmount(root, 0); err != nil {
			t.Errorf("unmount: %v", err)
		}
	})
	csv := write(t, t.TempDir(), "long.csv", longCSV(2))
	o := strandwise(t, "", "grow", csv, "--rate", "50", "--per-take", "200", "--out", filepath.Join(root, "set"))
	if o.code != exitFault || !strings.Contains(o.err, "about 1.6 MB are to be written, and 0.5 MB are free there") {
		t.Errorf("exit code %d\n%s", o.code, o.err)
	}
	if left, err := os.ReadDir(root); err != nil || len(left) > 0 {
		t.Errorf("left behind: %v, %v", left, err)
	}
}
