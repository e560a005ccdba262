package convolution

import (
	"slices"
	"sync"
)

// Trainer gathers the features of training takes and fits a model to them.
//
// It takes blocks: the features of a recorded take, the source, and of the
// synthetic takes made from it. Up to as many rows as there are features are
// kept; beyond that only their sums and products are, so that memory does not
// grow with the number of takes made: it is a few times width² numbers. To choose
// the strength it is some fifteen times that, and one row per source.
type Trainer struct {
	ridge   Ridge
	width   int
	labels  []int // of each class, ascending
	classes []int // class of each source
	parts   []int // part of each source, see deal

	mu      sync.Mutex
	next    int               // the source whose turn it is
	waiting map[int][]float64 // blocks that came before their turn

	origin   []float64  // the first row; what follows is relative to it
	held     []float64  // rows that moments does not count yet
	source   []int      // of each row held
	moments  []*moments // of each part; nil while all rows are held
	recorded []float64  // the row of each source itself, when the strength is chosen
}

// Trainer returns a trainer for blocks of sources 0, 1 … of the given labels,
// each row width features long. Labels are any numbers. A strength that
// [Ridge.Validate] refuses panics.
func (r Ridge) Trainer(width int, labels []int) *Trainer {
	if r.Validate() != nil {
		panic("convolution: invalid ridge strength")
	}
	if width < 1 || len(labels) == 0 {
		panic("convolution: a trainer needs features and sources")
	}
	t := &Trainer{
		ridge: r, width: width, labels: distinct(labels), waiting: make(map[int][]float64),
		classes: make([]int, len(labels)), parts: make([]int, len(labels)),
	}
	for i, l := range labels {
		t.classes[i], _ = slices.BinarySearch(t.labels, l)
	}
	if r.Choose {
		t.parts = deal(labels)
	}
	return t
}

// Offer hands over the block of a source: whole rows of features one after the
// other, first that of the recorded take itself. Every source is offered once.
// Several goroutines may offer at a time and in any order; blocks are counted
// in the order of the sources, so that the model does not depend on it, and
// those that come early are copied and wait. The block stays the caller's.
func (t *Trainer) Offer(source int, block []float64) {
	if len(block) == 0 || len(block)%t.width != 0 {
		panic("convolution: block is not made of whole rows")
	}
	t.mu.Lock()
	defer t.mu.Unlock()
	if _, twice := t.waiting[source]; twice || source < t.next || source >= len(t.classes) {
		panic("convolution: source unknown or offered twice")
	}
	if source > t.next {
		t.waiting[source] = slices.Clone(block)
		return
	}
	for early := true; early; {
		t.count(t.next, block)
		t.next++
		block, early = t.waiting[t.next]
		delete(t.waiting, t.next)
	}
}

// count takes the block in whose turn it is.
func (t *Trainer) count(source int, block []float64) {
	if t.origin == nil {
		t.origin = slices.Clone(block[:t.width])
	}
	if t.ridge.Choose {
		t.recorded = append(t.recorded, block[:t.width]...)
	}
	for ; len(block) > 0; block = block[t.width:] {
		if len(t.source) == t.width {
			t.flush()
		}
		for j, v := range block[:t.width] {
			t.held = append(t.held, v-t.origin[j])
		}
		t.source = append(t.source, source)
	}
}

// flush moves the rows held into the moments.
func (t *Trainer) flush() {
	if t.moments == nil {
		t.moments = make([]*moments, 1+slices.Max(t.parts))
		for p := range t.moments {
			t.moments[p] = newMoments(t.width, len(t.labels))
		}
	}
	for from, to := 0, 0; from < len(t.source); from = to {
		part := t.parts[t.source[from]]
		var classes []int
		for to = from; to < len(t.source) && t.parts[t.source[to]] == part; to++ {
			classes = append(classes, t.classes[t.source[to]])
		}
		t.moments[part].add(classes, t.held[from*t.width:to*t.width])
	}
	t.held, t.source = t.held[:0], t.source[:0]
}

// form is one of the two forms of the equations.
type form interface {
	// fit solves them.
	fit(strength float64) (*Model, error)
	// validate returns the squared error of the recorded takes of all parts
	// left out in turn, for each of the strengths.
	validate(strengths []float64) ([]float64, error)
}

// Train fits a model to all rows, when every source has been offered. The
// error says that the equations cannot be solved, as when the strength is so
// small that rounding outweighs it.
func (t *Trainer) Train() (*Model, error) {
	t.mu.Lock()
	defer t.mu.Unlock()
	if t.next < len(t.classes) {
		panic("convolution: trained before every source was offered")
	}
	var f form
	if t.moments == nil {
		f = t.byRows()
	} else {
		t.flush()
		f = t.byFeatures()
	}
	strength, err := t.strength(f)
	if err != nil {
		return nil, err
	}
	return f.fit(strength)
}

// strength returns the strength to fit with.
func (t *Trainer) strength(f form) (float64, error) {
	switch {
	case t.ridge.Strength > 0:
		return t.ridge.Strength, nil
	case slices.Max(t.parts) == 0:
		return defaultStrength, nil
	}
	tried := strengths()
	sums, err := f.validate(tried)
	if err != nil {
		return 0, err
	}
	best := len(tried) - 1
	for i := best; i >= 0; i-- {
		if sums[i] < sums[best] {
			best = i
		}
	}
	return tried[best], nil
}
