package classify

import (
	"context"
	"errors"
	"fmt"
	"slices"
	"sync"
	"sync/atomic"

	"golang.org/x/sync/errgroup"

	"strandwise/channels"
)

// run is one scoring under way.
type run struct {
	takes    []*channels.Take
	methods  []Method
	options  Options
	learners []Learner
	folds    []fold
	variants []variant
	names    []string       // of the labels, sorted
	place    map[string]int // of a label among them
	people   map[string]int // the units of resampling; nil when those are takes

	answers   [][]answers    // per fold and learner; nil while the fold is not done
	shortfall []atomic.Int64 // per method: synthetic takes that could not be made

	progress func(done, total int)
	mu       sync.Mutex // guards done, and calls of progress
	done     int
	total    int
}

// variant is one set of templates: recorded ones, and perhaps as many synthetic
// ones per recorded one of a method.
type variant struct {
	method  int // −1 for recorded ones alone
	perTake int
	parts   []int // of what a study learns from; each variant adds one
}

// answers is what one learner answered in one fold.
type answers struct {
	label    [][]int32 // per variant and take tested, the label's place
	work     []Work    // per variant
	distance [][]Answer
}

func newRun(takes []*channels.Take, methods []Method, o Options, folds []fold, progress func(done, total int)) *run {
	r := &run{
		takes: takes, methods: methods, options: o, learners: o.learners(), folds: folds, progress: progress,
		names: distinct(takes, labelOf), place: make(map[string]int),
		answers: make([][]answers, len(folds)), shortfall: make([]atomic.Int64, len(methods)),
	}
	for i, name := range r.names {
		r.place[name] = i
	}
	r.variants = []variant{{method: -1, parts: []int{0}}}
	parts := 1
	for m := range methods {
		v := variant{method: m, parts: []int{0}}
		for _, end := range o.ends() {
			v.perTake, v.parts = end, append(slices.Clone(v.parts), parts)
			r.variants = append(r.variants, v)
			parts++
		}
	}
	for _, f := range folds {
		r.total += len(f.training)
	}
	r.people = peopleOf(takes, folds)
	return r
}

// peopleOf numbers the subjects tested when there are enough to resample them
// and every take tested names one; else it returns nil.
func peopleOf(takes []*channels.Take, folds []fold) map[string]int {
	people := make(map[string]int)
	for _, f := range folds {
		for _, i := range f.test {
			if takes[i].Subject == "" {
				return nil
			}
			number(people, takes[i].Subject)
		}
	}
	if len(people) < enough {
		return nil
	}
	return people
}

// unit returns the number of the unit a take belongs to: its subject or itself.
func (r *run) unit(place int) int {
	if r.people == nil {
		return place
	}
	return r.people[r.takes[place].Subject]
}

// pick returns the takes at the given places.
func (r *run) pick(places []int) []*channels.Take {
	out := make([]*channels.Take, len(places))
	for i, p := range places {
		out[i] = r.takes[p]
	}
	return out
}

// turns are the right to compute, as many at a time as there are workers.
type turns chan struct{}

// take waits for a turn. The error is that of a context that ended.
func (t turns) take(ctx context.Context) error {
	select {
	case t <- struct{}{}:
	case <-ctx.Done():
		return ctx.Err()
	}
	if err := ctx.Err(); err != nil {
		t.give()
		return err
	}
	return nil
}

func (t turns) give() { <-t }

// work scores every fold. Several are under way at a time, as many as keep all
// workers busy and one more, so that memory does not grow with the number of
// folds.
func (r *run) work(ctx context.Context) error {
	least := len(r.takes)
	for _, f := range r.folds {
		least = min(least, len(f.training))
	}
	turns := make(turns, r.options.Workers)
	g, ctx := errgroup.WithContext(ctx)
	g.SetLimit((r.options.Workers+least-1)/least + 1)
	for i := range r.folds {
		g.Go(func() error { return r.fold(ctx, turns, i) })
	}
	return g.Wait()
}

// fold scores one fold.
func (r *run) fold(ctx context.Context, turns turns, i int) error {
	s, err := r.begin(ctx, turns, &r.folds[i])
	if err != nil {
		return err
	}
	g, inner := errgroup.WithContext(ctx)
	for range min(r.options.Workers, len(s.training)) {
		g.Go(func() error { return s.work(inner, turns) })
	}
	if err := g.Wait(); err != nil {
		return err
	}
	if err := turns.take(ctx); err != nil {
		return err
	}
	defer turns.give()
	r.answers[i], err = s.answers()
	return err
}

// begin prepares one fold: the learners, and a maker of each method, which is
// fitted on a copy of the list of training takes, so that nothing it does to
// it touches the learners.
func (r *run) begin(ctx context.Context, turns turns, f *fold) (*split, error) {
	if err := turns.take(ctx); err != nil {
		return nil, err
	}
	defer turns.give()
	s := &split{run: r, fold: f, training: r.pick(f.training)}
	s.lesson = Lesson{
		Training: s.training, Test: r.pick(f.test), Rest: r.options.Rest,
		Parts: len(r.variants), PerTake: r.options.PerTake, Reject: r.options.Reject,
	}
	for _, v := range r.variants {
		s.lesson.Sets = append(s.lesson.Sets, v.parts)
	}
	for _, l := range r.learners {
		study, err := l.Begin(s.lesson)
		if err != nil {
			return nil, err
		}
		s.studies = append(s.studies, study)
	}
	for _, m := range r.methods {
		maker, err := m.Fit(r.pick(f.training))
		if err != nil {
			return nil, fmt.Errorf("measure variation: %w", err)
		}
		s.makers = append(s.makers, maker)
	}
	return s, nil
}

// advance counts one more training take.
func (r *run) advance() {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.done++
	if r.progress != nil {
		r.progress(r.done, r.total)
	}
}

// finished returns the folds that are done.
func (r *run) finished() []fold {
	var out []fold
	for i, f := range r.folds {
		if r.answers[i] != nil {
			out = append(out, f)
		}
	}
	return out
}

// interrupted says whether an error is that of a context that ended.
func interrupted(ctx context.Context, err error) bool {
	return err != nil && ctx.Err() != nil && errors.Is(err, ctx.Err())
}
