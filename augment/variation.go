package augment

import (
	"fmt"
	"slices"
	"strings"

	"strandwise/augment/path"
)

// Method names a way of making takes.
type Method string

// The methods. TimedPath is stochastic path resampling that keeps the clock;
// Path is the published method, which does not.
const (
	TimedPath Method = "timed-path"
	Path      Method = "path"
)

// Methods lists every method, the default first.
func Methods() []Method { return []Method{TimedPath, Path} }

// Variation says how synthetic takes differ from their source. Its zero value
// is not ready for use; start from [Default].
type Variation struct {
	Method Method

	// Knots is the number of points at which a path is resampled, at least 3.
	// Few knots vary much, many vary little. For Path, 0 takes the number from
	// the published regression (see path.Arc.Knots), kept between 3 and the
	// number of frames of the take.
	Knots int

	// Spread is the variance of an interval between knots about its mean of 1,
	// 0 ≤ Spread < 1/3.
	Spread float64

	// TimeShare, of TimedPath, is the weight of time against arc length in the
	// parameter along the path, 0 to 1.
	TimeShare float64

	// Straighten, of TimedPath, is the strength of displacement normalisation,
	// 0 to 1: 0 keeps the length of every displacement between knots, 1 makes
	// them equal, as Path always does.
	Straighten float64

	// Trim, of TimedPath, is the standard deviation of the shift of a take's
	// start and of its end, as a fraction of its duration, 0 to 0.15. A shift
	// outwards holds the end frame.
	Trim float64

	// Coupling is the correlation, 0 to 1, by which limbs share their timing:
	// 1 gives all limbs one timing, 0 each its own. Groups of one limb always
	// share theirs.
	Coupling float64
}

// Default returns the variation a method uses when nothing else is said.
func Default(m Method) Variation {
	if m == Path {
		// v = 0.25 and n by regression are the published choice.
		return Variation{Method: Path, Spread: 0.25, Coupling: 1}
	}
	// Chosen by the errors saved on five open sets; DEVELOPERS.md has the table.
	return Variation{Method: TimedPath, Knots: 6, Spread: 0.03, TimeShare: 0.5, Trim: 0.05, Coupling: 1}
}

// ParseMethod reads a method's name; the error lists the legal ones.
func ParseMethod(name string) (Method, error) {
	if m := Method(name); slices.Contains(Methods(), m) {
		return m, nil
	}
	return "", fmt.Errorf("unknown method %q; legal methods are %s", name, strings.Join(methodNames(), ", "))
}

func methodNames() []string {
	var out []string
	for _, m := range Methods() {
		out = append(out, string(m))
	}
	return out
}

// Bounds of a variation. Two trims at their largest draw leave a quarter of a
// take; more knots than this are no more than noise.
const (
	maxTrim  = 0.15
	maxKnots = 4096
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
	if _, err := ParseMethod(string(v.Method)); err != nil {
		return &RangeError{"method", fmt.Sprintf("is %q; legal methods are %s", v.Method, strings.Join(methodNames(), ", "))}
	}
	if (v.Knots < 3 || v.Knots > maxKnots) && (v.Knots != 0 || v.Method != Path) {
		return &RangeError{"knots", fmt.Sprintf("is %d; it must be 3 or more, up to %d (0, for method %s, takes the published regression)", v.Knots, maxKnots, Path)}
	}
	for _, f := range []struct {
		name      string
		value, to float64
	}{
		{"time_share", v.TimeShare, 1}, {"straighten", v.Straighten, 1}, {"trim", v.Trim, maxTrim}, {"coupling", v.Coupling, 1},
	} {
		if !(f.value >= 0 && f.value <= f.to) {
			return &RangeError{f.name, fmt.Sprintf("is %g; it must lie between 0 and %g", f.value, f.to)}
		}
	}
	if !(v.Spread >= 0 && v.Spread < path.MaxSpread) {
		return &RangeError{"spread", fmt.Sprintf("is %g; it must be 0 or more and less than 1/3, or a path would run backwards", v.Spread)}
	}
	return nil
}
