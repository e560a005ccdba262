package classify

import (
	"errors"
	"fmt"
	"runtime"
	"strings"

	"strandwise/channels"
	"strandwise/classify/template"
)

// Maker makes synthetic takes. It must be safe for use by several goroutines
// at a time, and what it makes of a take must not depend on the calls before.
type Maker interface {
	// Make returns at most n synthetic takes made from source, fewer when it
	// cannot make n sound ones. They belong to the caller; their channels are
	// those of source, and their label is taken to be its label.
	Make(source *channels.Take, n int) ([]*channels.Take, error)
}

// Fit measures how the training takes of one split vary, and returns a maker
// that draws from that. It must not keep what it learns for another call: each
// split is to know its own training takes only.
type Fit func(training []*channels.Take) (Maker, error)

// Protocol says which takes train and which are tested.
type Protocol string

// The protocols. Auto is Given when any take is of the test split, else
// Subject when there are three subjects or more, else Pooled.
const (
	Auto    Protocol = ""
	Given   Protocol = "given"   // the split the recordings state; takes that state none train
	Subject Protocol = "subject" // each subject in turn is tested, the others train
	Pooled  Protocol = "pooled"  // some takes of each label, drawn at random, train; the rest are tested
)

// Protocols lists the protocols that can be named.
func Protocols() []Protocol { return []Protocol{Given, Subject, Pooled} }

// ParseProtocol reads the name of a protocol; an empty text is Auto. The error
// lists the legal names.
func ParseProtocol(text string) (Protocol, error) {
	names := make([]string, 0, len(Protocols()))
	for _, p := range append(Protocols(), Auto) {
		if text == string(p) {
			return p, nil
		}
		names = append(names, string(p))
	}
	return Auto, fmt.Errorf("unknown protocol %q; legal protocols are %s", text, strings.Join(names[:len(names)-1], ", "))
}

// Options says how to score. Its zero value scores recorded takes alone by the
// automatic protocol.
type Options struct {
	Protocol  Protocol
	Distances []template.Distance // none is euclidean-dependent and dtw-dependent; the first leads the verdict
	Normalise template.Normalise  // empty is as is
	Band      float64             // of DTW, as a fraction of the longer take; 0 is 1, the full window

	PerTake int    // synthetic takes per recorded training take; 0 scores recorded takes alone
	Method  string // what the report calls the method that makes them; empty is "synthetic"

	TakesPerLabel int // of Pooled: training takes per label; 0 is half of what each label has
	Repeats       int // of Pooled: splits drawn; 0 is 10

	Seed    uint64 // of the splits drawn
	Workers int    // goroutines; 0 is one per processor; the report does not depend on it
}

// withDefaults returns the options with every zero that stands for a default
// filled in.
func (o Options) withDefaults() Options {
	if len(o.Distances) == 0 {
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
	if _, err := ParseProtocol(string(o.Protocol)); err != nil {
		faults = append(faults, err)
	}
	for _, d := range o.Distances {
		if _, err := template.ParseDistance(string(d)); err != nil {
			faults = append(faults, err)
		}
	}
	shared := template.Metric{Distance: template.EuclideanDependent, Normalise: o.Normalise, Band: o.Band}
	if err := shared.Validate(); err != nil {
		faults = append(faults, err)
	}
	for _, n := range []struct {
		name  string
		value int
	}{
		{"synthetic takes per recorded one", o.PerTake},
		{"training takes per label", o.TakesPerLabel},
		{"repeats", o.Repeats},
		{"workers", o.Workers},
	} {
		if n.value < 0 {
			faults = append(faults, fmt.Errorf("%s: %d is below 0", n.name, n.value))
		}
	}
	return errors.Join(faults...)
}

// metrics returns one metric per distance.
func (o Options) metrics() []template.Metric {
	out := make([]template.Metric, len(o.Distances))
	for i, d := range o.Distances {
		out[i] = template.Metric{Distance: d, Normalise: o.Normalise, Band: o.Band}
	}
	return out
}
