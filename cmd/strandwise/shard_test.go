package main

import (
	"fmt"
	"maps"
	"math/rand/v2"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// same reports files that differ, by name alone.
func same(t *testing.T, what string, want, got map[string]string) {
	t.Helper()
	if maps.Equal(want, got) {
		return
	}
	for name := range want {
		if got[name] != want[name] {
			t.Errorf("%s: %s differs or is missing", what, name)
		}
	}
	for name := range got {
		if _, ok := want[name]; !ok {
			t.Errorf("%s: %s is one too many", what, name)
		}
	}
}

// measured returns a file of what measure says of a recording, so that a test of
// many runs measures once.
func measured(t *testing.T, csv string) string {
	t.Helper()
	return write(t, t.TempDir(), "variation.json", must(t, "measure", csv, "--rate", "50", "--json"))
}

// TestShardsWorkersAndBucketsMakeTheSameSet: one worker, two workers, and eight
// shards in random order, sealed, write the same bytes.
func TestShardsWorkersAndBucketsMakeTheSameSet(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", longCSV(4))
	args := []string{"grow", csv, "--rate", "50", "--per-take", "6", "--tables", "takes,frames", "--buckets", "8", "--variation", measured(t, csv), "--distance", "euclidean-dependent", "--out"}
	grow := func(out string, more ...string) string {
		t.Helper()
		return must(t, slices.Concat(args, []string{filepath.Join(dir, out)}, more)...)
	}
	grow("one", "--workers", "1")
	want := contents(t, filepath.Join(dir, "one"))
	if want["takes/split=train/part-00007.parquet"] == "" && want["takes/split=test/part-00007.parquet"] == "" {
		t.Fatalf("the set has no eighth bucket")
	}
	grow("two", "--workers", "2")
	same(t, "two workers", want, contents(t, filepath.Join(dir, "two")))
	for _, s := range rand.New(rand.NewPCG(3, 3)).Perm(8) {
		grow("eight", "--shards", "8", "--shard", fmt.Sprint(s))
	}
	must(t, "seal", filepath.Join(dir, "eight"))
	same(t, "eight shards", want, contents(t, filepath.Join(dir, "eight")))
	must(t, "verify", filepath.Join(dir, "eight"))
	grow("three", "--shards", "3", "--shard", "2")
	grow("three", "--shards", "3", "--shard", "2") // again: nothing is left to do
	o := strandwise(t, "", "seal", filepath.Join(dir, "three"))
	if o.code != exitFault || !strings.Contains(o.err, "6 of 8 buckets are not finished: 0, 1, 3, 4, 6") {
		t.Errorf("sealing one shard of three: exit code %d\n%s", o.code, o.err)
	}
	if out := grow("three", "--json"); !strings.Contains(out, `"resumed": 2`) {
		t.Errorf("one run does not go on from the two buckets of a shard:\n%s", out)
	}
	same(t, "gone on from a shard", want, contents(t, filepath.Join(dir, "three")))
}

// TestGrowRefusesToGoOnWithAnotherPlan names the keys that differ.
func TestGrowRefusesToGoOnWithAnotherPlan(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", longCSV(2))
	set := filepath.Join(dir, "set")
	args := []string{"grow", csv, "--rate", "50", "--per-take", "2", "--buckets", "2", "--variation", measured(t, csv), "--out", set}
	must(t, append(args, "--shards", "2", "--shard", "1")...)
	before := contents(t, set)
	write(t, dir, "long.csv", strings.Replace(longCSV(2), "0.", "1.", 1))
	o := strandwise(t, "", append(args, "--seed", "8")...)
	for _, part := range []string{"unfinished set of another plan", `plan.seed was 1 and is now 8`, "recordings.0.sha256 was"} {
		if o.code != exitFault || !strings.Contains(o.err, part) {
			t.Errorf("exit code %d, and it does not say %q:\n%s", o.code, part, o.err)
		}
	}
	if diff := cmp.Diff(before, contents(t, set)); diff != "" {
		t.Error("the unfinished set was changed")
	}
}

func TestSealNeedsShards(t *testing.T) {
	dir := t.TempDir()
	if o := strandwise(t, "", "seal", dir); o.code != exitFault || !strings.Contains(o.err, "holds no unfinished set") {
		t.Errorf("exit code %d\n%s", o.code, o.err)
	}
	csv := write(t, dir, "long.csv", longCSV(2))
	set := filepath.Join(dir, "set")
	must(t, "grow", csv, "--rate", "50", "--per-take", "1", "--out", set)
	before := contents(t, set)
	if out := must(t, "seal", set, "--json"); !strings.Contains(out, `"recorded": 12`) {
		t.Errorf("sealing a sealed set says\n%s", out)
	}
	same(t, "sealed again", before, contents(t, set))
}
