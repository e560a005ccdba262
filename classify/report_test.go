package classify_test

import (
	"encoding/json"
	"flag"
	"os"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/channels"
	"strandwise/classify"
	"strandwise/classify/statistic"
	"strandwise/classify/template"
)

var update = flag.Bool("update", false, "rewrite the golden files")

// TestReportJSON holds the written form of a report against testdata. The file
// is the documentation of the format; rewrite it with
//
//	go test ./classify -run ReportJSON -update
func TestReportJSON(t *testing.T) {
	const golden = "testdata/report.json"
	r := mustScore(t, theatre(3, 3, 6, 2), fitted(jitter{1}), classify.Options{
		Protocol: classify.Pooled, PerTake: 8, Method: "jitter", TakesPerLabel: 2, Repeats: 4, Seed: 7, Normalise: template.ZScore, Band: 0.25,
	})
	got, err := json.MarshalIndent(r, "", "  ")
	if err != nil {
		t.Fatal(err)
	}
	got = append(got, '\n')
	if *update {
		if err := os.WriteFile(golden, got, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(string(want), string(got)); diff != "" {
		t.Errorf("report (-want +got):\n%s", diff)
	}
}

// TestReportAddsUp checks the figures of a report against each other.
func TestReportAddsUp(t *testing.T) {
	r := mustScore(t, theatre(4, 3, 4, 2), fitted(jitter{1}), classify.Options{Distances: template.Distances(), PerTake: 5})
	if len(r.Results) != 2*len(template.Distances()) {
		t.Fatalf("%d results for %d distances", len(r.Results), len(template.Distances()))
	}
	for i, x := range r.Results {
		tested, errs := 0, 0
		for _, l := range x.PerLabel {
			tested += l.Tested
			if x.Origin == classify.FromRecorded {
				errs += l.Recorded
			} else {
				errs += *l.Synthetic
			}
		}
		if tested != x.Tested || errs != x.Errors || x.Tested != 48 || x.Takes != 48 {
			t.Errorf("%s, %s: %d errors of %d by label, %d of %d in all", x.Distance, x.Origin, errs, tested, x.Errors, x.Tested)
		}
		if x.Low > x.Error || x.High < x.Error || x.Accuracy+x.Error < 0.9999 || x.Accuracy+x.Error > 1.0001 {
			t.Errorf("%s, %s: accuracy %g, error %g in %g to %g", x.Distance, x.Origin, x.Accuracy, x.Error, x.Low, x.High)
		}
		if i%2 == 1 {
			before := r.Results[i-1]
			if *x.Helped-*x.Hurt != before.Errors-x.Errors { // one test per take
				t.Errorf("%s: helped %d and hurt %d, but errors go from %d to %d", x.Distance, *x.Helped, *x.Hurt, before.Errors, x.Errors)
			}
			if p := statistic.McNemar(*x.Helped, *x.Hurt); *x.P < 0.999*p || *x.P > 1.001*p {
				t.Errorf("%s: p %g, want %g", x.Distance, *x.P, p)
			}
		}
	}
}

// TestRecordedOnly scores without synthetic takes: one result per distance.
func TestRecordedOnly(t *testing.T) {
	r := mustScore(t, theatre(3, 3, 2, 0.1), nil, classify.Options{})
	for _, x := range r.Results {
		if x.Origin != classify.FromRecorded || x.Method != "none" || x.P != nil || x.Reduction != nil || x.Helped != nil {
			t.Errorf("result of recorded takes alone: %+v", x)
		}
	}
	want := "Recorded takes alone give euclidean-dependent errors of 0 in 18 tests (error 0.0 %, 95 % interval 0.0 to 17.6 %); no synthetic takes were made."
	if len(r.Results) != 2 || r.Verdict != want {
		t.Errorf("%d results and the verdict %q, want 2 and %q", len(r.Results), r.Verdict, want)
	}
}

// mirror makes perfect takes for tested takes by looking them up: an invented
// maker, to see the verdict when synthetic takes do help; or of another label,
// when they hurt.
func mirror(takes []*channels.Take, same bool) classify.Fit {
	return fitted(makerFunc(func(source *channels.Take, n int) ([]*channels.Take, error) {
		var out []*channels.Take
		for _, t := range takes {
			if t.Split == channels.Test && (t.Label == source.Label) == same && len(out) < n {
				c := *t
				c.ID, c.Made = "made from "+t.ID, &channels.Making{Source: source.ID}
				out = append(out, &c)
			}
		}
		return out, nil
	}))
}

func TestVerdict(t *testing.T) {
	takes := split(theatre(4, 3, 6, 3))
	for _, c := range []struct {
		fit  classify.Fit
		want string
	}{
		{mirror(takes, true), "Synthetic takes help: with euclidean-dependent, 14 errors in 24 tests become 0 (error 0.0 %, 95 % interval 0.0 to 13.8 %, p = 0.00012); synthetic takes help with dtw-dependent, "},
		{mirror(takes, false), "Synthetic takes hurt: with euclidean-dependent, 14 errors in 24 tests become 24 (error 100.0 %, 95 % interval 86.2 to 100.0 %, p = 0.002); synthetic takes hurt with dtw-dependent, "},
		{fitted(jitter{0}), "No difference shown: with euclidean-dependent, 14 errors in 24 tests become 14 (error 58.3 %, 95 % interval 38.8 to 75.5 %, p = 1); no difference shown with dtw-dependent, "},
	} {
		if r := mustScore(t, takes, c.fit, classify.Options{PerTake: 40}); !strings.HasPrefix(r.Verdict, c.want) {
			t.Errorf("verdict\n%s\nwant\n%s", r.Verdict, c.want)
		}
	}
}

// TestNoErrorToSave has a score without errors that synthetic takes spoil:
// there is no reduction to speak of, and the verdict holds.
func TestNoErrorToSave(t *testing.T) {
	takes := split(theatre(4, 3, 6, 0.05))
	r := mustScore(t, takes, mirror(takes, false), classify.Options{PerTake: 40})
	if x := r.Results[1]; r.Results[0].Errors != 0 || x.Errors != 24 || x.Reduction != nil {
		t.Errorf("%d errors become %d, reduction %v", r.Results[0].Errors, x.Errors, x.Reduction)
	}
	if !strings.HasPrefix(r.Verdict, "Synthetic takes hurt") {
		t.Errorf("verdict %q", r.Verdict)
	}
}

func TestNotes(t *testing.T) {
	lonely := theatre(3, 3, 2, 0.1) // a cue of one puppeteer
	for _, x := range lonely {
		if x.Label == "cue2" {
			x.Subject = "puppeteer1"
		}
	}
	single := append(theatre(2, 2, 2, 0.1), theatre(3, 1, 1, 0.1)[2]) // a cue of one take
	for name, c := range map[string]struct {
		takes []*channels.Take
		fit   classify.Fit
		o     classify.Options
		want  []string
	}{
		"nothing to say": {theatre(2, 3, 2, 0.1), fitted(jitter{1}), classify.Options{PerTake: 2}, []string{}},
		"label of one subject": {lonely, nil, classify.Options{}, []string{
			"Tested without any training take of the label, so always counted as errors: cue2 (6 takes).",
		}},
		"label of one take, people on both sides": {single, nil, classify.Options{}, []string{
			"Trained but never tested: cue2 (1 take).",
			"2 subjects both train and are tested: a person never recorded will be recognised less well; protocol subject keeps people apart.",
			"The splits repeat 10 times over the same takes: intervals and p count each take once.",
		}},
		"shortfall": {theatre(2, 3, 2, 0.1), fitted(makerFunc(func(s *channels.Take, n int) ([]*channels.Take, error) {
			return jitter{1}.Make(s, n-1)
		})), classify.Options{PerTake: 2}, []string{"24 synthetic takes fewer than asked for could be made."}},
	} {
		if diff := cmp.Diff(c.want, mustScore(t, c.takes, c.fit, c.o).Notes); diff != "" {
			t.Errorf("%s: notes (-want +got):\n%s", name, diff)
		}
	}
}

func TestSampleDoesNotDependOnOrder(t *testing.T) {
	takes := split(theatre(3, 4, 9, 1))
	keep := func(takes []*channels.Take, seed uint64) []string {
		s := classify.NewSample(5, seed)
		for _, x := range takes {
			s.Add(x)
		}
		if got, want := len(s.Takes())+s.LeftOut(), len(takes); got != want {
			t.Errorf("%d takes are kept or left out, of %d", got, want)
		}
		var ids []string
		for _, x := range s.Takes() {
			ids = append(ids, x.ID)
		}
		return ids
	}
	forward := keep(takes, 1)
	if len(forward) != 3*2*5 { // labels, splits, most
		t.Errorf("%d takes kept, want 30", len(forward))
	}
	if !slices.IsSortedFunc(forward, func(a, b string) int { return place(takes, a) - place(takes, b) }) {
		t.Error("the takes kept are not in the order in which they came")
	}
	turned := slices.Clone(takes)
	slices.Reverse(turned)
	backward := keep(turned, 1)
	slices.Reverse(backward)
	if diff := cmp.Diff(forward, backward); diff != "" {
		t.Errorf("takes kept depend on the order (-forward +backward):\n%s", diff)
	}
	if cmp.Equal(forward, keep(takes, 2)) {
		t.Error("another seed keeps the same takes")
	}
}

func place(takes []*channels.Take, id string) int {
	return slices.IndexFunc(takes, func(t *channels.Take) bool { return t.ID == id })
}

func TestSampleScore(t *testing.T) {
	takes := theatre(3, 3, 4, 1)
	s := classify.NewSample(6, 1)
	for _, x := range takes {
		s.Add(x)
	}
	got, err := s.Score(t.Context(), fitted(jitter{1}), classify.Options{PerTake: 2}, nil)
	if err != nil {
		t.Fatal(err)
	}
	note := "Scored on a sample: 18 of 36 takes were left out, at most 6 kept per label and split."
	if !slices.Contains(got.Notes, note) {
		t.Errorf("notes %q lack %q", got.Notes, note)
	}
	want := mustScore(t, s.Takes(), fitted(jitter{1}), classify.Options{PerTake: 2})
	want.Notes = append(want.Notes, note)
	if diff := cmp.Diff(want, got); diff != "" {
		t.Errorf("score of a sample and of its takes (-takes +sample):\n%s", diff)
	}
	s.Shrink(2)
	s.Shrink(4) // does nothing: what was let go is gone
	if n := len(s.Takes()); n != 6 {
		t.Errorf("%d takes of 3 labels left after shrinking to 2", n)
	}
}
