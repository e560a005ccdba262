package gate

import (
	"maps"
	"math"
	"slices"

	"strandwise/channels"
)

// Recorded gathers what gates need to know of recorded training takes. It is
// for one goroutine.
type Recorded struct {
	options  Options
	layout   *channels.Layout
	extents  []extent
	labels   map[string]*label
	ones     []float64
	spectrum *spectrum
}

// label is what is known of one label.
type label struct {
	limits
	kept reservoir
}

// limits are the largest figures among some takes.
type limits struct {
	takes int
	jerk  []float64 // per group
	upper float64
}

// raise raises the limits to those of further takes.
func (l *limits) raise(o limits) {
	if l.jerk == nil {
		l.jerk = make([]float64, len(o.jerk))
	}
	for g := range o.jerk {
		l.jerk[g] = max(l.jerk[g], o.jerk[g])
	}
	l.takes, l.upper = l.takes+o.takes, max(l.upper, o.upper)
}

// mix adds a share of the limits of further takes, and all of the takes.
func (l *limits) mix(o limits, share float64) {
	if l.jerk == nil {
		l.jerk = make([]float64, len(o.jerk))
	}
	for g := range o.jerk {
		l.jerk[g] += share * o.jerk[g]
	}
	l.takes, l.upper = l.takes+o.takes, l.upper+share*o.upper
}

// NewRecorded returns a Recorded that has seen nothing. The error is that of
// [Options.Validate].
func NewRecorded(o Options) (*Recorded, error) {
	if err := o.Validate(); err != nil {
		return nil, err
	}
	if o.References == 0 {
		o.References = defaultReferences
	}
	return &Recorded{options: o, labels: make(map[string]*label), spectrum: newSpectrum()}, nil
}

// Add takes in one valid training take, of which it keeps nothing but copies.
// All takes must have the same channels and groups.
func (r *Recorded) Add(t *channels.Take) {
	if r.layout == nil {
		r.begin(t.Layout)
	}
	if t.Width() != len(r.extents) {
		panic("gate: recorded takes of different channels")
	}
	for c := range r.extents {
		r.extents[c].see(t, c)
	}
	l := r.labels[t.Label]
	if l == nil {
		l = new(label)
		r.labels[t.Label] = l
	}
	l.raise(limits{1, jerks(nil, t), r.spectrum.upper(t)})
	l.kept = l.kept.offer(t.ID, t.Label, r.options.References, func() []float64 {
		return sketch(make([]float64, 0, sketched*t.Width()), t, r.ones)
	})
}

func (r *Recorded) begin(l *channels.Layout) {
	r.layout = l
	r.extents, r.ones = make([]extent, len(l.Channels)), make([]float64, len(l.Channels))
	for c := range r.extents {
		r.extents[c] = extent{low: math.Inf(1), high: math.Inf(-1)}
		r.ones[c] = 1
	}
}

// Gates returns gates with the limits of the takes seen, at least one. The
// scales weigh channel groups against each other where takes are compared.
func (r *Recorded) Gates(scales *channels.Scales) *Gates {
	if r.layout == nil {
		panic("gate: limits of no recorded takes")
	}
	g := &Gates{options: r.options, layout: r.layout, extents: slices.Clone(r.extents), labels: make(map[string]limits)}
	if g.options.Clips == nil {
		g.options.Clips = clips(g.extents, r.layout)
	}
	g.weigh(scales)
	for _, name := range slices.Sorted(maps.Keys(r.labels)) {
		l := r.labels[name]
		g.labels[name] = l.limits
		g.pooled.mix(l.limits, 1/float64(len(r.labels)))
		g.references = append(g.references, g.scaled(l.kept[:min(len(l.kept), max(1, mostReferences/len(r.labels)))])...)
	}
	g.compare()
	return g
}

// Fit returns gates with the limits of the training takes, at least one. The
// error is that of [Options.Validate].
func Fit(training []*channels.Take, scales *channels.Scales, o Options) (*Gates, error) {
	r, err := NewRecorded(o)
	if err != nil {
		return nil, err
	}
	for _, t := range training {
		r.Add(t)
	}
	return r.Gates(scales), nil
}
