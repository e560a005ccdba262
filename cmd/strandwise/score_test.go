package main

import (
	"encoding/json"
	"path/filepath"
	"testing"

	"strandwise/testdata/opendata"
)

type scored struct {
	Results []struct {
		Origin         string
		Tested, Errors int
		Accuracy       float64
	}
}

func score(t *testing.T, args ...string) scored {
	t.Helper()
	var got scored
	if err := json.Unmarshal([]byte(must(t, append([]string{"score", "--json"}, args...)...)), &got); err != nil {
		t.Fatal(err)
	}
	return got
}

// The accuracy is that of Shifaz, Pelletier, Petitjean, Webb, Knowledge and
// Information Systems 2023 (arXiv 2102.10231), for the archive's own split. The
// whole table is held in package classify.
func TestScoreOfOpenRecordings(t *testing.T) {
	dir := opendata.Path(t, "sets", "NATOPS")
	args := []string{
		filepath.Join(dir, "train.csv"), filepath.Join(dir, "test.csv"), "--rate", "1", "--protocol", "given",
		"--distance", "dtw-dependent", "--normalise", "none", "--band", "1",
	}
	got := score(t, append(args, "--per-take", "0")...)
	if len(got.Results) != 1 || got.Results[0].Origin != "recorded" || got.Results[0].Tested != 180 || got.Results[0].Errors != 21 || got.Results[0].Accuracy != 0.8833 {
		t.Errorf("recorded templates alone: %+v, want 21 errors in 180 tests, accuracy 0.8833", got.Results)
	}
	got = score(t, append(args, "--per-take", "1")...)
	if len(got.Results) != 2 || got.Results[1].Origin != "recorded+synthetic" || got.Results[1].Tested != 180 {
		t.Errorf("with synthetic takes: %+v", got.Results)
	}
}

func TestGrowOfOpenRecordings(t *testing.T) {
	dir := opendata.Path(t, "sets", "NATOPS")
	set := filepath.Join(t.TempDir(), "set")
	var got struct{ Recorded, Training, Synthetic int }
	out := must(t, "grow", filepath.Join(dir, "train.csv"), filepath.Join(dir, "test.csv"), "--rate", "20", "--per-take", "16",
		"--seed", "7", "--distance", "euclidean-dependent", "--out", set, "--json")
	if err := json.Unmarshal([]byte(out), &got); err != nil {
		t.Fatal(err)
	}
	if got.Recorded != 360 || got.Training != 180 || got.Synthetic != 180*16 {
		t.Errorf("recorded %d, training %d, synthetic %d; want 360, 180 and 2880", got.Recorded, got.Training, got.Synthetic)
	}
	must(t, "verify", set)
}
