package convolution

import (
	"errors"
	"fmt"
	"math"
	"slices"
)

// Ridge says how strongly the weights are held down.
type Ridge struct {
	Strength float64 // on standardised features, above 0; 0 is 100
	// Choose takes the strength from validation instead, among the powers of
	// ten from 0.01 to 100 000. The recorded takes of labels that have two or
	// more are dealt into at most ten parts, and each part is tested by a fit
	// without it and without whatever was made from it. The strength with the
	// least squared error on the recorded takes tested is chosen; the greatest
	// among equals. Features keep the mean and deviation they have over all
	// rows. Where no label has two recorded takes there is nothing to choose
	// by, and the strength is the default.
	Choose bool
}

// defaultStrength was fixed before this package was written: experiments on
// six open sets found 100 to 1000 to serve recorded and synthetic takes alike.
const defaultStrength = 100

// Validate reports a strength that is not above 0, and one that is both given
// and to be chosen.
func (r Ridge) Validate() error {
	switch {
	case r.Choose && r.Strength != 0:
		return errors.New("ridge strength: it is both given and to be chosen; leave one out")
	case r.Strength == 0:
		return nil
	case !(r.Strength > 0) || math.IsInf(r.Strength, 1):
		return fmt.Errorf("ridge strength %g is not above 0; legal are positive numbers, or 0 for %d", r.Strength, defaultStrength)
	}
	return nil
}

// strengths returns those that are tried when one is to be chosen, ascending.
func strengths() []float64 { return []float64{1e-2, 1e-1, 1, 1e1, 1e2, 1e3, 1e4, 1e5} }

// mostParts is the greatest number of parts that are left out in turn; ten is
// common practice.
const mostParts = 10

// deal deals sources, given the label of each, into parts 1, 2 … to be left
// out in turn, and returns the part of each source. No part holds all sources
// of a label; the only source of a label is in part 0, which is never left
// out.
func deal(labels []int) []int {
	byLabel := make(map[int][]int)
	var order []int
	for i, l := range labels {
		byLabel[l] = append(byLabel[l], i)
	}
	for _, l := range distinct(labels) {
		if sources := byLabel[l]; len(sources) > 1 {
			order = append(order, sources...)
		}
	}
	// Sources of a label follow each other here, hence fall into different
	// parts, or into all.
	parts := make([]int, len(labels))
	for k, i := range order {
		parts[i] = 1 + k%min(mostParts, len(order))
	}
	return parts
}

// distinct returns the different values, ascending.
func distinct(values []int) []int {
	sorted := slices.Sorted(slices.Values(values))
	return slices.Compact(sorted)
}
