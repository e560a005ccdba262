package method

import (
	"math/rand/v2"
	"slices"
)

// Barycentre makes a take as a weighted average of a source take and others of
// its label under dynamic time warping (Petitjean, Ketterlin, Gançarski 2011;
// weights: Forestier, Petitjean, Dau, Webb, Keogh 2017). The average has the
// source's clock; the others may have any number of frames.
//
// Departure: warping paths may be held to a band, which bounds the time of
// long takes; the published average has none (Band 1).
type Barycentre struct {
	Iterations int     // of aligning and averaging, ≥ 0; it ends sooner when no path changes
	Band       float64 // half-width of the warping band as a share of the longer take, 0 < Band ≤ 1
}

// DefaultBarycentre returns ten iterations in a band of a fifth.
func DefaultBarycentre() Barycentre { return Barycentre{Iterations: 10, Band: 0.2} }

// Published weights of the rule "average selected": the source, and how many
// of its nearest takes stand for choice, how many are chosen and what each
// gets. The rest is shared by all the others.
const (
	sourceWeight = 0.5
	chosenWeight = 0.15
	nearestTakes = 5
	chosenTakes  = 2
)

// Apply makes one take from src and the other takes of its label, each frames ×
// width like src. The weights are drawn by the rule "average selected" of
// Forestier et al. 2017: one half for the source, 0.15 for each of two takes
// drawn from its five nearest, the rest shared by the others; with no others
// left only the ratios of the weights count. With no other take at all it
// gives the source back. dst as in the package's contract; an average starts
// from the source.
func (b Barycentre) Apply(dst, src []float64, others [][]float64, width int, rng *rand.Rand) []float64 {
	if len(others) == 0 {
		return b.Average(dst, src, nil, nil, width)
	}
	checkTakes(src, others, make([]float64, len(others)), width)
	w := warper{width: width, band: b.Band}
	far := make([]float64, len(others))
	order := make([]int, len(others))
	for k, other := range others {
		order[k] = k
		far[k] = w.path(src, other, func(int, int) {})
	}
	slices.SortStableFunc(order, func(i, j int) int {
		if far[i] < far[j] {
			return -1
		}
		if far[i] > far[j] {
			return 1
		}
		return 0
	})
	weights := selected(order, rng)
	takes := append([][]float64{src}, others...)
	return b.Average(dst, src, takes, append([]float64{sourceWeight}, weights...), width)
}

// selected draws the weights of the takes other than the source, given their
// order from near to far.
func selected(order []int, rng *rand.Rand) []float64 {
	weights := make([]float64, len(order))
	if rest := len(order) - chosenTakes; rest > 0 {
		for k := range weights {
			weights[k] = (1 - sourceWeight - chosenTakes*chosenWeight) / float64(rest)
		}
	}
	nearest := order[:min(nearestTakes, len(order))]
	for _, k := range rng.Perm(len(nearest))[:min(chosenTakes, len(nearest))] {
		weights[nearest[k]] = chosenWeight
	}
	return weights
}

// Average returns the weighted average of takes under dynamic time warping,
// starting from start, whose frames it has. Each iteration aligns every take
// to the average and moves each frame of the average to the weighted mean of
// all frames aligned to it; the weighted sum of squared warping distances does
// not grow. Weights are ≥ 0; only their ratios count. When they sum to nothing
// the start is returned. It panics when takes and weights differ in number or
// a take has no frames of the given width.
func (b Barycentre) Average(dst, start []float64, takes [][]float64, weights []float64, width int) []float64 {
	checkTakes(start, takes, weights, width)
	if dst == nil {
		dst = make([]float64, len(start))
	}
	if len(dst) != len(start) {
		panic("method: destination and start differ in size")
	}
	copy(dst, start)
	a := averager{warper: warper{width: width, band: b.Band}, sum: make([]float64, len(start)), weight: make([]float64, len(start)/width)}
	for range b.Iterations {
		if !a.step(dst, takes, weights) {
			break
		}
	}
	return dst
}

// checkTakes panics when what is to be averaged does not fit together.
func checkTakes(start []float64, takes [][]float64, weights []float64, width int) {
	if width < 1 || len(start) == 0 || len(start)%width != 0 {
		panic("method: the start of an average has no whole frames")
	}
	if len(takes) != len(weights) {
		panic("method: takes and weights differ in number")
	}
	for _, take := range takes {
		if len(take) == 0 || len(take)%width != 0 {
			panic("method: a take to be averaged has no whole frames")
		}
	}
}

// averager holds the sums of one iteration.
type averager struct {
	warper
	sum    []float64 // frames × width
	weight []float64 // per frame
}

// step runs one iteration and tells whether the average moved.
func (a *averager) step(average []float64, takes [][]float64, weights []float64) bool {
	clear(a.sum)
	clear(a.weight)
	for k, take := range takes {
		if weights[k] == 0 {
			continue
		}
		a.path(average, take, func(i, j int) {
			a.weight[i] += weights[k]
			for c := range a.width {
				a.sum[i*a.width+c] += weights[k] * take[j*a.width+c]
			}
		})
	}
	moved := false
	for i, weight := range a.weight {
		if weight == 0 {
			continue
		}
		for c := i * a.width; c < (i+1)*a.width; c++ {
			mean := a.sum[c] / weight
			moved = moved || mean != average[c]
			average[c] = mean
		}
	}
	return moved
}
