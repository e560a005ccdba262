package classify

import (
	"context"
	"fmt"
	"sync/atomic"

	"strandwise/channels"
)

// split is one fold at work.
type split struct {
	*run
	fold     *fold
	lesson   Lesson
	training []*channels.Take
	studies  []Study // per learner
	makers   []Maker // per method
	next     atomic.Int64
}

// work deals with training takes until none is left.
func (s *split) work(ctx context.Context, turns turns) error {
	workers := make([]Worker, len(s.studies))
	for i, study := range s.studies {
		workers[i] = study.Worker()
	}
	for {
		i := int(s.next.Add(1)) - 1
		if i >= len(s.training) {
			return nil
		}
		if err := turns.take(ctx); err != nil {
			return err
		}
		err := s.deal(i, workers)
		if err == nil {
			s.advance()
		}
		turns.give()
		if err != nil {
			return err
		}
	}
}

// deal lets the learners learn from training take i, and from what each method
// makes from it.
func (s *split) deal(i int, workers []Worker) error {
	parts := [][]Example{{{Take: s.training[i], Order: i}}}
	for m := range s.makers {
		made, err := s.make(m, i)
		if err != nil {
			return err
		}
		parts = append(parts, s.cut(made)...)
	}
	for _, w := range workers {
		if err := w.Learn(i, parts); err != nil {
			return err
		}
	}
	return nil
}

// make returns what a method makes from training take i. Recorded examples come
// first in the order of all, as in a set that synthetic takes were added to.
func (s *split) make(method, i int) ([]Example, error) {
	source, n := s.training[i], s.options.PerTake
	made, err := s.makers[method].Make(source, n)
	if err != nil {
		return nil, fmt.Errorf("make takes from %s%s: %w", source.ID, from(source), err)
	}
	if len(made) > n {
		panic("classify: maker returned more takes than asked for")
	}
	s.shortfall[method].Add(int64(n - len(made)))
	examples := make([]Example, len(made))
	for k, t := range made {
		examples[k] = Example{Take: t, Order: len(s.training) + i*n + k}
	}
	return examples, nil
}

// cut cuts examples where a part ends.
func (s *split) cut(examples []Example) [][]Example {
	ends := s.options.ends()
	parts, begin := make([][]Example, len(ends)), 0
	for i, end := range ends {
		end = min(end, len(examples))
		parts[i] = examples[begin:end]
		begin = end
	}
	return parts
}

// answers asks the learners about every take tested.
func (s *split) answers() ([]answers, error) {
	out := make([]answers, len(s.studies))
	for l, study := range s.studies {
		said, err := study.Recognise()
		if err != nil {
			return nil, fmt.Errorf("%s: %w", s.learners[l].Name(), err)
		}
		a := &out[l]
		for v := range s.variants {
			a.work = append(a.work, study.Work(v))
			a.label = append(a.label, s.places(said[v][:len(s.fold.test)]))
			a.distance = append(a.distance, nil)
			if s.options.Reject && s.whole(v) {
				a.distance[v] = said[v]
			}
		}
	}
	return out, nil
}

// places returns the labels answered as places among the names.
func (s *split) places(said []Answer) []int32 {
	out := make([]int32, len(said))
	for i, a := range said {
		out[i] = int32(s.place[a.Label])
	}
	return out
}
