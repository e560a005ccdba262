package chart_test

import (
	"math"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"strandwise/channels/chart"
)

func TestLimitsAreNeverLeft(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		lo := rapid.Float64Range(-100, 100).Draw(rt, "lo")
		hi := lo + rapid.Float64Range(1e-3, 100).Draw(rt, "range")
		u := rapid.SliceOfN(rapid.Float64Range(0, 1), 2, 20).Draw(rt, "share")
		data := make([]float64, len(u))
		for i := range u {
			data[i] = min(lo+u[i]*(hi-lo), hi)
		}
		take := named(t, "grip", data)
		c := newChart(t, take, chart.Options{Limits: map[string][2]float64{"grip": {lo, hi}}})
		if d := farthest(t, data, unchanged(c, take)); !(d <= 1e-9) {
			rt.Errorf("round trip is off by %g", d)
		}
		p := c.Plot(take)
		values := slices.Clone(p.Values)
		gain := rapid.Float64Range(-1e6, 1e6).Draw(rt, "gain")
		for i := range values {
			values[i] *= gain
		}
		for _, v := range c.Take(p, take.Time, values) {
			if !(v >= lo && v <= hi) {
				rt.Errorf("%g is not between %g and %g", v, lo, hi)
			}
		}
	})
}

// What rests at a limit stays there when amplified, and order is kept.
func TestLimitsSaturate(t *testing.T) {
	take := named(t, "grip", []float64{0, 0.2, 0.5, 0.8, 1, 1, 1.7})
	c := newChart(t, take, chart.Options{Limits: map[string][2]float64{"grip": {0, 1}}})
	p := c.Plot(take)
	values := slices.Clone(p.Values)
	for i := range values {
		values[i] = 0.5 + 1.2*(values[i]-0.5)
	}
	got := c.Take(p, take.Time, values)
	if !slices.IsSorted(got) || got[0] != 0 || got[4] != 1 || got[6] != 1 || got[1] >= 0.2 || got[3] <= 0.8 || got[2] != 0.5 {
		t.Errorf("amplified: %v", got)
	}
}

func TestSensorsAreCutOff(t *testing.T) {
	take := named(t, "a.pos.x a.pos.y", []float64{-2, 0, 2, 0.5})
	c := newChart(t, take, chart.Options{Limits: map[string][2]float64{"a.pos.x": {-1, 1}}})
	p := c.Plot(take)
	if got, want := c.Take(p, take.Time, slices.Clone(p.Values)), []float64{-1, 0, 1, 0.5}; !slices.Equal(got, want) {
		t.Errorf("cut off: %v, want %v", got, want)
	}
}

func TestFaultyLimits(t *testing.T) {
	const quaternion = "a.ornt.quat_x a.ornt.quat_y a.ornt.quat_z a.ornt.quat_w"
	cases := []struct {
		headers, channel string
		limit            [2]float64
		want             string
	}{
		{"grip", "grap", [2]float64{0, 1}, "limits: there is no channel grap"},
		{"grip", "grip", [2]float64{1, 1}, "limits: channel grip: 1 to 1 is no range"},
		{"grip", "grip", [2]float64{0, math.NaN()}, "limits: channel grip: 0 to NaN is no range"},
		{"grip", "grip", [2]float64{0, math.Inf(1)}, "limits: channel grip: 0 to +Inf is no range"},
		{quaternion, "a.ornt.quat_x", [2]float64{0, 1}, "limits: channel a.ornt.quat_x is part of a place or turn that must stay whole"},
	}
	for _, c := range cases {
		take := named(t, c.headers, nil)
		_, err := chart.New(take.Layout, nil, chart.Options{Limits: map[string][2]float64{c.channel: c.limit}})
		if err == nil || !strings.HasPrefix(err.Error(), c.want) {
			t.Errorf("error %v, want %s", err, c.want)
		}
	}
}
