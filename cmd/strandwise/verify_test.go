package main

import (
	"path/filepath"
	"strings"
	"testing"
)

// TestVerifyWarnsOfRecordingsOnBothSides: a take recorded twice, once on each
// side of the split, is told of, and is no fault of the set.
func TestVerifyWarnsOfRecordingsOnBothSides(t *testing.T) {
	dir := t.TempDir()
	text := longCSV(2)
	header, lines, _ := strings.Cut(text, "\n")
	var twice strings.Builder
	for line := range strings.Lines(lines) {
		if strings.HasPrefix(line, "t00,") {
			twice.WriteString("again," + strings.Replace(strings.TrimPrefix(line, "t00,"), ",train,", ",test,", 1))
		}
	}
	csv := write(t, dir, "long.csv", header+"\n"+lines+twice.String())
	set := filepath.Join(dir, "set")
	must(t, "grow", csv, "--rate", "50", "--per-take", "2", "--out", set)
	o := strandwise(t, "", "verify", set)
	if o.code != exitDone || !strings.Contains(o.err, "take again, which is for testing, is nearly the same as take t00, which trains") {
		t.Errorf("exit code %d, and it says\n%s%s", o.code, o.out, o.err)
	}
	if out := must(t, "verify", set, "--json"); !strings.Contains(out, `"test": "again"`) {
		t.Errorf("as JSON it does not name the take:\n%s", out)
	}
}
