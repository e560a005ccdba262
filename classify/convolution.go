package classify

import (
	"fmt"
	"math/rand/v2"
	"slices"

	"strandwise/classify/convolution"
)

// convolve is the learner of [Convolution].
type convolve struct {
	options convolution.Options
	ridge   convolution.Ridge
	seed    uint64
}

// Convolution returns the learner that describes takes by random convolution
// kernels, drawn from the seed, and tells labels apart by ridge regression. It
// shares nothing with nearest templates. The options and the strength must be
// valid.
func Convolution(o convolution.Options, r convolution.Ridge, seed uint64) Learner {
	return convolve{o, r, seed}
}

// Name is "convolution", with the normalisation when it is not the usual one.
func (c convolve) Name() string {
	if c.options.Normalise == convolution.AsIs {
		return "convolution-raw"
	}
	return "convolution"
}

// kernelStream keeps the draw of kernels apart from those of splits.
const kernelStream = 1 << 34

// convolveStudy describes every take once and trains a model for each set.
type convolveStudy struct {
	lesson   Lesson
	kernels  *convolution.Kernels
	names    []string
	trainers []*convolution.Trainer // per set
}

// Begin draws the kernels, the same in every split.
func (c convolve) Begin(l Lesson) (Study, error) {
	kernels, err := convolution.New(c.options, l.Training[0].Width(), rand.New(rand.NewPCG(c.seed, kernelStream)))
	if err != nil {
		return nil, err
	}
	s := &convolveStudy{lesson: l, kernels: kernels, names: distinct(l.Training, labelOf)}
	labels := make([]int, len(l.Training))
	for i, t := range l.Training {
		labels[i], _ = slices.BinarySearch(s.names, t.Label)
	}
	for range l.Sets {
		s.trainers = append(s.trainers, c.ridge.Trainer(kernels.Width(), labels))
	}
	return s, nil
}

// convolveWorker describes takes.
type convolveWorker struct {
	study    *convolveStudy
	describe *convolution.Worker
	rows     [][]float64 // of features, per part
	block    []float64
}

// Worker returns a worker with scratch of its own.
func (s *convolveStudy) Worker() Worker {
	return &convolveWorker{study: s, describe: s.kernels.Worker(), rows: make([][]float64, s.lesson.Parts)}
}

// Learn describes the takes of one source and hands them to the trainers.
func (w *convolveWorker) Learn(source int, parts [][]Example) error {
	width := w.study.kernels.Width()
	for p, examples := range parts {
		w.rows[p] = slices.Grow(w.rows[p][:0], len(examples)*width)[:len(examples)*width]
		for i, e := range examples {
			if _, err := w.describe.Features(w.rows[p][i*width:(i+1)*width], e.Take); err != nil {
				return fmt.Errorf("convolution: %w", err)
			}
		}
	}
	for set, trainer := range w.study.trainers {
		w.block = w.block[:0]
		for _, p := range w.study.lesson.Sets[set] {
			w.block = append(w.block, w.rows[p]...)
		}
		trainer.Offer(source, w.block)
	}
	return nil
}

// Recognise trains a model for each set and predicts the label of every take.
func (s *convolveStudy) Recognise() ([][]Answer, error) {
	models, out := make([]*convolution.Model, len(s.trainers)), make([][]Answer, len(s.trainers))
	for set, trainer := range s.trainers {
		var err error
		if models[set], err = trainer.Train(); err != nil {
			return nil, err
		}
	}
	describe, features := s.kernels.Worker(), make([]float64, s.kernels.Width())
	for _, t := range slices.Concat(s.lesson.Test, s.lesson.Rest) {
		if _, err := describe.Features(features, t); err != nil {
			return nil, fmt.Errorf("test takes: %w", err)
		}
		for set, m := range models {
			out[set] = append(out[set], unmeasured(s.names[m.Predict(features)]))
		}
	}
	return out, nil
}

// Work counts nothing: there are no templates to compare with.
func (s *convolveStudy) Work(int) Work { return Work{} }
