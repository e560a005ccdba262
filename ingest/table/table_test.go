package table_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
	"strandwise/ingest/table"
)

func TestNames(t *testing.T) {
	for name, want := range map[string]string{"take": "take", "LABEL": "label", "Subject": "subject", "session": "session", "split": "split", "takes": "", "": "", "id": ""} {
		if got := table.Key(name); got != want {
			t.Errorf("Key(%q) = %q, want %q", name, got, want)
		}
	}
	for _, key := range table.Keys() {
		if new(raw.Identity).Field(key) == nil {
			t.Errorf("%s is no field of an identity", key)
		}
	}
	times := map[string]string{"time": "", "t_ms": "ms", "Timestamp [us]": "us", "Time (s)": "s", "elapsed.NS": "ns", "time_milliseconds": "ms"}
	for name, want := range times {
		if unit, ok := table.IsTime(name); !ok || unit != want {
			t.Errorf("IsTime(%q) = %q, %v; want %q", name, unit, ok, want)
		}
	}
	for _, name := range []string{"", "timer", "time_of_day", "time_x", "ax", "ms", "start_time"} {
		if _, ok := table.IsTime(name); ok {
			t.Errorf("%q is taken for a time", name)
		}
	}
	for name, want := range map[string]bool{"frame": true, "Index": true, "frame_index": true, "frames": false, "": false} {
		if table.IsFrame(name) != want {
			t.Errorf("IsFrame(%q) is not %v", name, want)
		}
	}
	for text, clean := range map[string]bool{"héllo wörld": true, "": true, "a\tb": false, "a\x7f": false, "a\xff": false} {
		if (table.Unclean(text) == "") != clean {
			t.Errorf("Unclean(%q) = %q", text, table.Unclean(text))
		}
	}
}

// TestStamp reads the examples of RFC 3339, section 5.8, and what is near them.
func TestStamp(t *testing.T) {
	cases := []struct {
		text     string
		whole    int64
		fraction float64
		ok       bool
	}{
		{"1985-04-12T23:20:50.52Z", 482196050, 0.52, true},
		{"1996-12-19T16:39:57-08:00", 851042397, 0, true},
		{"1937-01-01T12:00:27.87+00:20", -1041337173, 0.87, true},
		{"2024-01-02 03:04:05.000000001", 1704164645, 1e-9, true},
		{"2024-01-02T03:04:05", 1704164645, 0, true},
		{"2024-01-02", 0, 0, false},
		{"03:04:05", 0, 0, false},
		{"2024-13-02T03:04:05Z", 0, 0, false},
		{"", 0, 0, false},
	}
	for _, c := range cases {
		whole, fraction, ok := table.Stamp(c.text)
		if ok != c.ok || ok && (whole != c.whole || math.Abs(fraction-c.fraction) > 1e-12) {
			t.Errorf("%q: %d, %g, %v; want %d, %g, %v", c.text, whole, fraction, ok, c.whole, c.fraction, c.ok)
		}
	}
}

// finish reads values as whole units and ends the take.
func finish(c *table.Clock, in raw.Input, values ...int64) (*raw.Take, error) {
	t := &raw.Take{Line: 3}
	for i, v := range values {
		t.Time = append(t.Time, c.Whole(v, i == 0))
	}
	if in.Notice == nil {
		in.Notice = func(string, string) {}
	}
	return t, c.Finish(t, t.Time, in)
}

