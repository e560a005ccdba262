package main

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"slices"
	"strings"
	"testing"

	"strandwise/cmd/internal/job"
)

// TestScoreOfEverything asks for all a score can report, and checks that each
// learner, number of takes per label and method has its results, and that the
// last line of the text is the verdict.
func TestScoreOfEverything(t *testing.T) {
	csv := write(t, t.TempDir(), "long.csv", longCSV(4))
	args := []string{
		"score", csv, "--rate", "50", "--protocol", "pooled", "--takes-per-label", "1,3", "--repeats", "6", "--per-take", "4", "--curve", "0,2",
		"--distance", "dtw-dependent", "--learner", "both", "--kernels", "20", "--compare", "--weight", "left.accel=2",
	}
	var got struct {
		Results []struct {
			Distance, Learner, Origin, Method string
			TakesPerLabel                     *int `json:"takes_per_label"`
			Repeats                           int
			Curve                             []struct{ Errors int }
			Rejection                         *struct{ Threshold float64 }
		}
		Verdict string
	}
	if err := json.Unmarshal([]byte(must(t, append(args, "--json")...)), &got); err != nil {
		t.Fatal(err)
	}
	found, methods := map[string]int{}, map[string]bool{}
	for _, x := range got.Results {
		found[fmt.Sprint(x.Distance, x.Learner, *x.TakesPerLabel, x.Origin)]++
		methods[x.Method] = true
		if x.Repeats != 6 || (x.Rejection == nil) == (x.Distance != "") || (x.Origin == "recorded") != (len(x.Curve) == 0) {
			t.Errorf("result %+v", x)
		}
	}
	for _, learner := range []string{"dtw-dependent", "convolution"} {
		for _, k := range []string{"1", "3"} {
			if n := found[learner+k+"recorded+synthetic"]; found[learner+k+"recorded"] != 1 || n != len(methods)-1 || n < 2 {
				t.Errorf("%s, %s per label: %d results of recorded takes and %d of %d methods", learner, k, found[learner+k+"recorded"], n, len(methods)-1)
			}
		}
	}
	lines := strings.Split(strings.TrimSpace(must(t, args...)), "\n")
	if last := lines[len(lines)-1]; last != got.Verdict || last == "" {
		t.Errorf("the last line is %q, the verdict %q", last, got.Verdict)
	}
	if !slices.ContainsFunc(lines, func(l string) bool { return strings.HasPrefix(l, "error % by synthetic takes") }) {
		t.Errorf("no curve in\n%s", strings.Join(lines, "\n"))
	}
}

func TestScoreDoesNotDependOnWorkers(t *testing.T) {
	csv := write(t, t.TempDir(), "long.csv", longCSV(4))
	score := func(workers string) string {
		return must(t, "score", csv, "--rate", "50", "--protocol", "subject", "--takes-per-label", "2,3", "--per-take", "3", "--learner", "both", "--kernels", "20", "--workers", workers, "--json")
	}
	if one, three := score("1"), score("3"); one != three {
		t.Errorf("one worker reports\n%s\nthree report\n%s", one, three)
	}
}

// stopAt is a progress that ends a context at a share of the scoring.
type stopAt struct {
	stop        context.CancelFunc
	done, after int64
}

func (s *stopAt) Begin(_ string, total int64, _ string) { s.done, s.after = 0, total/2 }
func (s *stopAt) End()                                  {}
func (s *stopAt) Step(n int64) {
	if s.done += n; s.after > 0 && s.done >= s.after {
		s.stop()
	}
}

// TestInterruptedScoreComesBack checks that the commands' score hands over what
// was done when it is interrupted.
func TestInterruptedScoreComesBack(t *testing.T) {
	csv := write(t, t.TempDir(), "long.csv", longCSV(4))
	p := job.NewPlan()
	p.Recordings, p.Rate, p.Protocol, p.TakesPerLabel, p.PerTake, p.Workers = []string{csv}, 50, "pooled", []int{2}, 2, 1
	ctx, cancel := context.WithCancel(t.Context())
	r, err := p.Score(ctx, strings.NewReader(""), &stopAt{stop: cancel}, func(string) {})
	if !errors.Is(err, context.Canceled) || r == nil || !r.Unfinished {
		t.Fatalf("error %v, report %v", err, r)
	}
	var b strings.Builder
	printScore(&b, r)
	if !strings.Contains(b.String(), "Interrupted: ") || !strings.HasSuffix(b.String(), "interrupted before all splits were scored.\n") {
		t.Errorf("the text does not say that it was interrupted:\n%s", b.String())
	}
}

func TestWrongWaysToScore(t *testing.T) {
	csv := write(t, t.TempDir(), "long.csv", longCSV(2))
	for flag, c := range map[string]struct{ value, says string }{
		"--learner":         {"tree", "template, convolution, both"},
		"--kernels":         {"0", "1 or more"},
		"--ridge":           {"-1", "strength above 0 nor choose"},
		"--takes-per-label": {"1,1", "named twice"},
		"--curve":           {"64", "between 0 and per_take, 32"},
		"--test-share":      {"1", "below 1"},
		"--weight":          {"left.accel", "GROUP=WEIGHT"},
	} {
		o := strandwise(t, "", "score", csv, "--rate", "50", flag, c.value)
		if o.code != exitUsage {
			t.Errorf("%s %s: exit code %d, want %d\n%s", flag, c.value, o.code, exitUsage, o.err)
		}
		checkSays(t, o, flag, c.says)
	}
}
