package augment_test

import (
	"errors"
	"maps"
	"math"
	"slices"
	"strings"
	"testing"

	"strandwise/augment"
	"strandwise/augment/variation"
)

// path3 is the spread at which a path would stand still.
const path3 = 1.0 / 3

func TestVariationValidate(t *testing.T) {
	recipe, path := augment.Default(), augment.Published(augment.Path)
	with := func(v augment.Variation, change func(*augment.Variation)) augment.Variation {
		v.Sizes = maps.Clone(v.Sizes)
		change(&v)
		return v
	}
	size := func(part variation.Part, size float64) augment.Variation {
		return with(recipe, func(v *augment.Variation) { v.Sizes[part] = size })
	}
	nan, below, above := math.NaN(), math.Nextafter(0, -1), 1.5
	for _, c := range []struct {
		name  string
		v     augment.Variation
		fault string // part of the message, empty for a legal variation
	}{
		{"recipe", recipe, ""},
		{"published, knots by regression", path, ""},
		{"zero value", augment.Variation{}, "method names no method"},
		{"method", with(recipe, func(v *augment.Variation) { v.Blend = []augment.Share{{Method: "wiggle", Weight: 1}} }), "legal names are recipe, path"},
		{"no weight", with(recipe, func(v *augment.Variation) { v.Blend = []augment.Share{{Method: augment.Path}} }), "weight of 0"},
		{"twice", with(recipe, func(v *augment.Variation) { v.Blend = append(v.Blend, v.Blend[0]) }), "names recipe twice"},
		{"kind", with(recipe, func(v *augment.Variation) { v.Kind = "dance" }), "legal names are measured, gesture, ongoing"},
		{"timing", with(recipe, func(v *augment.Variation) { v.Timing = "" }), "legal names are smooth, knots"},
		{"reach", with(recipe, func(v *augment.Variation) { v.Reach = 4 }), "reach is 4; it must lie between 0 and 3"},
		{"least knots", with(recipe, func(v *augment.Variation) { v.Knots = 3 }), ""},
		{"two knots", with(recipe, func(v *augment.Variation) { v.Knots = 2 }), "knots is 2"},
		{"knots left to the method", with(recipe, func(v *augment.Variation) { v.Knots = 0 }), ""},
		{"negative knots", with(path, func(v *augment.Variation) { v.Knots = -1 }), "knots is -1"},
		{"too many knots", with(recipe, func(v *augment.Variation) { v.Knots = 5000 }), "up to 4096"},
		{"most spread", with(recipe, func(v *augment.Variation) { v.Spread = math.Nextafter(path3, 0) }), ""},
		{"too much spread", with(recipe, func(v *augment.Variation) { v.Spread = path3 }), "spread is 0.333"},
		{"negative spread", with(recipe, func(v *augment.Variation) { v.Spread = below }), "spread is"},
		{"spread NaN", with(recipe, func(v *augment.Variation) { v.Spread = nan }), "spread is NaN"},
		{"time share 1.1", with(recipe, func(v *augment.Variation) { v.TimeShare = 1.1 }), "time_share is 1.1; it must lie between 0 and 1"},
		{"mix NaN", with(recipe, func(v *augment.Variation) { v.Mix = nan }), "mix is NaN"},
		{"path share", with(recipe, func(v *augment.Variation) { v.PathShare = -1 }), "path_share is -1"},
		{"straighten 1", size(variation.Straighten, 1), ""},
		{"straighten -0.1", size(variation.Straighten, -0.1), "straighten is -0.1"},
		{"trim 0.15", size(variation.Trim, 0.15), ""},
		{"trim 0.16", size(variation.Trim, 0.16), "trim is 0.16; it must lie between 0 and 0.15"},
		{"trim infinite", size(variation.Trim, math.Inf(1)), "trim is +Inf"},
		{"timing length 0", size(variation.TimingLength, 0), "timing_length is 0"},
		{"noise", size(variation.Noise, 2), ""},
		{"gain NaN", size(variation.Gain, nan), "gain is NaN"},
		{"coupling", with(recipe, func(v *augment.Variation) { v.Coupling = &above }), "coupling is 1.5"},
	} {
		err := c.v.Validate()
		if (err == nil) != (c.fault == "") || err != nil && !strings.Contains(err.Error(), c.fault) {
			t.Errorf("%s: error %v, want it to say %q", c.name, err, c.fault)
		}
		var outside *augment.RangeError
		if err != nil && (!errors.As(err, &outside) || !strings.HasPrefix(err.Error(), outside.Field+" "+outside.Problem)) {
			t.Errorf("%s: %#v does not tell the field", c.name, err)
		}
		if _, made := augment.NewMaker(c.v, training(), 1); (made == nil) != (err == nil) {
			t.Errorf("%s: NewMaker says %v, Validate %v", c.name, made, err)
		}
	}
}

func TestDefaultsAreLegal(t *testing.T) {
	for _, m := range augment.Methods() {
		v := augment.Published(m)
		if err := v.Validate(); err != nil || len(v.Blend) != 1 || v.Blend[0].Method != m {
			t.Errorf("%s: %+v, %v", m, v.Blend, err)
		}
	}
}

func TestParseMethod(t *testing.T) {
	for _, m := range augment.Methods() {
		if got, err := augment.ParseMethod(string(m)); got != m || err != nil {
			t.Errorf("%s: %q, %v", m, got, err)
		}
	}
	for _, name := range []string{"", "PATH", "path ", "timedpath"} {
		if _, err := augment.ParseMethod(name); err == nil || !strings.Contains(err.Error(), "recipe, path") {
			t.Errorf("%q: error %v does not list the legal methods", name, err)
		}
	}
}

func TestParseBlend(t *testing.T) {
	got, err := augment.ParseBlend([]string{"recipe=3", " path = 0.5", "jitter"})
	want := []augment.Share{{Method: augment.Recipe, Weight: 3}, {Method: augment.Path, Weight: 0.5}, {Method: augment.Jitter, Weight: 1}}
	if err != nil || !slices.Equal(got, want) {
		t.Errorf("%v, %v", got, err)
	}
	for _, bad := range []string{"recipe=", "recipe=much", "=3", "stretch=2"} {
		if _, err := augment.ParseBlend([]string{bad}); err == nil {
			t.Errorf("%q was taken", bad)
		}
	}
}
