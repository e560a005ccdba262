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
	"strandwise/classify/convolution"
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
	r, err := classify.Compare(t.Context(), theatre(3, 3, 6, 2), []classify.Method{
		{Name: "jitter", Fit: fitted(jitter{1})}, {Name: "strong jitter", Fit: fitted(jitter{3})},
	}, classify.Options{
		Protocol: classify.Pooled, TakesPerLabel: []int{2}, Repeats: 6, Seed: 7, PerTake: 8, Curve: []int{0, 4}, Reject: true,
		Distances: []template.Distance{template.DTWDependent}, Normalise: template.ZScore, Band: 0.25,
		Learners: []classify.Learner{classify.Convolution(convolution.Options{Kernels: 20, Length: 12}, convolution.Ridge{}, 7)},
	}, nil)
	if err != nil {
		t.Fatal(err)
	}
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
		seen, right := 0, 0
		for i, row := range x.Confusion {
			for j, n := range row {
				seen += n
				if i == j {
					right += n
				}
			}
		}
		if seen != x.Tested || right != x.Tested-x.Errors {
			t.Errorf("%s, %s: the confusion matrix holds %d tests, %d of them right, want %d and %d", x.Distance, x.Origin, seen, right, x.Tested, x.Tested-x.Errors)
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
			if !(*x.ReductionLow <= *x.Reduction && *x.Reduction <= *x.ReductionHigh) {
				t.Errorf("%s: reduction %g in %g to %g", x.Distance, *x.Reduction, *x.ReductionLow, *x.ReductionHigh)
			}
			if o := r.Overall[i/2]; o.Recorded != before.Errors || o.Errors != x.Errors || *o.P != *x.P || o.Finding != x.Finding {
				t.Errorf("%s: overall %+v of one number of takes per label, result %+v", x.Distance, o, x)
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
		{mirror(takes, true), "Synthetic takes help: with euclidean-dependent, 14 errors in 24 tests become 0 (reduction 100.0 %, 95 % interval 70.7 to 100.0 %, p = 0.00012); they help with dtw-dependent, "},
		{mirror(takes, false), "Synthetic takes hurt: with euclidean-dependent, 14 errors in 24 tests become 24 (reduction -71.4 %, 95 % interval -166.7 to -26.3 %, p = 0.002); they hurt with dtw-dependent, "},
		{fitted(jitter{0}), "No difference shown: with euclidean-dependent, 14 errors in 24 tests become 14 (reduction 0.0 %, 95 % interval -19.8 to 21.5 %, p = 1); no difference shown with dtw-dependent, "},
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
			"Takes are tested up to 7 times: intervals resample splits and takes, and p flips signs by take and by split, whichever shows less.",
		}},
		"fewer takes than asked for": {theatre(2, 3, 2, 0.1), nil, classify.Options{Protocol: classify.Subject, TakesPerLabel: []int{3, 9}}, []string{
			"Takes are tested up to 2 times: intervals resample splits and takes, and p flips signs by take; 3 random splits are too few to tell how far the draw decides (6 or more would).",
			"Trained on fewer takes than asked for in some splits, at worst by: cue0 (5 takes), cue1 (5 takes).",
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

// TestLabelsAreCorrected checks the p of each label against McNemar's test and
// Holm's correction, and that it names the label that was harmed.
func TestLabelsAreCorrected(t *testing.T) {
	takes := split(theatre(4, 4, 8, 0.3))
	harm := fitted(makerFunc(func(source *channels.Take, n int) ([]*channels.Take, error) {
		if source.Label != "cue1" {
			return jitter{0}.Make(source, n)
		}
		var out []*channels.Take // every tested take of another cue, under this cue's name
		for _, x := range takes {
			if x.Split == channels.Test && x.Label == "cue2" && len(out) < n {
				c := *x
				out = append(out, &c)
			}
		}
		return out, nil
	}))
	x := mustScore(t, takes, harm, classify.Options{PerTake: 40}).Results[1]
	var ps []float64
	for _, l := range x.PerLabel {
		ps = append(ps, statistic.McNemar(0, *l.Synthetic-l.Recorded))
	}
	for i, p := range statistic.Holm(ps) {
		l, want := x.PerLabel[i], classify.NoDifference
		if l.Label == "cue2" {
			want = classify.Hurts
		}
		if *l.P < 0.999*p || *l.P > 1.001*p || l.Finding != want {
			t.Errorf("%s: %d errors become %d, p %g and %q, want %g and %q", l.Label, l.Recorded, *l.Synthetic, *l.P, l.Finding, p, want)
		}
	}
}

// TestWorkIsCounted counts the cells of every table one by one.
func TestWorkIsCounted(t *testing.T) {
	takes := split(theatre(2, 3, 3, 1))
	for i, x := range takes { // of different lengths
		x.Time, x.Data = x.Time[:12-i%4], x.Data[:2*(12-i%4)]
	}
	for d, cell := range map[template.Distance]func(n, m int) int{
		template.DTWDependent:         func(n, m int) int { return inBand(n, m, 0.25) },
		template.DTWIndependent:       func(n, m int) int { return 2 * inBand(n, m, 0.25) },
		template.EuclideanDependent:   func(int, int) int { return 12 },
		template.EuclideanIndependent: func(int, int) int { return 12 },
		template.DirectionCosine:      func(int, int) int { return 16 },
	} {
		r := mustScore(t, takes, fitted(jitter{1}), classify.Options{Distances: []template.Distance{d}, Band: 0.25, PerTake: 3})
		pairs, cells := int64(0), int64(0)
		for _, x := range takes {
			for _, y := range takes {
				if x.Split == channels.Train && y.Split == channels.Test {
					pairs++
					cells += int64(cell(x.Frames(), y.Frames()))
				}
			}
		}
		if a, b := r.Results[0], r.Results[1]; a.Comparisons != pairs || a.Cells != cells || b.Comparisons != 4*pairs || b.Cells != 4*cells {
			t.Errorf("%s: %d comparisons and %d cells, with synthetic takes %d and %d; want %d and %d, and four times that", d, a.Comparisons, a.Cells, b.Comparisons, b.Cells, pairs, cells)
		}
	}
}

// inBand counts the cells of a table that lie in the band.
func inBand(n, m int, band float64) int {
	half, cells := template.Metric{Band: band}.HalfWidth(n, m), 0
	for i := range n {
		for j := range m {
			if max(i-j, j-i) <= half {
				cells++
			}
		}
	}
	return cells
}
