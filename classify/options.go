package classify

import (
	"errors"
	"fmt"
	"runtime"
	"slices"

	"strandwise/channels"
	"strandwise/classify/template"
)

// Options says how to score. Its zero value scores recorded takes alone by the
// automatic protocol.
type Options struct {
	Protocol Protocol

	// Distances are those of the nearest-template learners; none, with no other
	// learner, is euclidean-dependent and dtw-dependent. The first leads the verdict.
	Distances []template.Distance
	Normalise template.Normalise // empty is as is
	Band      float64            // of DTW, as a fraction of the longer take; 0 is 1, the full window
	// Weights of channel groups, by name, make distances sums over groups; see
	// [template.Metric]. None treats all channels as one.
	Weights  map[string]float64
	Learners []Learner // further learners, scored after the distances

	PerTake int    // synthetic takes per recorded training take; 0 scores recorded takes alone
	Method  string // what the report of [Score] calls the method that makes them; empty is "synthetic"
	// Curve lists smaller numbers of synthetic takes per recorded one to report
	// as well: the first that many in the order made.
	Curve []int

	// TakesPerLabel lists the numbers of recorded training takes per label to
	// score with, drawn at random; 0 is half of what each label has. An empty list is
	// that for Pooled, and all there are for Subject and Session. Given draws none.
	TakesPerLabel []int
	Repeats       int     // random splits drawn; 0 is 10, or 1 when one is left out at a time
	TestShare     float64 // of Subject and Session: the share tested in each split, below 1; 0 leaves one out at a time

	// Reject asks for the threshold on the distance to the nearest template
	// beyond which a movement should not be taken for a gesture. It costs up to
	// twice the time.
	Reject bool
	Rest   []*channels.Take // recorded movements that are no gesture, for Reject; their labels do not count

	Seed    uint64 // of the splits drawn and of resampling
	Workers int    // goroutines; 0 is one per processor; the report does not depend on it
}

// withDefaults returns the options with every zero that stands for a default
// filled in.
func (o Options) withDefaults() Options {
	if len(o.Distances)+len(o.Learners) == 0 {
		o.Distances = []template.Distance{template.EuclideanDependent, template.DTWDependent}
	}
	if o.Normalise == "" {
		o.Normalise = template.AsIs
	}
	if o.Band == 0 {
		o.Band = 1
	}
	if o.Method == "" {
		o.Method = "synthetic"
	}
	if o.Workers == 0 {
		o.Workers = runtime.GOMAXPROCS(0)
	}
	return o
}

// Validate reports every fault of the options.
func (o Options) Validate() error {
	var faults []error
	fault := func(format string, a ...any) { faults = append(faults, fmt.Errorf(format, a...)) }
	if _, err := ParseProtocol(string(o.Protocol)); err != nil {
		faults = append(faults, err)
	}
	for _, d := range o.Distances {
		if _, err := template.ParseDistance(string(d)); err != nil {
			faults = append(faults, err)
		}
	}
	if err := o.metric(template.EuclideanDependent).Validate(); err != nil {
		faults = append(faults, err)
	}
	for _, n := range []struct {
		name  string
		value int
	}{
		{"synthetic takes per recorded one", o.PerTake},
		{"repeats", o.Repeats},
		{"workers", o.Workers},
	} {
		if n.value < 0 {
			fault("%s: %d is below 0", n.name, n.value)
		}
	}
	for i, k := range o.TakesPerLabel {
		if k < 0 || slices.Contains(o.TakesPerLabel[:i], k) {
			fault("training takes per label: %d is below 0, or named twice", k)
		}
	}
	for _, m := range o.Curve {
		if m < 0 || m > o.PerTake {
			fault("curve: %d synthetic takes per recorded one; legal are 0 to %d, as many as are made", m, o.PerTake)
		}
	}
	if !(o.TestShare >= 0 && o.TestShare < 1) {
		fault("share to test: %g; legal are shares from 0, which tests one at a time, to below 1", o.TestShare)
	}
	if len(o.Rest) > 0 && !o.Reject {
		fault("movements that are no gesture are only used to find a threshold for rejection, which is not asked for")
	}
	return errors.Join(faults...)
}

func (o Options) metric(d template.Distance) template.Metric {
	return template.Metric{Distance: d, Normalise: o.Normalise, Band: o.Band, Weights: o.Weights}
}

// learners returns the learners in the order of the report.
func (o Options) learners() []Learner {
	var out []Learner
	for _, d := range o.Distances {
		out = append(out, NearestTemplate(o.metric(d)))
	}
	return append(out, o.Learners...)
}

// ends returns the numbers of synthetic takes at which a part ends, ascending:
// those of the curve, and all.
func (o Options) ends() []int {
	if o.PerTake == 0 {
		return nil
	}
	ends := []int{o.PerTake}
	for _, m := range o.Curve {
		if m > 0 {
			ends = append(ends, m)
		}
	}
	slices.Sort(ends)
	return slices.Compact(ends)
}
