package template

import (
	"errors"
	"fmt"
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
// queries with what bounds distances from them, and one block per worker.
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
	if training[0].Layout == nil {
		return nil, fmt.Errorf("take %s has no layout", training[0].ID)
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
