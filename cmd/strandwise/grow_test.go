package main

import (
	"encoding/json"
	"maps"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

func TestGrowSealsASetThatVerifies(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", longCSV(3))
	set := filepath.Join(dir, "set")
	must(t, "grow", csv, "--rate", "50", "--per-take", "4", "--tables", "takes,frames", "--out", set)
	files := slices.Sorted(maps.Keys(contents(t, set)))
	want := []string{
		"CARD.md", "croissant.json",
		"frames/split=test/part-00000.parquet", "frames/split=train/part-00000.parquet",
		"harm.json", "manifest.json", "realism.json", "report.html", "score.json",
		"takes/split=test/part-00000.parquet", "takes/split=train/part-00000.parquet", "variation.json",
	}
	if diff := cmp.Diff(want, files); diff != "" {
		t.Errorf("files of the set (-want +got):\n%s", diff)
	}
	must(t, "verify", set)
}

func TestVerifyNamesTheFileThatChanged(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", longCSV(2))
	set := filepath.Join(dir, "set")
	must(t, "grow", csv, "--rate", "50", "--per-take", "2", "--out", set)
	for name, text := range contents(t, set) {
		changed := []byte(text)
		changed[len(changed)/2] ^= 1
		write(t, set, name, string(changed))
		o := strandwise(t, "", "verify", set)
		if o.code != exitFault || !strings.Contains(o.out+o.err, name) {
			t.Errorf("one byte of %s changed: exit code %d, and it says\n%s%s", name, o.code, o.out, o.err)
		}
		write(t, set, name, text)
	}
	must(t, "verify", set)
}

func TestGrowWritesTheSameBytesWhateverTheWorkers(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", longCSV(3))
	grow := func(name, seed, workers string) map[string]string {
		set := filepath.Join(dir, name)
		must(t, "grow", csv, "--rate", "50", "--per-take", "8", "--seed", seed, "--workers", workers, "--out", set)
		return contents(t, set)
	}
	one := grow("one", "7", "1")
	if diff := cmp.Diff(one, grow("two", "7", "2")); diff != "" {
		t.Errorf("one and two workers wrote different bytes")
	}
	other := grow("other", "8", "2")
	if name := "takes/split=train/part-00000.parquet"; one[name] == other[name] {
		t.Errorf("another seed wrote the same %s", name)
	}
}

func TestGrowCountsAsJSON(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", longCSV(2))
	var got struct {
		Recorded, Training, Synthetic int
		Score                         *struct{ Protocol string }
	}
	out := must(t, "grow", csv, "--rate", "50", "--per-take", "5", "--out", filepath.Join(dir, "set"), "--json")
	if err := json.Unmarshal([]byte(out), &got); err != nil {
		t.Fatalf("%v in\n%s", err, out)
	}
	if got.Recorded != 12 || got.Training != 8 || got.Synthetic != 40 {
		t.Errorf("recorded %d, training %d, synthetic %d; want 12, 8 and 40", got.Recorded, got.Training, got.Synthetic)
	}
	if got.Score == nil || got.Score.Protocol != "given" {
		t.Errorf("score is %+v; recordings with a test split are scored by protocol given", got.Score)
	}
}

func TestGrowReadsStandardInput(t *testing.T) {
	set := filepath.Join(t.TempDir(), "set")
	o := strandwise(t, longCSV(2), "grow", "-", "--rate", "50", "--per-take", "2", "--out", set)
	if o.code != exitDone {
		t.Fatalf("exit code %d\n%s", o.code, o.err)
	}
	must(t, "verify", set)
}

func TestGrowWithoutASplitIsCrossValidatedOverPeople(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", strings.ReplaceAll(strings.ReplaceAll(longCSV(3), ",test,", ",,"), ",train,", ",,"))
	out := must(t, "grow", csv, "--rate", "50", "--per-take", "2", "--out", filepath.Join(dir, "set"))
	if !strings.Contains(out, "protocol subject") {
		t.Errorf("three people and no split are not scored by protocol subject:\n%s", out)
	}
}

func TestHoldOutKeepsPeopleApart(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", longCSV(3))
	for _, held := range []string{"subject=pim", "0.3"} {
		var got struct{ Recorded, Training int }
		out := must(t, "grow", csv, "--rate", "50", "--per-take", "1", "--hold-out", held, "--out", filepath.Join(dir, "set-"+held), "--json")
		if err := json.Unmarshal([]byte(out), &got); err != nil {
			t.Fatal(err)
		}
		if got.Recorded != 18 || got.Training != 12 {
			t.Errorf("--hold-out %s: %d of %d takes train, want 12 of 18", held, got.Training, got.Recorded)
		}
	}
}

func TestGrowOfOneLabelMakesASetWithoutAScore(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", strings.ReplaceAll(longCSV(2), "wave", "bow"))
	set := filepath.Join(dir, "set")
	o := strandwise(t, "", "grow", csv, "--rate", "50", "--per-take", "2", "--out", set)
	if o.code != exitDone || !strings.Contains(o.err, "no score") {
		t.Errorf("exit code %d, and it says\n%s", o.code, o.err)
	}
	must(t, "verify", set)
}

func TestDemo(t *testing.T) {
	if testing.Short() {
		t.Skip("skipped in short mode: the demo takes seconds")
	}
	dir := filepath.Join(t.TempDir(), "theatre")
	out := must(t, "demo", "--into", dir)
	for _, part := range []string{"120 invented recordings", "3840 synthetic", "protocol subject", "What to try next"} {
		if !strings.Contains(out, part) {
			t.Errorf("the demo does not say %q:\n%s", part, out)
		}
	}
	must(t, "verify", filepath.Join(dir, "set"))
	checkGolden(t, contents(t, filepath.Join(dir, "set"))["score.json"], filepath.Join("testdata", "demo.score.json"))
	if o := strandwise(t, "", "demo", "--into", dir); o.code != exitFault || !strings.Contains(o.err, "--into") {
		t.Errorf("a second demo in the same folder: exit code %d\n%s", o.code, o.err)
	}
}

// Synthetic takes are no recordings: grown from a set, or scored on, they would
// flatter. Only convert passes them on.
func TestSetReadsBackAsItsRecordings(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", longCSV(2))
	set := filepath.Join(dir, "set")
	must(t, "grow", csv, "--rate", "50", "--per-take", "3", "--out", set)
	again := strandwise(t, "", "grow", set, "--per-take", "3", "--out", filepath.Join(dir, "again"), "--json")
	var got struct{ Recorded, Training, Synthetic int }
	if err := json.Unmarshal([]byte(again.out), &got); err != nil {
		t.Fatalf("%v\n%s", err, again.err)
	}
	if got.Recorded != 12 || got.Training != 8 || got.Synthetic != 24 {
		t.Errorf("from a set of 12 recorded takes and 24 synthetic ones: %+v", got)
	}
	if !strings.Contains(again.err, "synthetic takes, which are left out") {
		t.Errorf("what is left out is not told:\n%s", again.err)
	}
	long := filepath.Join(dir, "all.csv")
	if said := must(t, "convert", set, long); !strings.Contains(said, "36 takes") {
		t.Errorf("convert says %q of 36 takes", said)
	}
}
