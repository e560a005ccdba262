package classify_test

import (
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/channels"
	"strandwise/classify"
	"strandwise/classify/template"
)

// TestCompareIsManyScores holds a comparison against a score of each method.
func TestCompareIsManyScores(t *testing.T) {
	takes := theatre(4, 3, 5, 2)
	methods := []classify.Method{
		{Name: "mild", Fit: fitted(jitter{0.3})}, {Name: "none", Fit: fitted(jitter{0})}, {Name: "wild", Fit: fitted(jitter{3})},
	}
	o := classify.Options{Protocol: classify.Pooled, TakesPerLabel: []int{2, 4}, Repeats: 6, PerTake: 6, Curve: []int{2}, Seed: 5}
	all, err := classify.Compare(t.Context(), takes, methods, o, nil)
	if err != nil {
		t.Fatal(err)
	}
	for _, m := range methods {
		o.Method = m.Name
		one := mustScore(t, takes, m.Fit, o)
		var got []classify.Result
		for _, x := range all.Results {
			if x.Origin == classify.FromRecorded || x.Method == m.Name {
				got = append(got, x)
			}
		}
		if diff := cmp.Diff(one.Results, got); diff != "" {
			t.Errorf("%s alone and compared (-alone +compared):\n%s", m.Name, diff)
		}
		var overall []classify.Overall
		for _, x := range all.Overall {
			if x.Method == m.Name {
				overall = append(overall, x)
			}
		}
		if diff := cmp.Diff(one.Overall, overall); diff != "" {
			t.Errorf("%s alone and compared (-alone +compared):\n%s", m.Name, diff)
		}
	}
}

// TestCompareSortsByGain checks the order of a comparison, and that the verdict
// is about the method named first, be it the best or not.
func TestCompareSortsByGain(t *testing.T) {
	takes := split(theatre(4, 3, 6, 3))
	r, err := classify.Compare(t.Context(), takes, []classify.Method{
		{Name: "copies", Fit: fitted(jitter{0})}, {Name: "harm", Fit: mirror(takes, false)}, {Name: "cheat", Fit: mirror(takes, true)},
	}, classify.Options{PerTake: 40}, nil)
	if err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, x := range r.Results {
		got = append(got, string(x.Distance)+" "+x.Method)
	}
	want := []string{
		"euclidean-dependent none", "euclidean-dependent cheat", "euclidean-dependent copies", "euclidean-dependent harm",
		"dtw-dependent none", "dtw-dependent cheat", "dtw-dependent copies", "dtw-dependent harm",
	}
	if diff := cmp.Diff(want, got); diff != "" {
		t.Errorf("order of the results (-want +got):\n%s", diff)
	}
	if !strings.HasPrefix(r.Verdict, "No difference shown by copies: ") {
		t.Errorf("verdict %q is not about the first method", r.Verdict)
	}
	if note := "3 methods were compared: the best of them looks better here than it is, for being picked."; !cmp.Equal(r.Notes[len(r.Notes)-1], note) {
		t.Errorf("notes %q lack %q", r.Notes, note)
	}
}

func TestMethodsNeedNames(t *testing.T) {
	for name, methods := range map[string][]classify.Method{
		"none":  nil,
		"alike": {{Name: "a", Fit: fitted(jitter{})}, {Name: "a", Fit: fitted(jitter{})}},
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if recover() == nil {
					t.Error("no panic")
				}
			}()
			_, _ = classify.Compare(t.Context(), theatre(2, 3, 2, 1), methods, classify.Options{PerTake: 1}, nil)
		})
	}
}

// TestCurveIsManyScores holds the points of a curve against scores with that
// many synthetic takes: the first in the order made.
func TestCurveIsManyScores(t *testing.T) {
	takes := theatre(4, 3, 4, 2)
	o := classify.Options{Distances: template.Distances(), PerTake: 16, Curve: []int{8, 0, 1, 16, 3}}
	r := mustScore(t, takes, fitted(jitter{0.8}), o)
	o.Curve = nil
	for i, m := range []int{0, 1, 3, 8, 16} {
		o.PerTake = m
		one := mustScore(t, takes, fitted(jitter{0.8}), o)
		for d, with := range withResults(r, classify.FromSynthetic) {
			origin := classify.FromSynthetic
			if m == 0 {
				origin = classify.FromRecorded
			}
			x := withResults(one, origin)[d]
			want := classify.CurvePoint{
				PerTake: m, Errors: x.Errors, Error: x.Error, Low: x.Low, High: x.High,
				Reduction: x.Reduction, ReductionLow: x.ReductionLow, ReductionHigh: x.ReductionHigh,
			}
			if diff := cmp.Diff(want, with.Curve[i]); diff != "" {
				t.Errorf("%s with %d synthetic takes (-alone +curve):\n%s", x.Distance, m, diff)
			}
		}
	}
	for _, x := range withResults(r, classify.FromRecorded) {
		if x.Curve != nil {
			t.Errorf("a curve of recorded takes: %+v", x.Curve)
		}
	}
}

// TestCurveOfAShortMaker has a maker that can make few takes: more asked for
// change nothing.
func TestCurveOfAShortMaker(t *testing.T) {
	short := makerFunc(func(s *channels.Take, n int) ([]*channels.Take, error) { return jitter{0.8}.Make(s, min(n, 3)) })
	r := mustScore(t, theatre(4, 3, 4, 2), fitted(short), classify.Options{PerTake: 16, Curve: []int{2, 3, 8}})
	x := withResults(r, classify.FromSynthetic)[0]
	if x.Curve[1].Errors != x.Errors || x.Curve[2].Errors != x.Errors || x.Curve[0].Errors == x.Errors {
		t.Errorf("3 takes were made of 16; errors of a curve over 2, 3, 8: %+v, of all %d", x.Curve, x.Errors)
	}
}
