package classify

import (
	"math"

	"strandwise/channels"
)

// Learner is a kind of recogniser that a score puts to the test. All learners
// of a score see the same lessons. See [NearestTemplate] and [Convolution].
type Learner interface {
	// Name is what reports call the learner.
	Name() string
	// Begin starts to learn in one split. The takes of the lesson are shared and
	// must not be changed. Several splits may be under way at a time.
	Begin(l Lesson) (Study, error)
}

// Lesson is what a learner is told of one split before it learns.
type Lesson struct {
	Training []*channels.Take // the recorded takes that train
	Test     []*channels.Take // the recorded takes to recognise
	Rest     []*channels.Take // takes that are no gesture; none unless Reject is set
	// Sets lists what the study will be asked about, by the parts each set
	// holds, so that one study serves every number of synthetic takes. Part 0
	// is the recorded takes, in every set; the others are runs of the synthetic
	// takes of each training take.
	Sets    [][]int
	Parts   int  // of what a study learns from
	PerTake int  // of each training take and method at most as many are made
	Reject  bool // whether answers should say how far takes are from anything known
}

// Study is one learner at work in one split.
type Study interface {
	// Worker returns a new worker, for one goroutine. Several may be at work at a
	// time.
	Worker() Worker
	// Recognise answers, for each set, for the takes tested, then for the rest,
	// in the order of the lesson. It is called once, when all workers are done.
	Recognise() ([][]Answer, error)
	// Work says what a plain program would compute to recognise the takes
	// tested from the set.
	Work(set int) Work
}

// Worker takes in what a study learns from.
type Worker interface {
	// Learn takes in a training take, number source of the lesson, and what was
	// made from it, part by part. Every source is learned once, in any order,
	// which must not change an answer. Synthetic takes belong to the worker.
	Learn(source int, parts [][]Example) error
}

// Example is a take to learn from. Its label is that of its source, whatever
// it says itself.
type Example struct {
	Take  *channels.Take
	Order int // place among all there could be: recorded takes in order, then what is made from the first, …
}

// Answer is what a study says of one take.
type Answer struct {
	Label string
	// How far the take is from the nearest thing known, and from the nearest of
	// another label than its own; NaN when the learner measures no distance or
	// the lesson does not ask for it.
	Distance, Other float64
}

// Work counts what a plain program would compute. It does not depend on how
// much of that a fast one saves.
type Work struct {
	Comparisons int64 // pairs of takes held against each other
	Cells       int64 // cells of DTW tables in the band, or pairs of frames compared
}

// unmeasured is the answer of a learner that measures no distance.
func unmeasured(label string) Answer { return Answer{label, math.NaN(), math.NaN()} }

// source returns the place of the training take that the example of an order
// is, or was made from.
func (l Lesson) source(order int) int {
	if order < len(l.Training) {
		return order
	}
	return (order - len(l.Training)) / l.PerTake
}
