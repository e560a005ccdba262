package ingest

import (
	"fmt"
	"runtime"
	"testing"

	"github.com/google/go-cmp/cmp"
)

func TestRegister(t *testing.T) {
	r := register{}
	for i := range 1000 {
		if _, again := r.enter(fmt.Sprint("take", i), i/100, i); again {
			t.Fatalf("take %d comes again", i)
		}
	}
	if at, again := r.enter("take512", 9, 9); !again || at != (place{5, 512}) {
		t.Errorf("take512: %v, %v", at, again)
	}
	if at, again := r.enter("take512", 9, 9); !again || at != (place{5, 512}) {
		t.Errorf("the first place is forgotten: %v, %v", at, again)
	}
}

// TestRegisterBytesPerTake holds the table to the size its documentation
// states.
func TestRegisterBytesPerTake(t *testing.T) {
	for _, n := range []int{100_000, 150_000, 230_000} {
		var before, after runtime.MemStats
		runtime.GC()
		runtime.ReadMemStats(&before)
		r := register{}
		for i := range n {
			r.enter(fmt.Sprint("take", i), 0, i)
		}
		runtime.GC()
		runtime.ReadMemStats(&after)
		if per := float64(after.HeapAlloc-before.HeapAlloc) / float64(n); per > 40 {
			t.Errorf("%.1f bytes per take for %d takes", per, n)
		} else {
			t.Logf("%.1f bytes per take for %d takes", per, n)
		}
		runtime.KeepAlive(r)
	}
}

func TestNoticesOfManyFiles(t *testing.T) {
	var n notices
	for _, f := range []string{"a", "b", "b", "c"} {
		n.add(f, "is odd", "seen in "+f)
	}
	copied := n.clone()
	copied.add("d", "is odd", "")
	copied.add("d", "is new", "")
	if d := cmp.Diff([]string{"a and 2 more: is odd (seen in a)"}, n.lines()); d != "" {
		t.Error(d)
	}
	if d := cmp.Diff([]string{"a and 3 more: is odd (seen in a)", "d: is new"}, copied.lines()); d != "" {
		t.Error(d)
	}
}