func TestClock(t *testing.T) {
	const second = 1_000_000_000
	cases := []struct {
		name   string
		clock  table.Clock
		values []int64
		want   raw.Take
		told   string
	}{
		{"near", table.Clock{Unit: "ms"}, []int64{5, 25, 20}, raw.Take{Time: []float64{0.005, 0.025, 0.02}}, ""},
		{"negative", table.Clock{Unit: "ms"}, []int64{-5, 25}, raw.Take{Time: []float64{-0.005, 0.025}}, ""},
		{"since the device started", table.Clock{Unit: "ns"}, []int64{100 * second, 100*second + 1}, raw.Take{Time: []float64{100, 100.000000001}}, ""},
		{"since 1970", table.Clock{Unit: "ns"}, []int64{1.7e9 * second, 1.7e9*second + 1}, raw.Take{Origin: 1.7e9, Time: []float64{0, 1e-9}}, "distant epoch"},
		{"as far apart as can be", table.Clock{Unit: "s"}, []int64{math.MinInt64, math.MaxInt64}, raw.Take{Origin: math.MinInt64, Time: []float64{0, 1 << 64}}, "distant epoch"},
		{"by its rate", table.Clock{Name: "t"}, []int64{0, 20, 41}, raw.Take{Time: []float64{0, 0.02, 0.041}}, `"t" states no unit and is read as ms (its median step of 21 makes that 47.62 frames per second)`},
		{"by its date", table.Clock{Name: "t"}, []int64{1.7e9, 1.7e9 + 300, 1.7e9 + 600}, raw.Take{Origin: 1.7e9, Time: []float64{0, 300, 600}}, "lies in November 2023"},
		{"too short to tell", table.Clock{}, []int64{7}, raw.Take{Time: []float64{7}}, ""},
		{"frames", table.Clock{Frames: true}, []int64{3, 4}, raw.Take{Clock: raw.Frames, Time: []float64{3, 4}}, ""},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			var told []string
			got, err := finish(&c.clock, raw.Input{Notice: func(text, evidence string) { told = append(told, text+" ("+evidence+")") }}, c.values...)
			if err != nil {
				t.Fatal(err)
			}
			c.want.Line = 3
			if diff := cmp.Diff(&c.want, got); diff != "" {
				t.Error(diff)
			}
			if !strings.Contains(strings.Join(told, "; "), c.told) || c.told == "" && len(told) > 0 {
				t.Errorf("told %q", told)
			}
		})
	}
}

// TestClockOfNoUnit refuses to guess.
func TestClockOfNoUnit(t *testing.T) {
	for _, values := range [][]int64{{1, 2, 3}, {0, 400e9, 900e9}, {5, 5, 5}} {
		_, err := finish(&table.Clock{Name: "t"}, raw.Input{Name: "f"}, values...)
		var f *fault.Error
		if !errors.As(err, &f) || f.File != "f" || f.Line != 3 || f.Channel != "t" || f.Remedy == "" {
			t.Errorf("%v: error %v", values, err)
		}
	}
	c := table.Clock{Name: "t"}
	if _, err := finish(&c, raw.Input{}, 0, 20, 40); err != nil {
		t.Fatal(err)
	}
	if got, err := finish(&c, raw.Input{}, 0, 1, 2); err != nil || got.Time[1] != 0.001 {
		t.Errorf("the unit of the first take is not that of the second: %v, error %v", got, err)
	}
}

// TestClockLosesNothing holds nanoseconds since 1970, whole or as seconds and a
// fraction, against differences of integers.
func TestClockLosesNothing(t *testing.T) {
	const tolerance = 1e-9 // of a nanosecond, relative to seconds
	rapid.Check(t, func(t *rapid.T) {
		start := rapid.Int64Range(1e18, 4e18).Draw(t, "start")
		steps := rapid.SliceOfN(rapid.Int64Range(0, 1e12), 1, 20).Draw(t, "steps")
		ns, s := table.Clock{Unit: "ns"}, table.Clock{Unit: "s"}
		byWhole, byParts := &raw.Take{}, &raw.Take{}
		for i, step := range steps {
			at := start + step
			byWhole.Time = append(byWhole.Time, ns.Whole(at, i == 0))
			byParts.Time = append(byParts.Time, s.At(at/1e9, float64(at%1e9)/1e9, i == 0))
		}
		in := raw.Input{Notice: func(string, string) {}}
		if err := errors.Join(ns.Finish(byWhole, nil, in), s.Finish(byParts, nil, in)); err != nil {
			t.Fatal(err)
		}
		for i, step := range steps {
			want := float64(step-steps[0]) / 1e9
			for _, got := range []float64{byWhole.Time[i], byParts.Time[i]} {
				if math.Abs(got-want) > tolerance*1e-9+1e-12*math.Abs(want)+1e-15 {
					t.Fatalf("frame %d: %.12f s, want %.12f s", i, got, want)
				}
			}
		}
	})
}

// TestNumberKeepsItsValue holds that a number near zero comes back as it went
// in.
func TestNumberKeepsItsValue(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		v := rapid.Float64Range(-9.99e8, 9.99e8).Draw(t, "time")
		c := table.Clock{Unit: "s"}
		if got := c.Number(v, true); got != v {
			t.Fatalf("%g became %g", v, got)
		}
	})
}
