package main

import (
	"encoding/json"
	"fmt"
	"path/filepath"
	"strings"
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

func TestScoreRefusesWhatIsNoGesture(t *testing.T) {
	csv := write(t, t.TempDir(), "long.csv", longCSV(4)+restCSV())
	var got struct {
		Labels  int
		Results []struct {
			Rejection *struct{ Threshold float64 }
		}
	}
	out := must(t, "score", csv, "--rate", "50", "--per-take", "2", "--no-gesture", "rest", "--json")
	if err := json.Unmarshal([]byte(out), &got); err != nil {
		t.Fatal(err)
	}
	if got.Labels != 2 || got.Results[0].Rejection == nil {
		t.Errorf("%d labels and rejection %+v; rest is no label, and sets a threshold\n%s", got.Labels, got.Results[0].Rejection, out)
	}
}

// restCSV is rows of takes in which nothing is performed.
func restCSV() string {
	var b strings.Builder
	for n := range 6 {
		for i := range 30 {
			fmt.Fprintf(&b, "r%02d,rest,ember,train,%d,%.4f,0.1,%.4f\n", n, i, 0.01*float64(i%3), 0.02*float64((i+n)%4))
		}
	}
	return b.String()
}
