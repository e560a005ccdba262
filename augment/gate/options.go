package gate

import (
	"errors"
	"fmt"
	"slices"
)

// Options says which gates there are and how wide they stand. Start from
// [Default]; the zero value lets next to nothing through.
//
// Range, Jerk and Bandwidth hold where there are many recorded takes. Where
// there are few, these gates stand wider: Range by a factor of 1 + 8 / training
// takes, the other two by 1 + 1 / training takes of the label.
type Options struct {
	Off []Gate // gates that are not applied; what they measure is still kept

	Range     float64 // at most this far outside, as a share of the group's range
	Jerk      float64 // at most this multiple of recorded jerk
	Bandwidth float64 // at most this multiple of the recorded share of power in the upper half of the band
	Bones     float64 // at most this relative deviation of a bone's length, beyond its source's own
	Stray     float64 // at most this multiple of the distance to another label; see [Source.Check] for where recorded takes raise it
	Copy      float64 // at least this share of the distance to the source's nearest neighbour

	BoneList []Bone // bones whose length is held; none, and the gate has nothing to say
	Clips    []Clip // levels at which the sensor clips; nil finds them in the recorded takes

	References int // recorded takes kept of each label to measure nearness by; 0 is 16
}

// Default returns options that recorded takes pass: of takes of six open sets
// held out from 2 to 8 training takes per label, between none and 7 % fail any
// one gate. With one take per label there is nothing to tell by how far takes
// of a label stray; up to 17 % then do. BenchmarkPassing measures it.
func Default() Options {
	return Options{Range: 0.2, Jerk: 1.5, Bandwidth: 2, Bones: 0.005, Stray: 1, Copy: 0.05, References: defaultReferences}
}

const (
	defaultReferences = 16
	mostReferences    = 512 // of all labels together, but at least one of each
)

// Bone joins two tracked points that stay at one distance.
type Bone struct {
	Name     string
	From, To []int   // channels of the points' positions, in the same order of axes
	Length   float64 // metres; 0 takes the mean over the source take
}

// Clip is a level at which a sensor stops.
type Clip struct {
	Channel   int
	Low, High float64 // in the channel's unit; infinite where it does not stop
}

// Validate reports every fault of the options.
func (o Options) Validate() error {
	var faults []error
	for _, f := range []struct {
		name  string
		value float64
	}{
		{"range", o.Range}, {"jerk", o.Jerk}, {"bandwidth", o.Bandwidth}, {"bones", o.Bones}, {"stray", o.Stray}, {"copy", o.Copy},
	} {
		if !(f.value >= 0) {
			faults = append(faults, fmt.Errorf("gate %s: threshold %g is not a number from 0 up", f.name, f.value))
		}
	}
	for _, g := range o.Off {
		if g < 0 || int(g) >= number {
			faults = append(faults, fmt.Errorf("gate number %d does not exist; legal gates are %v", int(g), All()))
		}
	}
	for _, b := range o.BoneList {
		if len(b.From) == 0 || len(b.From) != len(b.To) || !(b.Length >= 0) {
			faults = append(faults, fmt.Errorf("bone %s: it needs as many channels at one end as at the other, and a length from 0 up", b.Name))
		}
	}
	if o.References < 0 {
		faults = append(faults, fmt.Errorf("references kept per label: %d is below 0", o.References))
	}
	return errors.Join(faults...)
}

// applies tells whether a gate decides.
func (o Options) applies(g Gate) bool { return !slices.Contains(o.Off, g) }

// passes tells whether a measured figure is within the gate's threshold.
// Nothing measured passes.
func (o Options) passes(g Gate, value, allowed float64) bool {
	switch g {
	case Finite:
		return value == 0
	case Copy:
		return !(value < o.Copy)
	}
	return !(value > allowed)
}
