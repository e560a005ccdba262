package augment_test

import (
	"math"
	"slices"
	"testing"

	"strandwise/augment/path"
	"strandwise/augment/variation"
)

// The definition, seen in a finished take: with 12 points over 56 frames every
// fifth frame is a point, every group moves by the same length from point to
// point, and these lengths sum to the length of the group's path.
func TestPathMatchesItsDefinition(t *testing.T) {
	take := wander(sensorLayout(t, 1), "take", 56, 1)
	source := source(t, published(), 1, take)
	want := path.NewArc(take.Data, take.Width()).Length() / 11
	for k := range 20 {
		got := source.Draw(k)
		if !slices.Equal(got.Frame(0), take.Frame(0)) || !slices.Equal(got.Time, take.Time) {
			t.Errorf("draw %d does not begin and run as its source", k)
		}
		for i, d := range steps(got, 5) {
			if math.Abs(d-want) > 1e-12*want {
				t.Errorf("draw %d: step %d is %v long, want %v", k, i, d, want)
			}
		}
	}
}

// Options of the other method do not touch the published one.
func TestPathKnowsNoTiming(t *testing.T) {
	take := wander(sensorLayout(t, 2), "take", 50, 1)
	v := published()
	want := source(t, v, 1, take).Draw(0)
	v.TimeShare, v.Mix, v.Sizes[variation.Trim] = 0.7, 0.5, 0.1
	if got := source(t, v, 1, take).Draw(0); !slices.Equal(got.Data, want.Data) {
		t.Error("time share, mix or trim changed the draw")
	}
}

// Without a number of knots the published regression gives it, for the whole
// take in units of its groups' sizes, between 3 and the number of frames.
func TestPathKnotsByRegression(t *testing.T) {
	v := published()
	v.Knots = 0
	knots := func(frames int) float64 {
		take := wander(sensorLayout(t, 1), "take", frames, 1)
		return source(t, v, 1, take).Draw(0).Made.Parameters["knots"]
	}
	take := wander(sensorLayout(t, 1), "take", 200, 1)
	if got, want := knots(200), math.Round(path.NewArc(take.Data, take.Width()).Knots()); got != want || want > 200 {
		t.Errorf("%v knots, want %v", got, want)
	}
	if got := knots(4); got < 3 || got > 4 {
		t.Errorf("%v knots for 4 frames", got)
	}
	if got := knots(2); got != 3 {
		t.Errorf("%v knots for 2 frames, want the least, 3", got)
	}
}
