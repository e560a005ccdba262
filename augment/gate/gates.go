package gate

import (
	"math"
	"slices"
	"sync"

	"strandwise/channels"
)

// Gates are the limits that synthetic takes are held against. They may be
// shared by goroutines.
type Gates struct {
	options    Options // Clips filled in
	layout     *channels.Layout
	extents    []extent
	reach      []float64 // per channel the range of its group's widest channel
	factor     []float64 // per channel, what makes groups weigh alike
	labels     map[string]limits
	pooled     limits // mean over labels
	references []reference
	stray      float64 // ratio of own to other distance that one in twenty recorded takes exceed, at least 1
	spacing    float64 // median distance of a recorded take to its nearest of the label; 0 where no label has two
	scratch    sync.Pool
}

// weigh sets the factors and ranges of channels.
func (g *Gates) weigh(scales *channels.Scales) {
	g.reach, g.factor = make([]float64, len(g.extents)), make([]float64, len(g.extents))
	for k, group := range g.layout.Groups {
		widest := 0.0
		for _, c := range group.Channels {
			widest = max(widest, g.extents[c].high-g.extents[c].low)
		}
		for _, c := range group.Channels {
			g.reach[c], g.factor[c] = widest, 1/scales.RMS(k)
		}
	}
}

// scaled returns copies of references with their values scaled.
func (g *Gates) scaled(kept reservoir) []reference {
	out := slices.Clone(kept)
	for i := range out {
		values := make([]float64, len(out[i].values))
		for k, v := range out[i].values {
			values[k] = v * g.factor[k%len(g.factor)]
		}
		out[i].values = values
	}
	return out
}

const (
	mostCompared = 128  // references compared with all others to learn how recorded takes stray
	strayLevel   = 0.95 // share of recorded takes that stray no further than what is let through

	// What stands for that before any two takes of a label were compared, and
	// how many takes it weighs: about the 95 % quantile on six open sets, one
	// take per label.
	strayGuess, strayWeight = 1.75, 10.0
)

// compare holds each of some references against all others.
func (g *Gates) compare() {
	var ratios, spacings []float64
	step := max(1, len(g.references)/mostCompared)
	for i := 0; i < len(g.references); i += step {
		r := &g.references[i]
		own, other := nearest(r.values, r.id, r.label, g.references)
		if math.IsInf(own, 1) {
			continue
		}
		spacings = append(spacings, own)
		if !math.IsInf(other, 1) && other > 0 {
			ratios = append(ratios, own/other)
		}
	}
	n := float64(len(ratios))
	g.stray = max(1, (n*quantile(ratios, strayLevel)+strayWeight*strayGuess)/(n+strayWeight))
	g.spacing = quantile(spacings, 0.5)
}

// quantile returns the smallest value with at least the share of all at or
// below it, 0 for no values. It sorts them.
func quantile(values []float64, share float64) float64 {
	if len(values) == 0 {
		return 0
	}
	slices.Sort(values)
	return values[max(0, int(math.Ceil(share*float64(len(values))))-1)]
}

// Clips returns the levels at which values are clipped.
func (g *Gates) Clips() []Clip { return slices.Clone(g.options.Clips) }

// Clip clips a take's values in place at the levels where the sensor stops,
// and returns how many it changed.
func (g *Gates) Clip(t *channels.Take) int {
	changed := 0
	for _, clip := range g.options.Clips {
		for i := clip.Channel; i < len(t.Data); i += t.Width() {
			if v := t.Data[i]; v < clip.Low || v > clip.High {
				t.Data[i] = min(max(v, clip.Low), clip.High)
				changed++
			}
		}
	}
	return changed
}

// Check makes the source take ready and holds the candidate against the gates.
// Where several takes are made from one source, [Gates.Source] spares the
// first part.
func (g *Gates) Check(candidate, source *channels.Take) Result {
	return g.Source(source).Check(candidate)
}

// bench is what one goroutine works with.
type bench struct {
	spectrum *spectrum
	sketch   []float64
	jerk     []float64
}

func (g *Gates) bench() *bench {
	if b, ok := g.scratch.Get().(*bench); ok {
		return b
	}
	return &bench{spectrum: newSpectrum()}
}
