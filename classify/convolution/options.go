package convolution

import (
	"cmp"
	"errors"
	"fmt"
	"strings"
)

// Normalise names what is done to the values of a take before it meets the
// kernels.
type Normalise string

// The normalisations. ZScore takes the mean off each channel of each take and
// divides by its population standard deviation, at the common number of
// frames; a channel that does not change becomes zeros. AsIs leaves values in
// the units of the layout: sizes then tell gestures apart, but channels of
// large numbers outweigh the others, and the kernels' constants, which lie
// within ±1.
const (
	ZScore Normalise = "z"
	AsIs   Normalise = "none"
)

// Normalisations lists every normalisation.
func Normalisations() []Normalise { return []Normalise{ZScore, AsIs} }

// ParseNormalise reads the name of a normalisation. The error lists the legal
// names.
func ParseNormalise(text string) (Normalise, error) {
	names := make([]string, 0, len(Normalisations()))
	for _, n := range Normalisations() {
		if text == string(n) {
			return n, nil
		}
		names = append(names, string(n))
	}
	return "", fmt.Errorf("unknown normalisation %q; legal names are %s", text, strings.Join(names, ", "))
}

// Options says how takes are described. Its zero value is 300 kernels on
// z-normalised takes of 64 frames.
type Options struct {
	Kernels   int       // kernels drawn, two features each; 0 is 300
	Length    int       // frames at which takes are read, 11 or more; 0 is 64
	Normalise Normalise // empty is ZScore
}

// Validate reports every fault of the options.
func (o Options) Validate() error {
	var faults []error
	if o.Kernels < 0 {
		faults = append(faults, fmt.Errorf("kernels: %d is below 0; legal numbers are 1 and more, or 0 for %d", o.Kernels, defaultKernels))
	}
	if longest := lengths[len(lengths)-1]; o.Length != 0 && o.Length < longest {
		faults = append(faults, fmt.Errorf("length: %d frames are too few for kernels of %d taps; legal lengths are %d and more, or 0 for %d", o.Length, longest, longest, defaultLength))
	}
	if o.Normalise != "" {
		if _, err := ParseNormalise(string(o.Normalise)); err != nil {
			faults = append(faults, err)
		}
	}
	return errors.Join(faults...)
}

const (
	defaultKernels = 300
	defaultLength  = 64
)

// withDefaults returns the options with every zero filled in.
func (o Options) withDefaults() Options {
	o.Kernels = cmp.Or(o.Kernels, defaultKernels)
	o.Length = cmp.Or(o.Length, defaultLength)
	o.Normalise = cmp.Or(o.Normalise, ZScore)
	return o
}
