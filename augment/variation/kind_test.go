package variation_test

import (
	"math"
	"testing"

	"strandwise/augment/variation"
	"strandwise/channels"
)

func TestMotion(t *testing.T) {
	l := layoutOf(t, []string{"accel.x", "accel.y", "accel.z"})
	bell := func(u float64) float64 { return math.Exp(-square(u-0.5) / 0.02) }
	for _, c := range []struct {
		name  string
		value func(c int, u float64) float64
		want  variation.Kind
	}{
		{"a stroke between rests", func(c int, u float64) float64 { return float64(c+1) * bell(u) }, variation.Gesture},
		{"a stretch of a repeating motion", func(c int, u float64) float64 { return math.Sin(30*u + float64(c)) }, variation.Ongoing},
		{"repeating, between rests", func(c int, u float64) float64 { return bell(u) * math.Sin(60*u+float64(c)) }, variation.Gesture},
		{"cut short, not repeating", func(c int, u float64) float64 { return u*float64(c+1) + u*u }, variation.Gesture},
	} {
		// One take is enough.
		m := measure(t, quick(), takeOf(l, c.name, 0, 80, c.value))
		for _, label := range []string{"", c.name} {
			if k := m.Motion(label); k.Kind != c.want || k.Label != label || k.Takes != 1 {
				t.Errorf("%s: %+v, want %s", c.name, k, c.want)
			}
		}
	}
}

func square(x float64) float64 { return x * x }

// The kinds of the open sets, and figures near those the thresholds were set
// by: ends activity 0.70 and 0.82 in the ongoing sets and 0.14–0.22 in the
// others, periodicity 0.90 and 0.96 against 0–0.18 (the experiment behind the
// recipe).
func TestMotionOfOpenSets(t *testing.T) {
	for _, c := range []struct {
		set  string
		want variation.Kind
	}{
		{"BasicMotions", variation.Ongoing}, {"Epilepsy", variation.Ongoing}, {"Libras", variation.Gesture},
		{"NATOPS", variation.Gesture}, {"UWaveGestureLibrary", variation.Gesture}, {"UTD_MHAD_inertial", variation.Gesture},
	} {
		takes := openSet(t, c.set)
		one := map[string]*channels.Take{} // the first take of each label is enough
		for _, k := range takes {
			if one[k.Label] == nil {
				one[k.Label] = k
			}
		}
		var few []*channels.Take
		for _, k := range one {
			few = append(few, k)
		}
		o := variation.Default()
		m := measure(t, o, few...)
		k := m.Motion("")
		t.Logf("%s: %s, ends %.2f, periodicity %.2f by %d takes", c.set, k.Kind, k.Ends, k.Periodicity, k.Takes)
		if k.Kind != c.want {
			t.Errorf("%s: %+v, want %s", c.set, k, c.want)
		}
		switch {
		case c.want == variation.Ongoing && (k.Ends < 0.6 || k.Periodicity < 0.6):
			t.Errorf("%s: ends %v, periodicity %v", c.set, k.Ends, k.Periodicity)
		case c.want == variation.Gesture && (k.Ends > 0.35 || k.Periodicity > 0.35):
			t.Errorf("%s: ends %v, periodicity %v", c.set, k.Ends, k.Periodicity)
		}
	}
}
