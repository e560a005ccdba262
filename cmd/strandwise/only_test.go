package main

import (
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// linesOfTake returns the lines of a CSV that begin with a take's id.
func linesOfTake(text, id string) []string {
	var out []string
	for line := range strings.Lines(text) {
		if strings.HasPrefix(line, id+",") {
			out = append(out, line)
		}
	}
	return out
}

// TestOnlyMakesTheTakeOfTheSet: whatever take is asked for, it has the values
// that the set has.
func TestOnlyMakesTheTakeOfTheSet(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", longCSV(3))
	set := filepath.Join(dir, "set")
	args := []string{"grow", csv, "--rate", "50", "--per-take", "5", "--seed", "4", "--variation", measured(t, csv)}
	must(t, append(args, "--out", set, "--buckets", "2")...)
	must(t, "convert", set, filepath.Join(dir, "all.csv"))
	all := contents(t, dir)["all.csv"]
	var id string
	n := 0
	for line := range strings.Lines(all) {
		next, _, _ := strings.Cut(line, ",")
		if next == id || !strings.Contains(next, "~") {
			continue
		}
		if id = next; len(id)%3 != 0 && n > 3 {
			continue
		}
		n++
		file := filepath.Join(dir, "one.parquet")
		must(t, append(args, "--only", id, "--out", file)...)
		must(t, "convert", file, filepath.Join(dir, "one.csv"), "--replace")
		files := contents(t, dir)
		if diff := cmp.Diff(linesOfTake(all, id), linesOfTake(files["one.csv"], id)); diff != "" || len(linesOfTake(all, id)) == 0 {
			t.Errorf("take %s (-in the set +made again):\n%s", id, diff)
		}
		must(t, "convert", file, filepath.Join(dir, "one.csv"), "--replace")
		if err := os.Remove(file); err != nil {
			t.Fatal(err)
		}
		if n == 4 {
			break
		}
	}
	if n == 0 {
		t.Fatal("the set has no synthetic take")
	}
	var one struct {
		ID, Source string
		Values     [][]float64
	}
	if err := json.Unmarshal([]byte(must(t, append(args, "--only", id, "--json")...)), &one); err != nil {
		t.Fatal(err)
	}
	if one.ID != id || id[:strings.LastIndex(id, "~")] != one.Source || len(one.Values) != len(linesOfTake(all, id)) {
		t.Errorf("as JSON: take %s of %s with %d frames, want %s with %d", one.ID, one.Source, len(one.Values), id, len(linesOfTake(all, id)))
	}
	if out := must(t, append(args, "--only", id)...); len(linesOfTake(out, id)) != len(linesOfTake(all, id)) {
		t.Errorf("standard output has %d frames of the take", len(linesOfTake(out, id)))
	}
}

func TestOnlyNamesWhatThereIs(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", longCSV(2))
	first, _, _ := strings.Cut(strings.SplitN(longCSV(2), "\n", 3)[1], ",")
	for id, want := range map[string]string{
		first:         "is no synthetic take",
		"nobody~0":    `no recorded take is named "nobody"`,
		first + "~99": "there are " + first + "~",
	} {
		o := strandwise(t, "", "grow", csv, "--rate", "50", "--per-take", "2", "--only", id)
		if o.code != exitUsage || !strings.Contains(o.err, want) {
			t.Errorf("--only %s: exit code %d, want %q in\n%s", id, o.code, want, o.err)
		}
	}
}
