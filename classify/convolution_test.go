package classify_test

import (
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/channels"
	"strandwise/classify"
	"strandwise/classify/convolution"
	"strandwise/classify/template"
)

// small is a convolution learner for takes of a few frames.
func small() classify.Learner {
	return classify.Convolution(convolution.Options{Kernels: 60, Length: 12}, convolution.Ridge{}, 3)
}

// TestConvolutionAlone checks the second learner where the answer is plain:
// gestures far apart are told apart, and copies under another label are not.
func TestConvolutionAlone(t *testing.T) {
	o := classify.Options{Learners: []classify.Learner{small()}, PerTake: 3}
	r := mustScore(t, theatre(4, 3, 6, 0.05), fitted(jitter{0.05}), o)
	if len(r.Results) != 2 {
		t.Fatalf("%d results of one learner, want 2", len(r.Results))
	}
	for _, x := range r.Results {
		if x.Learner != "convolution" || x.Distance != "" || x.Errors != 0 || x.Comparisons != 0 || x.Rejection != nil {
			t.Errorf("result %+v", x)
		}
	}
	takes := split(theatre(4, 3, 6, 0.05))
	r = mustScore(t, takes, mirror(takes, false), classify.Options{Learners: []classify.Learner{small()}, PerTake: 40})
	if !strings.HasPrefix(r.Verdict, "Synthetic takes hurt: with convolution, 0 errors") {
		t.Errorf("verdict on takes of the wrong label: %s", r.Verdict)
	}
}

// TestConvolutionAgainstPlain trains a model by hand for each side.
func TestConvolutionAgainstPlain(t *testing.T) {
	takes := split(theatre(5, 3, 6, 2))
	const perTake = 4
	o := convolution.Options{Kernels: 60, Length: 12}
	r := mustScore(t, takes, fitted(jitter{0.7}), classify.Options{
		Learners: []classify.Learner{classify.Convolution(o, convolution.Ridge{Strength: 10}, 3)}, PerTake: perTake, Curve: []int{2},
	})
	got := []int{r.Results[0].Errors, r.Results[1].Curve[0].Errors, r.Results[1].Errors}
	var want []int
	for _, n := range []int{0, 2, perTake} {
		want = append(want, plainConvolution(t, takes, o, n))
	}
	if diff := cmp.Diff(want, got); diff != "" {
		t.Errorf("errors of recorded, 2 and %d synthetic takes (-plain +score):\n%s", perTake, diff)
	}
}

// plainConvolution returns the errors on the test split with n synthetic takes.
func plainConvolution(t *testing.T, takes []*channels.Take, o convolution.Options, n int) int {
	t.Helper()
	kernels, err := convolution.New(o, 2, classify.KernelGenerator(3))
	if err != nil {
		t.Fatal(err)
	}
	w := kernels.Worker()
	describe := func(x *channels.Take) []float64 {
		f, err := w.Features(nil, x)
		if err != nil {
			t.Fatal(err)
		}
		return f
	}
	var labels []int
	var blocks [][]float64
	for _, x := range takes {
		if x.Split != channels.Train {
			continue
		}
		labels = append(labels, int(x.Label[3]))
		made, _ := jitter{0.7}.Make(x, 4)
		block := describe(x)
		for _, y := range made[:n] {
			block = append(block, describe(y)...)
		}
		blocks = append(blocks, block)
	}
	trainer := convolution.Ridge{Strength: 10}.Trainer(kernels.Width(), labels)
	for i, b := range blocks {
		trainer.Offer(i, b)
	}
	model, err := trainer.Train()
	if err != nil {
		t.Fatal(err)
	}
	errs := 0
	for _, x := range takes {
		if x.Split == channels.Test && model.Predict(describe(x)) != int(x.Label[3]) {
			errs++
		}
	}
	return errs
}

// TestLearnersShareSplits scores both kinds together and apart.
func TestLearnersShareSplits(t *testing.T) {
	takes := theatre(4, 3, 4, 1.5)
	o := classify.Options{Protocol: classify.Pooled, TakesPerLabel: []int{1, 3}, Repeats: 6, PerTake: 3, Seed: 2}
	score := func(distances []template.Distance, learners ...classify.Learner) []classify.Result {
		o.Distances, o.Learners = distances, learners
		return mustScore(t, takes, fitted(jitter{0.5}), o).Results
	}
	both := score([]template.Distance{template.EuclideanDependent}, small())
	apart := slices.Concat(score([]template.Distance{template.EuclideanDependent}), score(nil, small()))
	if diff := cmp.Diff(apart, both); diff != "" {
		t.Errorf("learners apart and together (-apart +together):\n%s", diff)
	}
}

func TestConvolutionNames(t *testing.T) {
	raw := classify.Convolution(convolution.Options{Normalise: convolution.AsIs}, convolution.Ridge{}, 1)
	if a, b := small().Name(), raw.Name(); a != "convolution" || b != "convolution-raw" {
		t.Errorf("names %q and %q", a, b)
	}
}
