package augment

import (
	"fmt"
	"slices"
	"strings"

	"strandwise/augment/path"
	"strandwise/augment/variation"
)

// Kind tells what a take is a record of.
type Kind string

// The kinds of motion. AsMeasured leaves it to the training takes.
const (
	AsMeasured Kind = "measured"
	Gesture    Kind = "gesture" // with rest at its ends
	Ongoing    Kind = "ongoing" // a stretch cut out of a motion that repeats
)

// Timing names a way of drawing what is shown when.
type Timing string

// The ways of drawing a timing. Smooth draws the rate of playing as a smooth
// random process, Knots the intervals between a few knots.
const (
	Smooth Timing = "smooth"
	Knots  Timing = "knots"
)

// Variation says how synthetic takes differ from their source. Its zero value
// is not ready for use; start from [Default].
type Variation struct {
	// Blend lists the methods that takes are made by, each with the share of the
	// draws it makes. The rest of a variation is about Recipe, but for Knots,
	// Spread and Coupling, which Path follows too.
	Blend []Share

	// Reach is a factor on every size, 0 to 3.
	Reach float64

	// Sizes are the sizes that are given: they take the place of what was
	// measured on training takes. Noise is not a size but a factor on the
	// measured one, 0 to 2.
	Sizes map[variation.Part]float64

	// Kind says which branch of the recipe is taken.
	Kind Kind

	// Timing says how it is drawn what is shown when.
	Timing Timing

	// Knots is the number of points at which a path is resampled, at least 3, and
	// Spread the variance of an interval between knots about its mean of 1, 0 ≤
	// Spread < 1/3. Few knots vary much, many vary little. 0 knots leave the
	// number to the method: the published regression for Path (see
	// path.Arc.Knots), kept between 3 and the number of frames of the take, and
	// 6 for Recipe.
	Knots  int
	Spread float64

	// TimeShare is the weight of time against arc length in the parameter along
	// the path on which timing is drawn, 0 to 1.
	TimeShare float64

	// Mix is the largest share, drawn uniformly from 0, of another take of the
	// label, aligned in time; 0 to 1.
	Mix float64

	// PathShare is the share of draws that Path makes instead of Recipe, with 16
	// knots, where every channel is a position or a velocity; 0 to 1.
	PathShare float64

	// Coupling is the correlation, 0 to 1, by which limbs share their timing: 1
	// gives all limbs one timing, 0 each its own. Nil takes it as measured. Groups
	// of one limb always share theirs.
	Coupling *float64

	// Spare lists labels of whose takes none are made.
	Spare []string

	// Dropped holds the ids of synthetic takes that a person does not want.
	Dropped map[string]bool

	// FreeFeet lets feet that stand still in the source move.
	FreeFeet bool
}

// Default returns the variation used when nothing else is said.
func Default() Variation {
	return Variation{
		Blend: []Share{{Recipe, 1}}, Reach: 1, Sizes: map[variation.Part]float64{},
		Kind: AsMeasured, Timing: Smooth, Spread: 0.03, TimeShare: 1, Mix: 0.6, PathShare: 0.25,
	}
}

// Published returns a published method by itself, as it is published.
func Published(m Method) Variation {
	v := Default()
	v.Blend = []Share{{m, 1}}
	v.Spread = 0.25 // of Path, which together with knots by regression is the published choice
	return v
}

// parse reads a name; the error lists the legal ones.
func parse[T ~string](what, name string, legal []T) (T, error) {
	if slices.Contains(legal, T(name)) {
		return T(name), nil
	}
	list := make([]string, len(legal))
	for i, l := range legal {
		list[i] = string(l)
	}
	return "", fmt.Errorf("unknown %s %q; legal names are %s", what, name, strings.Join(list, ", "))
}

// Bounds of a variation. Two trims at their largest draw leave a quarter of a
// take; more knots than this are no more than noise.
const (
	maxTrim  = 0.15
	maxKnots = 4096
	maxReach = 3
)

// RangeError says that one value of a variation is outside its legal range.
type RangeError struct {
	Field   string // name of the field in lower case, words joined by underscores: "time_share"
	Problem string // what is wrong and what would be legal
}

// Error gives the field and its problem.
func (e *RangeError) Error() string { return e.Field + " " + e.Problem }

// Validate reports the first value outside its legal range, as a *RangeError.
func (v Variation) Validate() error {
	if err := v.validateNames(); err != nil {
		return err
	}
	if (v.Knots < 3 || v.Knots > maxKnots) && v.Knots != 0 {
		return &RangeError{"knots", fmt.Sprintf("is %d; it must be 3 or more, up to %d, or 0 to leave it to the method", v.Knots, maxKnots)}
	}
	if !(v.Spread >= 0 && v.Spread < path.MaxSpread) {
		return &RangeError{"spread", fmt.Sprintf("is %g; it must be 0 or more and less than 1/3, or a path would run backwards", v.Spread)}
	}
	fields := []span{{"reach", v.Reach, 0, maxReach}, {"time_share", v.TimeShare, 0, 1}, {"mix", v.Mix, 0, 1}, {"path_share", v.PathShare, 0, 1}}
	if v.Coupling != nil {
		fields = append(fields, span{"coupling", *v.Coupling, 0, 1})
	}
	for _, part := range variation.Parts() {
		if size, ok := v.Sizes[part]; ok {
			fields = append(fields, partSpan(part, size))
		}
	}
	for _, f := range fields {
		if !(f.value >= f.from && f.value <= f.to) {
			return &RangeError{f.name, fmt.Sprintf("is %g; it must lie between %g and %g", f.value, f.from, f.to)}
		}
	}
	return nil
}

// span is a field with its legal range.
type span struct {
	name            string
	value, from, to float64
}

func partSpan(part variation.Part, size float64) span {
	s := span{strings.ReplaceAll(string(part), " ", "_"), size, 0, 1}
	switch part {
	case variation.TimingLength, variation.ShapeLength:
		s.from, s.to = 0.02, 10
	case variation.Trim:
		s.to = maxTrim
	case variation.Orientation:
		s.to = 3.2
	case variation.Noise:
		s.to = 2
	}
	return s
}

func (v Variation) validateNames() error {
	if len(v.Blend) == 0 {
		return &RangeError{"method", "names no method"}
	}
	for i, s := range v.Blend {
		if _, err := ParseMethod(string(s.Method)); err != nil {
			return &RangeError{"method", "is impossible: " + err.Error()}
		}
		if !(s.Weight > 0 && s.Weight < 1e9) {
			return &RangeError{"method", fmt.Sprintf("gives %s a weight of %g; it must be above 0", s.Method, s.Weight)}
		}
		if slices.ContainsFunc(v.Blend[:i], func(o Share) bool { return o.Method == s.Method }) {
			return &RangeError{"method", fmt.Sprintf("names %s twice", s.Method)}
		}
	}
	if _, err := parse("kind", string(v.Kind), []Kind{AsMeasured, Gesture, Ongoing}); err != nil {
		return &RangeError{"kind", "is impossible: " + err.Error()}
	}
	if _, err := parse("timing", string(v.Timing), []Timing{Smooth, Knots}); err != nil {
		return &RangeError{"timing", "is impossible: " + err.Error()}
	}
	return nil
}
