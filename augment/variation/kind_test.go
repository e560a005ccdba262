package variation_test

import (
	"math"
	"testing"

	"strandwise/augment/variation"
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
