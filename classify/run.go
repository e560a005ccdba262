package classify

import (
	"context"
	"fmt"
	"sync"
	"sync/atomic"

	"golang.org/x/sync/errgroup"

	"strandwise/channels"
	"strandwise/classify/template"
)

// run is one scoring under way.
type run struct {
	takes     []*channels.Take
	fit       Fit
	options   Options
	folds     []fold
	outcomes  [][]outcome // per distance and take
	shortfall atomic.Int64

	progress func(done, total int)
	mu       sync.Mutex // guards done, and calls of progress
	done     int
	total    int
}

// outcome counts how often one take was tested, and with what result.
type outcome struct {
	tested    int
	recorded  int // errors with recorded templates
	synthetic int // errors with recorded and synthetic ones
}

func newRun(takes []*channels.Take, fit Fit, o Options, folds []fold, progress func(done, total int)) *run {
	r := &run{takes: takes, fit: fit, options: o, folds: folds, progress: progress, outcomes: make([][]outcome, len(o.Distances))}
	for d := range r.outcomes {
		r.outcomes[d] = make([]outcome, len(takes))
	}
	for _, f := range folds {
		r.total += len(f.training)
	}
	return r
}

// pick returns the takes at the given places.
func (r *run) pick(places []int) []*channels.Take {
	out := make([]*channels.Take, len(places))
	for i, p := range places {
		out[i] = r.takes[p]
	}
	return out
}

// fold tests the takes of one fold and counts the outcomes.
func (r *run) fold(ctx context.Context, f *fold) error {
	s := split{run: r, training: r.pick(f.training)}
	test := r.pick(f.test)
	for _, m := range r.options.metrics() {
		search, err := template.NewSearch(m, s.training, test)
		if err != nil {
			return fmt.Errorf("test takes: %w", err)
		}
		s.searches = append(s.searches, search)
	}
	if r.options.PerTake > 0 {
		// The maker learns from a copy of the list, so that nothing it does to
		// it touches the templates.
		maker, err := r.fit(r.pick(f.training))
		if err != nil {
			return fmt.Errorf("measure variation: %w", err)
		}
		s.maker = maker
	}
	if err := s.work(ctx); err != nil {
		return err
	}
	for d, search := range s.searches {
		for q, place := range f.test {
			recorded, all := search.Nearest(q)
			r.outcomes[d][place].count(r.takes[place].Label, s.label(recorded), s.label(all))
		}
	}
	return nil
}

func (o *outcome) count(truth, recorded, all string) {
	o.tested++
	if recorded != truth {
		o.recorded++
	}
	if all != truth {
		o.synthetic++
	}
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

// split is one fold at work.
type split struct {
	*run
	training []*channels.Take
	searches []*template.Search
	maker    Maker
	next     atomic.Int64 // the next training take to deal with
}

// work offers every training take, and what is made from it, to the searches.
func (s *split) work(ctx context.Context) error {
	g, ctx := errgroup.WithContext(ctx)
	for range min(s.options.Workers, len(s.training)) {
		workers := make([]*template.Worker, len(s.searches))
		for i, search := range s.searches {
			workers[i] = search.Worker()
		}
		g.Go(func() error {
			for {
				i := int(s.next.Add(1)) - 1
				if i >= len(s.training) {
					return nil
				}
				if err := ctx.Err(); err != nil {
					return err
				}
				if err := s.deal(i, workers); err != nil {
					return err
				}
				s.advance()
			}
		})
	}
	return g.Wait()
}

// deal makes takes from training take i and offers them with it.
func (s *split) deal(i int, workers []*template.Worker) error {
	block, err := s.block(i)
	if err != nil {
		return err
	}
	for _, w := range workers {
		if err := w.Offer(block); err != nil {
			return fmt.Errorf("templates: %w", err)
		}
	}
	return nil
}

// block returns training take i and the takes made from it as templates.
// Recorded ones come first in the order of all, as in a set that synthetic
// takes were added to.
func (s *split) block(i int) ([]template.Template, error) {
	source, n := s.training[i], s.options.PerTake
	block := append(make([]template.Template, 0, 1+n), template.Template{Take: source, Order: i})
	if n == 0 {
		return block, nil
	}
	made, err := s.maker.Make(source, n)
	if err != nil {
		return nil, fmt.Errorf("make takes from %s%s: %w", source.ID, from(source), err)
	}
	if len(made) > n {
		panic("classify: maker returned more takes than asked for")
	}
	s.shortfall.Add(int64(n - len(made)))
	for k, t := range made {
		block = append(block, template.Template{Take: t, Order: len(s.training) + i*n + k, Synthetic: true})
	}
	return block, nil
}

// label returns the label of the template of a match: that of the recorded
// take it is or was made from.
func (s *split) label(m template.Match) string {
	i := m.Order
	if i >= len(s.training) {
		i = (i - len(s.training)) / s.options.PerTake
	}
	return s.training[i].Label
}
