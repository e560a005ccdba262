package export_test

import (
	"path/filepath"
	"testing"

	"strandwise/channels"
	"strandwise/export"
)

// TestEstimate: the files are no larger than was estimated, and not much
// smaller.
func TestEstimate(t *testing.T) {
	r := newRand()
	for _, width := range []int{3, 30} {
		l := wide(width)
		source := perform(l, "a take of some name", 128, r)
		var train, test export.Extent
		takes := []*channels.Take{source}
		for d := range 150 {
			take := vary(source, d, r)
			if d%3 == 0 {
				take.Split, take.Made = channels.Test, nil
			}
			takes = append(takes, take)
		}
		for _, take := range takes {
			e := &train
			if take.Split == channels.Test {
				e = &test
			}
			e.Takes++
			e.Frames += int64(take.Frames())
		}
		o := export.Options{Tables: export.AllTables()}
		total, largest := o.Estimate(width, train, test)
		m := write(t, t.TempDir(), l, o, takes)
		var all, most int64
		for _, f := range m.Files {
			if f.Rows > 0 {
				all += f.Bytes
				most = max(most, f.Bytes)
			}
		}
		if all > total || 2*all < total || most > largest {
			t.Errorf("%d channels: %d bytes, the largest file %d; estimated were %d and %d", width, all, most, total, largest)
		}
	}
}

// TestFree: a folder that is not there yet would stand where its parent does.
func TestFree(t *testing.T) {
	dir := t.TempDir()
	here, known := export.Free(dir)
	if !known {
		t.Skip("this system does not say how much is free")
	}
	there, _ := export.Free(filepath.Join(dir, "not", "there"))
	if here < 1 || there < here/2 || there > 2*here { // others write meanwhile
		t.Errorf("%d bytes free here, %d in a folder to be made", here, there)
	}
}
