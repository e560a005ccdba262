package template

import (
	"cmp"
	"math"
	"slices"
)

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
