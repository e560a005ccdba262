package convolution_test

import (
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"strandwise/channels"
	"strandwise/classify/convolution"
)

// openSets returns the folder of the open sets, or skips the test.
func openSets(t *testing.T) string {
	t.Helper()
	dir := os.Getenv("STRANDWISE_DATA")
	if dir == "" {
		root, err := os.Getwd()
		if err != nil {
			t.Fatal(err)
		}
		for {
			if _, err := os.Stat(filepath.Join(root, "go.mod")); err == nil || root == filepath.Dir(root) {
				break
			}
			root = filepath.Dir(root)
		}
		dir = filepath.Join(root, "..", "shared", "data")
	}
	dir = filepath.Join(dir, "sets")
	if _, err := os.Stat(dir); err != nil {
		t.Skipf("the open recordings are absent: set STRANDWISE_DATA to their folder (%v)", err)
	}
	return dir
}

// readTakes reads a long CSV file with the columns take, label, subject,
// split, frame and one per channel. Frames count as seconds.
func readTakes(t *testing.T, path string) []*channels.Take {
	t.Helper()
	file, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	r := csv.NewReader(file)
	header, err := r.Read()
	if err != nil {
		t.Fatal(err)
	}
	const first = 5 // columns before the channels
	layout := layoutOf(len(header) - first)
	var takes []*channels.Take
	for {
		row, err := r.Read()
		if errors.Is(err, io.EOF) {
			return takes
		}
		if err != nil {
			t.Fatal(err)
		}
		if len(takes) == 0 || takes[len(takes)-1].ID != row[0] {
			takes = append(takes, &channels.Take{ID: strings.Clone(row[0]), Label: strings.Clone(row[1]), Layout: layout})
		}
		x := takes[len(takes)-1]
		x.Time = append(x.Time, float64(len(x.Time)))
		for _, field := range row[first:] {
			v, err := strconv.ParseFloat(field, 64)
			if err != nil {
				t.Fatal(err)
			}
			x.Data = append(x.Data, v)
		}
	}
}

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
	sets := openSets(t)
	for _, a := range archive {
		training := readTakes(t, filepath.Join(sets, a.set, "train.csv"))
		test := readTakes(t, filepath.Join(sets, a.set, "test.csv"))
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
