package realism

import (
	"errors"
	"fmt"

	"strandwise/classify/convolution"
)

// Options bounds what realism is measured on. Its zero value is the default.
type Options struct {
	MostPerLabel int                   // recorded takes looked at per label, those that come first; 0 is 24
	PerTake      int                   // synthetic takes made from each; 0 is 4
	Folds        int                   // parts of the witness's cross-validation, 2 or more; 0 is 5
	Kernels      int                   // of the witness; 0 is 300
	Normalise    convolution.Normalise // of the witness; empty is as is, on takes whose groups are scaled alike
	Seed         uint64                // of the witness's kernels and folds
}

// Defaults of the options.
const (
	defaultMostPerLabel = 24
	defaultPerTake      = 4
	defaultFolds        = 5
)

// Validate reports every fault of the options.
func (o Options) Validate() error {
	var faults []error
	for _, n := range []struct {
		name  string
		value int
	}{{"recorded takes per label", o.MostPerLabel}, {"synthetic takes per recorded one", o.PerTake}, {"folds", o.Folds}} {
		if n.value < 0 {
			faults = append(faults, fmt.Errorf("%s: %d is below 0", n.name, n.value))
		}
	}
	if o.Folds == 1 {
		faults = append(faults, errors.New("folds: 1 leaves nothing to train on; legal are 2 and more, or 0 for 5"))
	}
	return errors.Join(append(faults, o.kernels().Validate())...)
}

func (o Options) withDefaults() Options {
	if o.MostPerLabel == 0 {
		o.MostPerLabel = defaultMostPerLabel
	}
	if o.PerTake == 0 {
		o.PerTake = defaultPerTake
	}
	if o.Folds == 0 {
		o.Folds = defaultFolds
	}
	if o.Normalise == "" {
		o.Normalise = convolution.AsIs
	}
	return o
}

func (o Options) kernels() convolution.Options {
	return convolution.Options{Kernels: o.Kernels, Normalise: o.Normalise}
}
