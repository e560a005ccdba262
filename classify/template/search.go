package template

import (
	"errors"
	"math"
	"sync"

	"strandwise/channels"
)

// Template is a take that queries are held against.
type Template struct {
	Take  *channels.Take
	Order int // place among all templates; the first of equally near ones wins
	// Synthetic templates count only for the match among all templates.
	Synthetic bool
}

// Match is a template found near a query.
type Match struct {
	Order    int     // the template's order; [NoTemplate] when none was offered
	Distance float64 // how far it is; infinite when none was offered
}

// NoTemplate is the order of a match when no template was offered.
const NoTemplate = math.MaxInt

func (m Match) before(o Match) bool {
	return m.Distance < o.Distance || m.Distance == o.Distance && m.Order < o.Order
}

// Search holds queries and remembers the nearest template of each, among the
// recorded templates and among all. Templates are offered by workers, in
// blocks, in any order; what is found does not depend on it. Memory holds the
// queries and one block per worker.
type Search struct {
	metric  Metric
	layout  *channels.Layout
	queries []series
	found   []found
}

// found is what is known of one query.
type found struct {
	sync.Mutex
	recorded, all Match
}

// NewSearch prepares the queries. A metric without a length takes that of the
// longest of the training takes, which must be the recorded ones; they are not
// kept, nor offered as templates. The error names the take that cannot be
// compared.
func NewSearch(m Metric, training, queries []*channels.Take) (*Search, error) {
	if err := m.Validate(); err != nil {
		return nil, err
	}
	if len(training) == 0 || len(queries) == 0 {
		return nil, errors.New("a search needs at least one training take and one query")
	}
	if m.Length == 0 {
		for _, t := range training {
			m.Length = max(m.Length, t.Frames())
		}
	}
	s := &Search{metric: m, layout: training[0].Layout, queries: make([]series, len(queries)), found: make([]found, len(queries))}
	p := newPreparer(m, s.layout)
	for i, t := range queries {
		if err := p.prepare(&s.queries[i], t); err != nil {
			return nil, err
		}
		none := Match{Order: NoTemplate, Distance: math.Inf(1)}
		s.found[i].recorded, s.found[i].all = none, none
	}
	return s, nil
}

// Nearest returns the nearest template offered so far to query i, among the
// recorded templates and among all of them.
func (s *Search) Nearest(i int) (recorded, all Match) {
	f := &s.found[i]
	f.Lock()
	defer f.Unlock()
	return f.recorded, f.all
}

// kernel returns the distance of two prepared takes, or any value above bound
// when the distance is above it.
type kernel func(w *Worker, a, b *series, bound float64) float64

func (d Distance) kernel() kernel {
	switch d {
	case EuclideanDependent:
		return euclideanDependent
	case EuclideanIndependent:
		return euclideanIndependent
	case DTWDependent:
		return dtwDependent
	case DTWIndependent:
		return dtwIndependent
	}
	return directionCosine
}

// Worker offers templates to a search. It holds the scratch of one goroutine;
// several workers may serve one search at a time.
type Worker struct {
	*preparer
	search  *Search
	compare kernel
	width   int
	block   []series
	row     []float64
}

// Worker returns a new worker for the search.
func (s *Search) Worker() *Worker {
	return &Worker{
		preparer: newPreparer(s.metric, s.layout),
		search:   s,
		compare:  s.metric.Distance.kernel(),
		width:    len(s.layout.Channels),
	}
}

// Offer holds every query against the templates, which are not kept. The error
// names the take that cannot be compared; the search is then incomplete.
func (w *Worker) Offer(block []Template) error {
	for len(w.block) < len(block) {
		w.block = append(w.block, series{})
	}
	for i, t := range block {
		if err := w.prepare(&w.block[i], t.Take); err != nil {
			return err
		}
	}
	for q := range w.search.queries {
		w.query(q, block)
	}
	return nil
}

// query holds one query against the prepared block.
func (w *Worker) query(q int, block []Template) {
	recorded, all := w.search.Nearest(q)
	for i, t := range block {
		bound := recorded.Distance
		if t.Synthetic {
			bound = all.Distance
		}
		d := w.compare(w, &w.search.queries[q], &w.block[i], bound)
		if d > bound {
			continue
		}
		m := Match{Order: t.Order, Distance: d}
		if !t.Synthetic && m.before(recorded) {
			recorded = m
		}
		if m.before(all) {
			all = m
		}
	}
	w.search.keep(q, recorded, all)
}

// keep remembers matches of query q that are nearer than those known.
func (s *Search) keep(q int, recorded, all Match) {
	f := &s.found[q]
	f.Lock()
	defer f.Unlock()
	if recorded.before(f.recorded) {
		f.recorded = recorded
	}
	if all.before(f.all) {
		f.all = all
	}
}
