package template

import (
	"fmt"
	"maps"
	"math"
	"slices"
	"strings"
)

// Distance names how far two takes are apart; the package comment defines each.
type Distance string

// The distances.
const (
	EuclideanDependent   Distance = "euclidean-dependent"
	EuclideanIndependent Distance = "euclidean-independent"
	DTWDependent         Distance = "dtw-dependent"
	DTWIndependent       Distance = "dtw-independent"
	DirectionCosine      Distance = "direction-cosine"
)

// Distances lists every distance.
func Distances() []Distance {
	return []Distance{EuclideanDependent, EuclideanIndependent, DTWDependent, DTWIndependent, DirectionCosine}
}

// ParseDistance reads the name of a distance. The error lists the legal names.
func ParseDistance(text string) (Distance, error) {
	return parse("distance", text, Distances())
}

// Normalise names what is done to the values of a take before it is compared.
type Normalise string

// The normalisations, done on the take's own frames before any resampling.
//
// ZScore takes the mean off each channel of each take and divides by the
// channel's population standard deviation. GroupScale takes the same means off
// and divides by one scale per channel group, the root of the mean variance of
// its channels, which keeps the ratio of axes. A channel or group that does
// not change becomes zeros. A layout without groups is one group.
const (
	AsIs       Normalise = "none"
	ZScore     Normalise = "z"
	GroupScale Normalise = "group"
)

// Normalisations lists every normalisation.
func Normalisations() []Normalise { return []Normalise{AsIs, ZScore, GroupScale} }

// ParseNormalise reads the name of a normalisation. The error lists the legal
// names.
func ParseNormalise(text string) (Normalise, error) {
	return parse("normalisation", text, Normalisations())
}

func parse[T ~string](what, text string, legal []T) (T, error) {
	names := make([]string, len(legal))
	for i, l := range legal {
		if text == string(l) {
			return l, nil
		}
		names[i] = string(l)
	}
	return "", fmt.Errorf("unknown %s %q; legal names are %s", what, text, strings.Join(names, ", "))
}

// Metric says how two takes are compared.
type Metric struct {
	Distance  Distance
	Normalise Normalise // empty is AsIs
	// Band is the half width of the Sakoe–Chiba band as a fraction of the
	// longer take, above 0 and up to 1; 0 and 1 leave DTW unrestricted. See
	// [Metric.HalfWidth].
	Band float64
	// Length is the number of frames at which Euclidean distances are taken; 0
	// is that of the longest recorded training take. Takes of another length
	// are resampled linearly at equal intervals of their clock.
	Length int
	// Weights, when there are any, make the distance a sum over the layout's
	// channel groups: of the weight times the distance of the group's channels
	// by themselves. They go by the name of the group; a group they do not
	// name weighs 1, and one of weight 0 is left out.
	Weights map[string]float64
}

// Validate reports the first thing wrong with the metric.
func (m Metric) Validate() error {
	if _, err := ParseDistance(string(m.Distance)); err != nil {
		return err
	}
	if m.Normalise != "" {
		if _, err := ParseNormalise(string(m.Normalise)); err != nil {
			return err
		}
	}
	if !(m.Band >= 0 && m.Band <= 1) {
		return fmt.Errorf("band %g is not a fraction of the length; legal bands lie from 0 to 1, where 0 and 1 are the full window", m.Band)
	}
	if m.Length < 0 || m.Length == 1 {
		return fmt.Errorf("length %d is no length to compare takes at; legal lengths are 2 and more, or 0 for the longest training take", m.Length)
	}
	for _, name := range slices.Sorted(maps.Keys(m.Weights)) {
		if w := m.Weights[name]; !(w >= 0 && w <= heaviest) {
			return fmt.Errorf("weight %g of group %s; legal weights lie from 0 to %g", w, name, float64(heaviest))
		}
	}
	return nil
}

// heaviest is the largest weight: weighted distances stay finite.
const heaviest = 1e6

// bandSlack is taken off before rounding up, so that 0.1 of 130 frames is 13
// and not 14: it is far above the rounding error of the product and far below
// a frame.
const bandSlack = 1e-9

// HalfWidth returns the greatest |i − j| that frames i and j, from 0, of two
// takes of n and k frames may have on a DTW path: the band's fraction of the
// longer take rounded up to a whole frame, and at least |n − k|, without which
// there is no path.
func (m Metric) HalfWidth(n, k int) int {
	longer, apart := max(n, k), max(n-k, k-n)
	if m.Band == 0 || m.Band >= 1 {
		return longer
	}
	return max(apart, int(math.Ceil(m.Band*float64(longer)-bandSlack)))
}
