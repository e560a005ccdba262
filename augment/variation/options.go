package variation

import (
	"fmt"
	"runtime"

	"strandwise/channels/align"
)

// Options says how much work a measurement may do. Start from [Default].
type Options struct {
	Seed    uint64 // of the choice of pairs, the draws of the model and the weightings
	Pairs   int    // ordered pairs of takes per label at most
	Total   int    // ordered pairs over all labels at most, two per label at least
	Draws   int    // pairs drawn from the model over all labels
	Weights int    // random weightings of the takes behind an interval
	Frames  int    // frames to which takes are brought, at least 16
	Workers int    // goroutines; the result does not depend on it
	Align   align.Options
}

// Default returns the options used when nothing else is said: 400 pairs per
// label, 6000 in all, takes of 64 frames.
func Default() Options {
	return Options{
		Pairs: 400, Total: 6000, Draws: 1600, Weights: 200, Frames: 64,
		Workers: runtime.GOMAXPROCS(0), Align: align.Default(),
	}
}

// Validate reports the first value that is of no use.
func (o Options) Validate() error {
	for _, f := range []struct {
		name         string
		value, least int
	}{
		{"pairs", o.Pairs, 2}, {"total pairs", o.Total, 2}, {"draws", o.Draws, 1},
		{"weights", o.Weights, 20}, {"frames", o.Frames, 16}, {"workers", o.Workers, 1},
	} {
		if f.value < f.least {
			return fmt.Errorf("measure variation: %s is %d; it must be at least %d", f.name, f.value, f.least)
		}
	}
	return nil
}
