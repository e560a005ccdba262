package bvh

import (
	"fmt"
	"slices"
	"strings"

	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
)

// LengthUnits lists the units of length a file may be in.
func LengthUnits() []string { return []string{"m", "cm", "mm", "in"} }

func isLengthUnit(unit string) bool { return slices.Contains(LengthUnits(), unit) }

// metres returns the metres of one unit of length.
func metres(unit string) float64 {
	u, err := channels.ParseUnit(unit)
	if err != nil || u.Quantity != channels.Position {
		panic("bvh: not a unit of length")
	}
	return u.Factor
}

// The span of a person's skeleton in metres: see the package documentation.
// Their ratio is below 2.54, so that at most one unit of length fits.
const (
	minSpan = 1.2
	maxSpan = 3.0
)

// guessUnit judges the unit of length by the span of the skeleton in it, and
// tells on what evidence.
func guessUnit(span float64) (unit, evidence string) {
	for _, unit := range LengthUnits() {
		if m := span * metres(unit); m >= minSpan && m <= maxSpan {
			return unit, fmt.Sprintf("its skeleton then spans %.2f m along the bones, as a person's does", m)
		}
	}
	return "cm", fmt.Sprintf("its skeleton spans %.4g along the bones, which is a person in none of %s", span, strings.Join(LengthUnits(), ", "))
}

// rescale turns a skeleton with lengths in the file's unit into metres.
func rescale(s *body.Skeleton, unit string) {
	s.Unit = unit
	f := metres(unit)
	for i := range s.Joints {
		s.Joints[i].Offset = r3.Scale(f, s.Joints[i].Offset)
	}
}
