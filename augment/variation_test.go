package augment_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"strandwise/augment"
	"strandwise/augment/path"
	"strandwise/channels"
)

func TestVariationValidate(t *testing.T) {
	timed := augment.Variation{Method: augment.TimedPath, Knots: 8, Spread: 0.1, TimeShare: 0.5, Coupling: 1}
	published := augment.Variation{Method: augment.Path, Spread: 0.25, Coupling: 1}
	with := func(v augment.Variation, change func(*augment.Variation)) augment.Variation {
		change(&v)
		return v
	}
	nan, below := math.NaN(), math.Nextafter(0, -1)
	for _, c := range []struct {
		name  string
		v     augment.Variation
		fault string // part of the message, empty for a legal variation
	}{
		{"timed", timed, ""},
		{"published, knots by regression", published, ""},
		{"zero value", augment.Variation{}, `method is ""`},
		{"method", with(timed, func(v *augment.Variation) { v.Method = "wiggle" }), "legal methods are timed-path, path"},
		{"least knots", with(timed, func(v *augment.Variation) { v.Knots = 3 }), ""},
		{"two knots", with(timed, func(v *augment.Variation) { v.Knots = 2 }), "knots is 2"},
		{"no knots", with(timed, func(v *augment.Variation) { v.Knots = 0 }), "knots is 0"},
		{"two published knots", with(published, func(v *augment.Variation) { v.Knots = 2 }), "knots is 2"},
		{"negative knots", with(published, func(v *augment.Variation) { v.Knots = -1 }), "knots is -1"},
		{"too many knots", with(timed, func(v *augment.Variation) { v.Knots = 5000 }), "up to 4096"},
		{"no spread", with(timed, func(v *augment.Variation) { v.Spread = 0 }), ""},
		{"most spread", with(timed, func(v *augment.Variation) { v.Spread = math.Nextafter(path.MaxSpread, 0) }), ""},
		{"too much spread", with(timed, func(v *augment.Variation) { v.Spread = path.MaxSpread }), "spread is 0.333"},
		{"negative spread", with(timed, func(v *augment.Variation) { v.Spread = below }), "spread is"},
		{"spread NaN", with(timed, func(v *augment.Variation) { v.Spread = nan }), "spread is NaN"},
		{"time share 0", with(timed, func(v *augment.Variation) { v.TimeShare = 0 }), ""},
		{"time share 1", with(timed, func(v *augment.Variation) { v.TimeShare = 1 }), ""},
		{"time share 1.1", with(timed, func(v *augment.Variation) { v.TimeShare = 1.1 }), "time_share is 1.1; it must lie between 0 and 1"},
		{"time share NaN", with(timed, func(v *augment.Variation) { v.TimeShare = nan }), "time_share is NaN"},
		{"straighten 1", with(timed, func(v *augment.Variation) { v.Straighten = 1 }), ""},
		{"straighten -0.1", with(timed, func(v *augment.Variation) { v.Straighten = -0.1 }), "straighten is -0.1"},
		{"straighten NaN", with(timed, func(v *augment.Variation) { v.Straighten = nan }), "straighten is NaN"},
		{"trim 0.15", with(timed, func(v *augment.Variation) { v.Trim = 0.15 }), ""},
		{"trim 0.16", with(timed, func(v *augment.Variation) { v.Trim = 0.16 }), "trim is 0.16; it must lie between 0 and 0.15"},
		{"trim infinite", with(timed, func(v *augment.Variation) { v.Trim = math.Inf(1) }), "trim is +Inf"},
		{"trim NaN", with(timed, func(v *augment.Variation) { v.Trim = nan }), "trim is NaN"},
		{"coupling 0", with(timed, func(v *augment.Variation) { v.Coupling = 0 }), ""},
		{"coupling 1.5", with(timed, func(v *augment.Variation) { v.Coupling = 1.5 }), "coupling is 1.5"},
		{"coupling NaN", with(timed, func(v *augment.Variation) { v.Coupling = nan }), "coupling is NaN"},
	} {
		err := c.v.Validate()
		if (err == nil) != (c.fault == "") || err != nil && !strings.Contains(err.Error(), c.fault) {
			t.Errorf("%s: error %v, want it to say %q", c.name, err, c.fault)
		}
		var outside *augment.RangeError
		if err != nil && (!errors.As(err, &outside) || !strings.HasPrefix(err.Error(), outside.Field+" "+outside.Problem)) {
			t.Errorf("%s: %#v does not tell the field", c.name, err)
		}
		if _, made := augment.NewMaker(c.v, new(channels.Scales), 1); (made == nil) != (err == nil) {
			t.Errorf("%s: NewMaker says %v, Validate %v", c.name, made, err)
		}
	}
}

func TestDefaultsAreLegal(t *testing.T) {
	for _, m := range augment.Methods() {
		v := augment.Default(m)
		if err := v.Validate(); err != nil || v.Method != m {
			t.Errorf("default of %s is for %s: %v", m, v.Method, err)
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
		if _, err := augment.ParseMethod(name); err == nil || !strings.Contains(err.Error(), "timed-path, path") {
			t.Errorf("%q: error %v does not list the legal methods", name, err)
		}
	}
}
