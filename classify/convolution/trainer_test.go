package convolution_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"sync"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/classify/convolution"
)

// cloud returns the features of one take of a label: noise, in which labels 0
// and 1 stand two deviations apart.
func cloud(g *rand.Rand, width, label int) []float64 {
	x := make([]float64, width)
	for j := range x {
		x[j] = g.NormFloat64() + 2/math.Sqrt(float64(width))*float64(label)
	}
	return x
}

func train(t *testing.T, r convolution.Ridge, width int, labels []int, blocks [][]float64) *convolution.Model {
	t.Helper()
	tr := r.Trainer(width, labels)
	for i, b := range blocks {
		tr.Offer(i, b)
	}
	m, err := tr.Train()
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// TestCopiesDoNotFool gives every recorded take near-copies. Left out row by
// row, each as if it were a recorded take of its own, they make next to no
// penalty look best, which serves new takes worse; left out with their source
// they do not. There are more rows than features
// in one problem, and fewer in the other.
func TestCopiesDoNotFool(t *testing.T) {
	for _, c := range []struct{ width, sources, copies int }{{60, 40, 12}, {90, 40, 1}} {
		width := c.width
		g := rand.New(rand.NewPCG(1, uint64(width)))
		var labels, single []int
		var blocks, rows [][]float64
		for s := range c.sources {
			x := cloud(g, width, s%2)
			block := slices.Clone(x)
			for range c.copies {
				for _, v := range x {
					block = append(block, v+0.01*g.NormFloat64())
				}
			}
			labels, blocks = append(labels, s%2), append(blocks, block)
			for ; len(block) > 0; block = block[width:] {
				single, rows = append(single, s%2), append(rows, block[:width])
			}
		}
		bySource := train(t, convolution.Ridge{Choose: true}, width, labels, blocks)
		byRow := train(t, convolution.Ridge{Choose: true}, width, single, rows)
		if byRow.Strength() > 1 || bySource.Strength() < 100 {
			t.Errorf("%d features: leaving out rows chose %g and sources %g, want at most 1 and at least 100", width, byRow.Strength(), bySource.Strength())
		}
		fooled, wise := 0, 0
		for i := range 2000 {
			x := cloud(g, width, i%2)
			if byRow.Predict(x) != i%2 {
				fooled++
			}
			if bySource.Predict(x) != i%2 {
				wise++
			}
		}
		if wise > fooled {
			t.Errorf("%d features: %d errors in 2000 with the strength of sources, %d with that of rows", width, wise, fooled)
		}
		t.Logf("%d features: by row strength %g, %d errors; by source strength %g, %d errors", width, byRow.Strength(), fooled, bySource.Strength(), wise)
	}
}

// TestOrderOfOffersDoesNotCount offers blocks from several goroutines, in
// several orders.
func TestOrderOfOffersDoesNotCount(t *testing.T) {
	const width, sources = 12, 30
	g := rand.New(rand.NewPCG(1, 5))
	labels, blocks := make([]int, sources), make([][]float64, sources)
	for s := range blocks {
		labels[s] = s % 3
		for range 1 + s%5 {
			blocks[s] = append(blocks[s], cloud(g, width, s%3)...)
		}
	}
	for _, r := range []convolution.Ridge{{}, {Choose: true}} {
		want := train(t, r, width, labels, blocks)
		for range 5 {
			tr := r.Trainer(width, labels)
			order := g.Perm(sources)
			var wg sync.WaitGroup
			for w := range 3 {
				wg.Go(func() {
					for i := w; i < sources; i += 3 {
						block := slices.Clone(blocks[order[i]])
						tr.Offer(order[i], block)
						clear(block) // it is the caller's again
					}
				})
			}
			wg.Wait()
			got, err := tr.Train()
			if err != nil {
				t.Fatal(err)
			}
			for _, b := range blocks {
				if !slices.Equal(want.Scores(nil, b[:width]), got.Scores(nil, b[:width])) {
					t.Fatalf("%+v: the model depends on the order of offers", r)
				}
			}
		}
	}
}

func TestNothingToChooseBy(t *testing.T) {
	blocks := [][]float64{{0, 1, 0, 1.1}, {1, 0, 1.1, 0}}
	if m := train(t, convolution.Ridge{Choose: true}, 2, []int{4, 7}, blocks); m.Strength() != 100 {
		t.Errorf("strength %g with one source per label, want the default of 100", m.Strength())
	}
	if m := train(t, convolution.Ridge{}, 2, []int{4, 7}, blocks); m.Strength() != 100 || m.Predict([]float64{0, 1}) != 4 || m.Predict([]float64{1, 0}) != 7 {
		t.Errorf("strength %g, scores %v", m.Strength(), m.Scores(nil, []float64{0, 1}))
	}
}

// TestDegenerate has features that say nothing: the most frequent label is
// predicted, and the least among equally frequent ones.
func TestDegenerate(t *testing.T) {
	same := []float64{3, 0.1}
	for _, c := range []struct {
		labels []int
		want   int
		scores []float64
	}{
		{[]int{5}, 5, []float64{1}},
		{[]int{5, 2, 5, 2}, 2, []float64{0, 0}},
		{[]int{2, 5, 5, 5}, 5, []float64{-0.5, 0.5}},
	} {
		blocks := slices.Repeat([][]float64{same}, len(c.labels))
		m := train(t, convolution.Ridge{}, 2, c.labels, blocks)
		if got := m.Predict([]float64{9, -9}); got != c.want {
			t.Errorf("labels %v: predicts %d, want %d", c.labels, got, c.want)
		}
		if diff := cmp.Diff(c.scores, m.Scores(nil, same)); diff != "" {
			t.Errorf("labels %v: scores (-want +got):\n%s", c.labels, diff)
		}
	}
}

func TestRidgeValidate(t *testing.T) {
	for _, c := range []struct {
		ridge convolution.Ridge
		says  string // part of the message, empty for a valid ridge
	}{
		{convolution.Ridge{}, ""},
		{convolution.Ridge{Strength: 0.5}, ""},
		{convolution.Ridge{Choose: true}, ""},
		{convolution.Ridge{Strength: 100, Choose: true}, "both given and to be chosen"},
		{convolution.Ridge{Strength: -1}, "ridge strength -1 is not above 0"},
		{convolution.Ridge{Strength: math.NaN()}, "ridge strength NaN"},
		{convolution.Ridge{Strength: math.Inf(1)}, "ridge strength +Inf"},
	} {
		err := c.ridge.Validate()
		if (err == nil) != (c.says == "") || err != nil && !strings.Contains(err.Error(), c.says) {
			t.Errorf("%+v: error %v, want it to say %q", c.ridge, err, c.says)
		}
		if err != nil {
			mustPanic(t, c.says, func() { c.ridge.Trainer(1, []int{0}) })
		}
	}
}

func TestTrainerPanics(t *testing.T) {
	two := func() *convolution.Trainer { return convolution.Ridge{}.Trainer(2, []int{0, 1}) }
	row := []float64{1, 2}
	mustPanic(t, "no features", func() { convolution.Ridge{}.Trainer(0, []int{0}) })
	mustPanic(t, "no sources", func() { convolution.Ridge{}.Trainer(2, nil) })
	mustPanic(t, "half a row", func() { two().Offer(0, []float64{1, 2, 3}) })
	mustPanic(t, "no row", func() { two().Offer(0, nil) })
	mustPanic(t, "unknown source", func() { two().Offer(2, row) })
	mustPanic(t, "counted twice", func() { tr := two(); tr.Offer(0, row); tr.Offer(0, row) })
	mustPanic(t, "waiting twice", func() { tr := two(); tr.Offer(1, row); tr.Offer(1, row) })
	mustPanic(t, "trained early", func() { tr := two(); tr.Offer(1, row); tr.Train() })
	m := train(t, convolution.Ridge{}, 2, []int{0, 1}, [][]float64{row, {2, 1}})
	mustPanic(t, "short scores", func() { m.Scores(make([]float64, 1), row) })
}

// TestRoundingIsNoFeature has a feature that differs between takes in its last
// digits only, in step with the label.
func TestRoundingIsNoFeature(t *testing.T) {
	for _, each := range []int{1, 4} { // two rows of two features, and eight
		labels, blocks := []int{0, 1}, [][]float64{nil, nil}
		for range each {
			blocks[0] = append(blocks[0], 1000, -1)
			blocks[1] = append(blocks[1], math.Nextafter(1000, 2000), 1)
		}
		m := train(t, convolution.Ridge{}, 2, labels, blocks)
		if a, b := m.Scores(nil, []float64{1000, -1}), m.Scores(nil, []float64{1001, -1}); !slices.Equal(a, b) {
			t.Errorf("%d rows: scores %v become %v with a feature that says nothing", 2*each, a, b)
		}
	}
}
