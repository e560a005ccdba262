package classify

import (
	"fmt"
	"math"
	"sync/atomic"

	"strandwise/channels"
	"strandwise/classify/template"
)

// nearest is the learner that gives a take the label of the nearest template.
type nearest struct{ metric template.Metric }

// NearestTemplate returns the learner that gives a take the label of the
// nearest template. Of templates equally near the first in order counts.
func NearestTemplate(m template.Metric) Learner { return nearest{m} }

// Name is that of the distance.
func (n nearest) Name() string { return string(n.metric.Distance) }

// nearestStudy searches the templates of every part for themselves. Where
// rejection is asked for it needs the nearest template of another label too,
// and searches with the takes of each label apart.
type nearestStudy struct {
	lesson Lesson
	groups []queries
	parts  []nearestPart
	table  table
}

type nearestPart struct {
	searches    []*template.Search // one per group of queries
	comparisons atomic.Int64
	cells       atomic.Int64
}

// queries are takes to recognise that have one label, or any.
type queries struct {
	label  string // empty for any
	places []int
	takes  []*channels.Take
}

// Begin prepares the takes to recognise.
func (n nearest) Begin(l Lesson) (Study, error) {
	s := &nearestStudy{lesson: l, groups: group(l), parts: make([]nearestPart, l.Parts)}
	for p := range s.parts {
		for _, g := range s.groups {
			search, err := template.NewSearch(n.metric, l.Training, g.takes)
			if err != nil {
				return nil, fmt.Errorf("test takes: %w", err)
			}
			s.parts[p].searches = append(s.parts[p].searches, search)
		}
	}
	s.table = newTable(n.metric, l)
	return s, nil
}

// group returns the takes to recognise in groups that are searched for apart:
// all in one unless rejection is asked for, else by label.
func group(l Lesson) []queries {
	if !l.Reject {
		all := queries{takes: l.Test}
		for i := range l.Test {
			all.places = append(all.places, i)
		}
		return []queries{all}
	}
	var out []queries
	for _, places := range byLabel(l.Test, nil) {
		g := queries{label: l.Test[places[0]].Label, places: places}
		for _, i := range places {
			g.takes = append(g.takes, l.Test[i])
		}
		out = append(out, g)
	}
	if len(l.Rest) > 0 {
		rest := queries{takes: l.Rest}
		for i := range l.Rest {
			rest.places = append(rest.places, len(l.Test)+i)
		}
		out = append(out, rest)
	}
	return out
}

// nearestWorker offers templates, with one worker per part and group of queries.
type nearestWorker struct {
	study   *nearestStudy
	workers [][]*template.Worker
	block   []template.Template
}

// Worker returns a worker whose scratch grows with the parts it meets.
func (s *nearestStudy) Worker() Worker {
	return &nearestWorker{study: s, workers: make([][]*template.Worker, len(s.parts))}
}

// Learn offers the examples to the searches of their parts.
func (w *nearestWorker) Learn(source int, parts [][]Example) error {
	for p, examples := range parts {
		if err := w.learn(source, p, examples); err != nil {
			return err
		}
	}
	return nil
}

func (w *nearestWorker) learn(source, part int, examples []Example) error {
	p := &w.study.parts[part]
	if w.workers[part] == nil {
		for _, search := range p.searches {
			w.workers[part] = append(w.workers[part], search.Worker())
		}
	}
	label := w.study.lesson.Training[source].Label
	for g, group := range w.study.groups {
		w.block = w.block[:0]
		for _, e := range examples {
			// A search finds the nearest of all templates and the nearest of those
			// not marked: here, of those of another label than the queries'.
			w.block = append(w.block, template.Template{Take: e.Take, Order: e.Order, Synthetic: label == group.label})
		}
		if err := w.workers[part][g].Offer(w.block); err != nil {
			return fmt.Errorf("templates: %w", err)
		}
	}
	for _, e := range examples {
		p.comparisons.Add(int64(len(w.study.lesson.Test)))
		p.cells.Add(w.study.table.cells(e.Take.Frames()))
	}
	return nil
}

// Recognise finds the nearest template of each set for every take.
func (s *nearestStudy) Recognise() ([][]Answer, error) {
	out := make([][]Answer, len(s.lesson.Sets))
	for set := range out {
		out[set] = make([]Answer, len(s.lesson.Test)+len(s.lesson.Rest))
		for g, group := range s.groups {
			for i, place := range group.places {
				out[set][place] = s.recognise(set, g, i)
			}
		}
	}
	return out, nil
}

// recognise answers for query i of a group.
func (s *nearestStudy) recognise(set, group, i int) Answer {
	none := template.Match{Order: template.NoTemplate, Distance: math.Inf(1)}
	other, all := none, none
	for _, p := range s.lesson.Sets[set] {
		o, a := s.parts[p].searches[group].Nearest(i)
		other, all = nearer(other, o), nearer(all, a)
	}
	answer := unmeasured(s.label(all))
	if s.lesson.Reject {
		answer.Distance, answer.Other = all.Distance, other.Distance
	}
	return answer
}

// nearer returns the match at the smaller distance, of equal ones the first in
// order.
func nearer(a, b template.Match) template.Match {
	if b.Distance < a.Distance || b.Distance == a.Distance && b.Order < a.Order {
		return b
	}
	return a
}

// label returns the label of the template of a match.
func (s *nearestStudy) label(m template.Match) string {
	return s.lesson.Training[s.lesson.source(m.Order)].Label
}

// Work counts comparisons and cells.
func (s *nearestStudy) Work(set int) Work {
	var w Work
	for _, p := range s.lesson.Sets[set] {
		w.Comparisons += s.parts[p].comparisons.Load()
		w.Cells += s.parts[p].cells.Load()
	}
	return w
}
