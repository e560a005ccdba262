package realism

import (
	"fmt"
	"math/rand/v2"

	"strandwise/channels"
	"strandwise/classify/convolution"
	"strandwise/classify/statistic"
)

// Witness says how often a classifier told recorded takes from synthetic ones
// it had not met.
type Witness struct {
	Sources  int     `json:"sources"` // recorded takes, each with what was made from it
	Tests    int     `json:"tests"`   // half of them of recorded takes
	Accuracy float64 `json:"accuracy"`
	Low      float64 `json:"low"` // Wilson's 95 % interval, which counts every source once
	High     float64 `json:"high"`
}

// described is a source take in the witness's features.
type described struct {
	label    int
	recorded []float64
	made     [][]float64
	fold     int
}

// streams of the witness's generator.
const (
	kernelStream = iota + 1
	foldStream
)

// witness describes takes and trains classifiers on them.
type witness struct {
	options Options
	kernels *convolution.Kernels
	worker  *convolution.Worker
}

func newWitness(o Options, width int) (*witness, error) {
	k, err := convolution.New(o.kernels(), width, rand.New(rand.NewPCG(o.Seed, kernelStream)))
	if err != nil {
		return nil, err
	}
	return &witness{o, k, k.Worker()}, nil
}

// describe returns the features of a laid take.
func (w *witness) describe(t *channels.Take) ([]float64, error) { return w.worker.Features(nil, t) }

// deal gives every source a fold, so that each has nearly as many of every
// label. The sources come label by label.
func (w *witness) deal(sources []described) {
	g := rand.New(rand.NewPCG(w.options.Seed, foldStream))
	for begin := 0; begin < len(sources); {
		end := begin
		for end < len(sources) && sources[end].label == sources[begin].label {
			end++
		}
		for i, p := range g.Perm(end - begin) {
			sources[begin+i].fold = p % w.options.Folds
		}
		begin = end
	}
}

// leastWitnessed is the number of sources below which a classifier has nothing
// to learn from.
const leastWitnessed = 4

// right returns, for every source, the share of tests of it and of what was
// made from it that a classifier trained on the other folds gets right; NaN
// for those without synthetic takes. Every trial holds each recorded take
// against one synthetic one, so that both are met equally often.
func (w *witness) right(sources []described) ([]float64, error) {
	right, tests := make([]float64, len(sources)), make([]float64, len(sources))
	for draw := range w.options.PerTake {
		for fold := range w.options.Folds {
			model, err := w.train(sources, draw, fold)
			if err != nil {
				return nil, err
			}
			if model == nil {
				continue
			}
			for i, s := range sources {
				if s.fold != fold || draw >= len(s.made) {
					continue
				}
				tests[i] += 2
				if model.Predict(s.recorded) == isRecorded {
					right[i]++
				}
				if model.Predict(s.made[draw]) == isSynthetic {
					right[i]++
				}
			}
		}
	}
	for i := range right {
		right[i] /= tests[i] // NaN where nothing was tested
	}
	return right, nil
}

const isRecorded, isSynthetic = 0, 1

// train fits a classifier to one draw of the sources of all folds but one; nil
// when there are none.
func (w *witness) train(sources []described, draw, without int) (*convolution.Model, error) {
	var labels []int
	var rows [][]float64
	for _, s := range sources {
		if s.fold != without && draw < len(s.made) {
			rows = append(rows, s.recorded, s.made[draw])
			labels = append(labels, isRecorded, isSynthetic)
		}
	}
	if len(rows) == 0 {
		return nil, nil
	}
	trainer := convolution.Ridge{}.Trainer(w.kernels.Width(), labels)
	for i, row := range rows {
		trainer.Offer(i, row)
	}
	model, err := trainer.Train()
	if err != nil {
		return nil, fmt.Errorf("train witness: %w", err)
	}
	return model, nil
}

// sum sums up the shares of sources; nil when too few were tested.
func (w *witness) sum(right []float64) *Witness {
	c, n := change(right)
	if n < leastWitnessed {
		return nil
	}
	out := &Witness{Sources: n, Tests: 2 * n * w.options.PerTake, Accuracy: c.Mean}
	out.Low, out.High = statistic.Wilson(c.Mean, n, level)
	return out
}

// level is that of every interval.
const level = 0.95
