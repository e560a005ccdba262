package lognormal

// fitter refines strokes against a signal by Levenberg–Marquardt. It keeps its
// scratch from call to call.
type fitter struct {
	width  int
	bounds bounds

	blocks []block
	base   []Vec // the signal without any of the strokes
	next   []Vec
	trial  []Stroke
	normal equations
}

// block holds the derivatives of one stroke's velocities over its support.
type block struct {
	low, high int
	slopes    []slope // one per step
}

// Damping of Levenberg–Marquardt: where it starts, by how much it falls after
// a step that helped and grows after one that did not, and where it gives up.
const (
	firstDamping = 1e-2
	easier       = 0.2
	harder       = 5
	mostDamping  = 1e6
)

// refine changes the strokes in place so that the residual, the signal less
// their velocities, gets small, and keeps the residual up to date. It stops
// after the given iterations, or when one takes off less than the share gain.
func (f *fitter) refine(strokes []Stroke, residual signal, iterations int, gain float64) {
	f.base = append(f.base[:0], residual.velocity...)
	base := signal{residual.time, f.base}
	for _, k := range strokes {
		base.add(k, 1)
	}
	left, damping := residual.energy(), firstDamping
	for range iterations {
		before := left
		f.linearise(strokes, residual)
		for left == before && damping <= mostDamping {
			f.next = append(f.next[:0], f.base...)
			next := signal{residual.time, f.next}
			if f.propose(strokes, damping) {
				for _, k := range f.trial {
					next.add(k, -1)
				}
				if after := next.energy(); after < before {
					left = after
					copy(strokes, f.trial)
					copy(residual.velocity, next.velocity)
					damping *= easier
					break
				}
			}
			damping *= harder
		}
		if before-left <= gain*before {
			return
		}
	}
}

// propose computes the strokes one damped step away and tells whether there is
// such a step.
func (f *fitter) propose(strokes []Stroke, damping float64) bool {
	delta, ok := f.normal.solve(damping)
	if !ok {
		return false
	}
	m := columns(f.width)
	f.trial = f.trial[:0]
	for j, k := range strokes {
		f.trial = append(f.trial, f.bounds.moved(k, delta[j*m:(j+1)*m]))
	}
	return true
}

// linearise sets up the normal equations JᵀJ·δ = Jᵀr at the strokes.
func (f *fitter) linearise(strokes []Stroke, residual signal) {
	for len(f.blocks) < len(strokes) {
		f.blocks = append(f.blocks, block{})
	}
	m := columns(f.width)
	f.normal.reset(len(strokes) * m)
	for j, k := range strokes {
		b := &f.blocks[j]
		b.fill(k, residual)
		f.normal.project(b, residual, j*m, m)
		for i := range j {
			f.normal.couple(b, &f.blocks[i], j*m, i*m, m)
		}
		f.normal.couple(b, b, j*m, j*m, m)
	}
}

// fill computes the derivatives of a stroke's velocities.
func (b *block) fill(k Stroke, s signal) {
	b.low, b.high = s.support(k)
	b.slopes = b.slopes[:0]
	if b.low == b.high {
		return
	}
	_, before := slopeAt(k, s.time[b.low])
	for i := b.low; i < b.high; i++ {
		_, after := slopeAt(k, s.time[i+1])
		per := 1 / (s.time[i+1] - s.time[i])
		var row slope
		for c := range row {
			row[c] = combine(per, after[c], -per, before[c])
		}
		b.slopes = append(b.slopes, row)
		before = after
	}
}
