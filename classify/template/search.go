package template

import (
	"cmp"
	"errors"
	"math"
	"slices"
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
	parts   []part
	rulers  []ruler // per part, of takes that are warped; else none
	queries []series
	found   []found

	mu     sync.Mutex // guards counts
	counts Counts
}

// found is what is known of one query.
type found struct {
	sync.Mutex
	recorded, all Match
}

// NewSearch prepares the queries. A metric without a length takes that of the
// longest of the training takes, which must be the recorded ones; they are not
// kept, nor offered as templates. The error names the take that cannot be
// compared, or the weight whose group the takes do not have.
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
	var err error
	if s.parts, err = m.parts(s.layout); err != nil {
		return nil, err
	}
	if err := s.prepare(queries); err != nil {
		return nil, err
	}
	return s, nil
}

// prepare makes the queries ready.
func (s *Search) prepare(queries []*channels.Take) error {
	p := newPreparer(s.metric, s.layout, s.parts)
	for i, t := range queries {
		if err := p.prepare(&s.queries[i], t); err != nil {
			return err
		}
		none := Match{Order: NoTemplate, Distance: math.Inf(1)}
		s.found[i].recorded, s.found[i].all = none, none
	}
	if s.metric.Distance.warps() {
		for p := range s.parts {
			s.rulers = append(s.rulers, newRuler(&s.parts[p], s.queries))
		}
	}
	for i := range s.queries {
		s.sketch(&s.queries[i], false)
	}
	return nil
}

// sketch sketches the parts of a take, if they are to be warped.
func (s *Search) sketch(t *series, reverse bool) {
	for len(t.sketches) < len(s.rulers) {
		t.sketches = append(t.sketches, sketch{})
	}
	t.rings = t.rings[:0]
	for p := range s.rulers {
		t.sketches[p].draw(&s.rulers[p], t.part(&s.parts[p]), reverse)
	}
}

// ringOf returns the envelopes of a radius around the parts of t. It keeps them.
func (t *series) ringOf(radius int) ring {
	for _, r := range t.rings {
		if r.radius == radius {
			return r
		}
	}
	if n := len(t.rings); n < cap(t.rings) {
		t.rings = t.rings[:n+1] // with the memory of one from before
	} else {
		t.rings = append(t.rings, ring{})
	}
	r := &t.rings[len(t.rings)-1]
	r.radius = radius
	for len(r.around) < len(t.sketches) {
		r.around = append(r.around, envelope{})
	}
	for p := range t.sketches {
		r.around[p].wrap(&t.sketches[p].segments, radius)
	}
	return *r
}

// ringOf returns the envelopes of a radius around a query.
func (s *Search) ringOf(query, radius int) ring {
	f := &s.found[query]
	f.Lock()
	defer f.Unlock()
	return s.queries[query].ringOf(radius)
}

// Counts returns what the workers have done in the blocks they are through with.
func (s *Search) Counts() Counts {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.counts
}

// Nearest returns the nearest template offered so far to query i, among the
// recorded templates and among all of them.
func (s *Search) Nearest(i int) (recorded, all Match) {
	f := &s.found[i]
	f.Lock()
	defer f.Unlock()
	return f.recorded, f.all
}

// Worker offers templates to a search. It holds the scratch of one goroutine;
// several workers may serve one search at a time.
type Worker struct {
	*preparer
	sieve  sieve
	search *Search
	block  []series
	visits []visit
	row    []float64
	warps  bool
	roots  bool
}

// Worker returns a new worker for the search.
func (s *Search) Worker() *Worker {
	return &Worker{
		preparer: newPreparer(s.metric, s.layout, s.parts),
		sieve:    newSieve(s),
		search:   s,
		warps:    s.metric.Distance.warps(),
		roots:    s.metric.Distance.roots(),
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
		w.search.sketch(&w.block[i], true)
	}
	for q := range w.search.queries {
		w.query(q, block)
	}
	w.search.add(w.sieve.take())
	return nil
}

// visit is a template to be held against the query at hand.
type visit struct {
	least float64 // a bound on its distance
	index int     // in the block
}

// query holds one query against the prepared block, the template with the least
// bound first.
func (w *Worker) query(q int, block []Template) {
	recorded, all := w.search.Nearest(q)
	w.sieve.turn(q)
	w.plan(len(block))
	for _, v := range w.visits {
		t := block[v.index]
		bound := recorded.Distance
		if t.Synthetic {
			bound = all.Distance
		}
		d, ok := w.within(v, bound)
		if !ok {
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

// plan sets the visits that the query at hand pays to a block of n.
func (w *Worker) plan(n int) {
	w.visits = w.visits[:0]
	for i := range n {
		v := visit{index: i}
		if w.warps {
			v.least = w.sieve.ends(&w.block[i])
		}
		w.visits = append(w.visits, v)
	}
	if w.warps {
		slices.SortFunc(w.visits, func(a, b visit) int { return cmp.Compare(a.least, b.least) })
	}
}

// within returns the distance of the query to a template of the block if it is
// no more than bound.
func (w *Worker) within(v visit, bound float64) (d float64, ok bool) {
	t, counts := &w.block[v.index], &w.sieve.counts
	counts.Pairs++
	if v.least > bound {
		counts.Ends++
		return 0, false
	}
	if w.warps && bound < math.Inf(1) && w.sieve.rejects(t, bound) {
		return 0, false
	}
	if d = w.distance(w.sieve.query, t, bound); d > bound {
		counts.Abandoned++
		return 0, false
	}
	return d, true
}

// add adds what a worker has done.
func (s *Search) add(c Counts) {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.counts = s.counts.Plus(c)
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
