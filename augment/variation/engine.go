package variation

import "math/rand/v2"

// engine measures the pairs of a set of recordings and of takes drawn from the
// model.
type engine struct {
	*form
	o       Options
	labels  []label
	columns *columns
	freedom []float64 // per label: takes less one
}

// scope is the labels a figure is about: one, or all.
type scope struct {
	label    string
	from, to int // indices of labels
}

// scopes lists all labels together and then each by itself.
func (e *engine) scopes() []scope {
	out := []scope{{"", 0, len(e.labels)}}
	for i, l := range e.labels {
		out = append(out, scope{l.name, i, i + 1})
	}
	return out
}

// takes returns how many takes of a scope have another of their label beside
// them, and how many more they are than labels.
func (e *engine) takes(s scope) (takes int, freedom float64) {
	for i := s.from; i < s.to; i++ {
		if n := len(e.labels[i].takes); n > 1 {
			takes += n
			freedom += e.freedom[i]
		}
	}
	return takes, freedom
}

// recorded measures the chosen pairs of recorded takes.
func (e *engine) recorded() *sheet {
	s := newSheet(len(e.columns.list), choose(e.labels, e.o), len(e.labels))
	each(len(s.pairs), e.o.Workers, func() *meter { return newMeter(e.form, e.columns, e.o.Align) }, func(m *meter, i int) {
		p := s.pairs[i]
		takes := e.labels[p.label].takes
		m.measure(s.row(i), takes[p.a], takes[p.b], true)
	})
	return s
}

// drawer is a meter with a model to draw what it measures.
type drawer struct {
	*meter
	model *model
	a, b  view
}

// fewest is the least number of pairs drawn of a label for its figures to
// answer to sizes in a way of its own.
const fewest = 40

// perLabel returns how many pairs of each label are drawn.
func (e *engine) perLabel() int {
	several := 0
	for _, f := range e.freedom {
		if f > 0 {
			several++
		}
	}
	return max(4, e.o.Draws/several)
}

// drawn measures pairs of takes drawn from the model by the sizes, n of each
// label, each pair from one recorded take. The same numbers are drawn whatever
// the sizes are. Limbs by themselves are measured if asked.
func (e *engine) drawn(s sizes, n int, limbs bool) *sheet {
	var pairs []pair
	for l := range e.labels {
		for k := range n {
			if e.freedom[l] > 0 {
				pairs = append(pairs, pair{l, k, k})
			}
		}
	}
	sh := newSheet(len(e.columns.list), pairs, len(e.labels))
	newDrawer := func() *drawer {
		return &drawer{meter: newMeter(e.form, e.columns, e.o.Align), model: newModel(e.form, s.timingLength, s.shapeLength)}
	}
	each(len(pairs), e.o.Workers, newDrawer, func(d *drawer, i int) {
		p := pairs[i]
		r := rand.New(rand.NewPCG(e.o.Seed+1, uint64(p.label)<<32|uint64(p.a)))
		takes := e.labels[p.label].takes
		src := takes[r.IntN(len(takes))]
		d.model.draw(&d.a, src, s, r)
		d.model.draw(&d.b, src, s, r)
		d.measure(sh.row(i), &d.a, &d.b, limbs)
	})
	return sh
}

// sum sums a sheet up over a scope: each label counts by how many more than
// one its takes are, and within it each pair by the product of the weights of
// its takes; nil weighs all alike.
func (e *engine) sum(s *sheet, sc scope, takes [][]float64) []float64 {
	from, to := s.start[sc.from], s.start[sc.to]
	weights := make([]float64, to-from)
	for i := range weights {
		p := s.pairs[from+i]
		w := e.freedom[p.label] / float64(s.start[p.label+1]-s.start[p.label])
		if takes != nil {
			w *= takes[p.label][p.a] * takes[p.label][p.b]
		}
		weights[i] = w
	}
	return s.summary(make([]float64, s.width), e.columns.list, from, to, weights)
}
