package realism

import (
	"context"
	"fmt"

	"strandwise/channels"
	"strandwise/classify"
)

// Variant is one maker of a comparison: a method, or the first maker with one
// part left out, under the name of that part.
type Variant struct {
	Name  string
	Maker classify.Maker
}

// Comparison is one maker of a comparison.
type Comparison struct {
	Name   string  `json:"name"`
	Report *Report `json:"report"`
	// Accuracy of the witness for all labels together, less that for the first
	// maker, on the same sources, kernels and folds. Where the variant is the
	// first maker without a part, that part gives takes away by as much as this
	// is below 0.
	Accuracy Change `json:"accuracy"`
}

// Compare measures several makers on the same recorded takes and holds each
// against the first.
func Compare(ctx context.Context, takes []*channels.Take, scales *channels.Scales, variants []Variant, o Options) ([]Comparison, error) {
	s, err := newSample(ctx, takes, scales, o)
	if err != nil {
		return nil, err
	}
	var out []Comparison
	for _, v := range variants {
		r, err := s.report(ctx, v.Maker)
		if err != nil {
			if v.Name != "" {
				err = fmt.Errorf("%s: %w", v.Name, err)
			}
			return nil, err
		}
		c := Comparison{Name: v.Name, Report: r}
		if len(out) > 0 {
			c.Accuracy = paired(out[0].Report.together, r.together)
		}
		out = append(out, c)
	}
	return out, nil
}

// paired returns the mean difference of two makers on the same sources.
func paired(a, b []float64) Change {
	differences := make([]float64, len(a))
	for i := range a {
		differences[i] = b[i] - a[i] // NaN where one was not tested
	}
	c, _ := change(differences)
	return c
}

// GivesAway returns the name of the part whose absence lowers the witness's
// accuracy most, of a comparison of a maker with variants that lack one part
// each; empty when none lowers it.
func GivesAway(all []Comparison) string {
	name, least := "", 0.0
	for i, c := range all {
		if i > 0 && c.Accuracy.Mean < least {
			name, least = c.Name, c.Accuracy.Mean
		}
	}
	return name
}
