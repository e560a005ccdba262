package classify_test

import (
	"context"
	"errors"
	"strings"
	"testing"

	"strandwise/channels"
	"strandwise/classify"
)

func TestCancel(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	seen := 0
	r, err := classify.Score(ctx, theatre(3, 3, 3, 1), nil, classify.Options{Workers: 1}, func(done, total int) {
		if seen++; done == 5 {
			cancel()
		}
	})
	if !errors.Is(err, context.Canceled) || r != nil {
		t.Errorf("error of a score cancelled before any split was done: %v, and the report %v", err, r)
	}
	if seen != 5 {
		t.Errorf("a score cancelled at take 5 went on to %d", seen)
	}
}

// TestInterruptedScoreReports checks that a score interrupted reports what it
// had: whole splits, and that it is not all.
func TestInterruptedScoreReports(t *testing.T) {
	takes := theatre(3, 3, 4, 1)
	o := classify.Options{Protocol: classify.Pooled, TakesPerLabel: []int{1, 2}, Repeats: 20, PerTake: 2}
	for _, workers := range []int{1, 3} {
		o.Workers = workers
		ctx, cancel := context.WithCancel(t.Context())
		r, err := classify.Score(ctx, takes, fitted(jitter{1}), o, func(done, total int) {
			if done == total/2 {
				cancel()
			}
		})
		if !errors.Is(err, context.Canceled) || r == nil {
			t.Fatalf("a score interrupted half way: %v, and the report %v", err, r)
		}
		for _, x := range r.Results {
			if each := 36 - 3**x.TakesPerLabel; x.Repeats < 5 || x.Repeats >= 20 || x.Tested != x.Repeats*each {
				t.Errorf("%d per label: %d tests in %d splits of %d", *x.TakesPerLabel, x.Tested, x.Repeats, each)
			}
		}
		if !r.Unfinished || !strings.Contains(r.Verdict, "interrupted") || !strings.Contains(strings.Join(r.Notes, "\n"), "of 40 splits were scored") {
			t.Errorf("the report of an interrupted score does not say so: %q, %q", r.Verdict, r.Notes)
		}
	}
}

// TestLateEndOfContext has a context that ends when all is done: the report is
// whole.
func TestLateEndOfContext(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	defer cancel()
	r, err := classify.Score(ctx, theatre(2, 2, 2, 1), nil, classify.Options{Workers: 2}, nil)
	if err != nil || r.Unfinished {
		t.Errorf("error %v, unfinished %v", err, r.Unfinished)
	}
}

// TestFaultStopsTheScore checks that a fault in one split gives no report, even
// when others are done.
func TestFaultStopsTheScore(t *testing.T) {
	fault := errors.New("the curtain fell")
	calls := 0
	fit := func(training []*channels.Take) (classify.Maker, error) {
		if calls++; calls == 3 {
			return nil, fault
		}
		return jitter{1}, nil
	}
	r, err := classify.Score(t.Context(), theatre(2, 4, 2, 1), fit, classify.Options{PerTake: 1, Workers: 1}, nil)
	if !errors.Is(err, fault) || r != nil {
		t.Errorf("error %v and report %v, want the fault alone", err, r)
	}
}
