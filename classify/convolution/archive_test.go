package convolution_test

import (
	"fmt"
	"math"
	"testing"

	"strandwise/channels"
	"strandwise/classify/convolution"
	"strandwise/testdata/opendata"
)

// archive holds accuracies on the splits of the archive. Both are there for
// their magnitude only: the published learner has 10 000 kernels, takes as
// long as they are and a chosen strength.
//
// convolution: the published learner on takes as they are, mean over 30
// resamples; Ruiz et al., Data Mining and Knowledge Discovery 35 (2021)
// 401–449 (memory).
//
// template: nearest template, euclidean-dependent, z-normalised; Shifaz,
// Pelletier, Petitjean, Webb, Knowledge and Information Systems (2023), arXiv
// 2102.10231. The set without one is z-normalised as it is: as is.
var archive = []struct {
	set                   string
	convolution, template float64
}{
	{"BasicMotions", 0.99, 0.7250},
	{"Epilepsy", 0.99, 0.7319},
	{"Libras", 0.91, 0.7056},
	{"NATOPS", 0.89, 0.7056},
	{"UWaveGestureLibrary", 0.94, 0.8750},
}

// TestArchive is a sanity check on recorded takes, with defaults: takes as
// they are do about as well as published, and normalised ones do better than
// a nearest template.
func TestArchive(t *testing.T) {
	const magnitude = 0.05
	for _, a := range archive {
		var training, test []*channels.Take
		for _, x := range opendata.Set(t, a.set) {
			if x.Split == channels.Test {
				test = append(test, x)
			} else {
				training = append(training, x)
			}
		}
		raw := accuracy(t, convolution.Options{Normalise: convolution.AsIs}, training, test)
		if math.Abs(raw-a.convolution) > magnitude {
			t.Errorf("%s as is: accuracy %.3f, published %.2f", a.set, raw, a.convolution)
		}
		z := accuracy(t, convolution.Options{}, training, test)
		if z <= a.template {
			t.Errorf("%s: accuracy %.3f, of the nearest template %.3f", a.set, z, a.template)
		}
		t.Logf("%-20s as is %.3f, z %.3f", a.set, raw, z)
	}
}

// accuracy returns the share of test takes told right.
func accuracy(t *testing.T, o convolution.Options, training, test []*channels.Take) float64 {
	t.Helper()
	numbers := make(map[string]int)
	number := func(x *channels.Take) int {
		if _, known := numbers[x.Label]; !known {
			numbers[x.Label] = len(numbers)
		}
		return numbers[x.Label]
	}
	labels := make([]int, len(training))
	for i, x := range training {
		labels[i] = number(x)
	}
	k := newKernels(t, o, training[0].Width(), 1)
	trainer := convolution.Ridge{}.Trainer(k.Width(), labels)
	for i, x := range training {
		trainer.Offer(i, features(t, k, x))
	}
	m, err := trainer.Train()
	if err != nil {
		t.Fatal(fmt.Errorf("train: %w", err))
	}
	right := 0
	for _, x := range test {
		if m.Predict(features(t, k, x)) == number(x) {
			right++
		}
	}
	return float64(right) / float64(len(test))
}
