package signal_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/ingest/signal"
	"strandwise/testdata/opendata"
)

// columns puts series side by side.
func columns(series ...[]float64) []float64 {
	var out []float64
	for i := range series[0] {
		for _, s := range series {
			out = append(out, s[i])
		}
	}
	return out
}

// made returns n values of a function of the frame.
func made(n int, f func(i float64) float64) []float64 {
	out := make([]float64, n)
	for i := range out {
		out[i] = f(float64(i))
	}
	return out
}

// held keeps values between two limits.
func held(series []float64, low, high float64) []float64 {
	return made(len(series), func(i float64) float64 { return min(max(series[int(i)], low), high) })
}

// rounded keeps a multiple of a step of each value.
func rounded(series []float64, step float64) []float64 {
	return made(len(series), func(i float64) float64 { return math.Round(series[int(i)]/step) * step })
}

func TestClipping(t *testing.T) {
	random := rand.New(rand.NewPCG(7, 8))
	noise := func(size float64) func() float64 { return func() float64 { return size * random.NormFloat64() } }
	small := noise(0.02)
	swing := made(600, func(i float64) float64 { return 12*math.Sin(i/4) + 9*math.Sin(i/7.3) + small() })
	quiet := made(600, func(float64) float64 { return small() })
	stroke := func(i float64) float64 { // a minimum-jerk movement from 0 to 1 in frames 200 to 260
		u := min(max((i-200)/60, 0), 1)
		return u * u * u * (10 - 15*u + 6*u*u)
	}
	long := made(4000, func(i float64) float64 { return math.Sin(i / 40) })
	for _, c := range []struct {
		name   string
		series []float64
		levels []float64
	}{
		{"clipped at both ends", held(swing, -15, 15), []float64{-15, 15}},
		{"clipped at one end", held(swing, math.Inf(-1), 8), []float64{8}},
		{"not clipped", swing, nil},
		{"a clipped sine", held(made(500, func(i float64) float64 { return 2 * math.Sin(i/3) }), -1, 1), []float64{-1, 1}},
		{"a smooth sine", long, nil},
		{"a smooth sine in 8 bits", rounded(long, 1./128), nil},
		{"a smooth sine in 6 bits", rounded(long, 1./32), nil},
		{"a smooth sine that comes again to the last bit", slices.Repeat(made(20, func(i float64) float64 { return math.Round(1e4*math.Sin(2*math.Pi*i/20)) / 1e4 }), 30), nil},
		{"noise at rest in 8 bits", rounded(quiet, 0.01), nil},
		{"a rest at the end of the range", made(600, stroke), nil},
		{"a rest at the end of the range, rounded", rounded(made(600, stroke), 1e-3), nil},
		{"a switch", made(600, func(i float64) float64 { return float64(int(i) / 50 % 2) }), nil},
		{"a plate nobody stands on", made(600, func(i float64) float64 { return max(0, 700*math.Sin(i/9)+random.Float64()) }), nil},
		{"nothing", nil, nil},
		{"one frame", []float64{3}, nil},
		{"values missing around", held(made(500, func(i float64) float64 {
			if int(i)%50 == 7 {
				return math.NaN()
			}
			return 2 * math.Sin(i/3)
		}), -1, 1), []float64{-1, 1}},
	} {
		d := signal.NewClipping(1, nil)
		d.Add(c.series)
		var levels []float64
		for _, f := range d.Findings() {
			levels = append(levels, f.Level)
		}
		if !slices.Equal(levels, c.levels) {
			t.Errorf("%s: clipped at %v, want %v", c.name, levels, c.levels)
		}
	}
}

// What is said of a level is counted over all takes, and shared by the
// channels of one sensor.
func TestClippingOverTakes(t *testing.T) {
	wave := made(100, func(i float64) float64 { return 3 * math.Sin(i/3) })
	hit := slices.Clone(wave) // passes 2 in single frames only
	for i, v := range hit {
		hit[i] = min(v, 1.9)
	}
	hit[50], hit[70] = 2, 2
	takes := [][]float64{
		columns(made(100, func(i float64) float64 { return math.Sin(i / 3) }), hit, hit),
		columns(held(wave, -9, 2), hit, hit),
		columns(held(wave, -9, 2), hit, hit),
	}
	d := signal.NewClipping(3, [][]int{{0, 1}, {2}})
	for _, data := range takes {
		d.Add(data)
	}
	count := 0
	first := -1
	for i, v := range held(wave, -9, 2) {
		if v == 2 {
			count++
			if first < 0 {
				first = i
			}
		}
	}
	want := []signal.Clip{
		{Channel: 0, Level: 2, Count: 2 * count, Takes: 2, Longest: 5, Take: 1, First: first},
		{Channel: 1, Level: 2, Count: 6, Takes: 3, Longest: 1, Take: 0, First: 50},
	}
	if diff := cmp.Diff(want, d.Findings()); diff != "" {
		t.Error(diff)
	}
}

// Whatever the movement, clipping it hard is found, at the very level; not
// clipping it is not.
func TestClippingFindsWhatWasPutIn(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a, b := rapid.Float64Range(0.2, 0.45).Draw(t, "a"), rapid.Float64Range(0.01, 0.1).Draw(t, "b")
		random := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 0))
		series := made(800, func(i float64) float64 {
			return math.Sin(a*i)*(1+0.3*math.Sin(b*i)) + 0.003*random.NormFloat64()
		})
		d := signal.NewClipping(1, nil)
		d.Add(series)
		if f := d.Findings(); len(f) > 0 {
			t.Fatalf("a free movement is clipped: %+v", f)
		}
		level := rapid.Float64Range(0.4, 0.7).Draw(t, "level")
		d = signal.NewClipping(1, nil)
		d.Add(held(series, -level, level))
		f := d.Findings()
		if len(f) != 2 || f[0].Level != -level || f[1].Level != level {
			t.Fatalf("clipped at ±%g: %+v", level, f)
		}
	})
}

// The open set of Chen, Jafari and Kehtarnavaz (ICIP 2015) is clipped at ±8 g
// and at about ±1000 deg/s (its description); counts are those of the levels
// in its files. None of the other open sets, of five other sensors, is.
func TestClippingOpenSets(t *testing.T) {
	groups := map[int][][]int{2: {{0, 1}}, 3: {{0, 1, 2}}, 6: {{0, 1, 2}, {3, 4, 5}}, 24: nil}
	for i := 0; i < 24; i += 3 {
		groups[24] = append(groups[24], []int{i, i + 1, i + 2})
	}
	for _, name := range []string{"BasicMotions", "Epilepsy", "Libras", "NATOPS", "UWaveGestureLibrary", "UTD_MHAD_inertial"} {
		for _, factor := range []float64{1, channels.StandardGravity} {
			takes := opendata.Set(t, name)
			width := takes[0].Width()
			all, single := signal.NewClipping(width, groups[width]), 0
			for _, x := range takes {
				for i := range x.Data {
					x.Data[i] *= factor
				}
				all.Add(x.Data)
				one := signal.NewClipping(width, groups[width])
				if one.Add(x.Data); len(one.Findings()) > 0 {
					single++
				}
			}
			var got []string
			for _, f := range all.Findings() {
				got = append(got, fmt.Sprintf("c%d %.4g ×%d in %d", f.Channel, f.Level/factor, f.Count, f.Takes))
			}
			var want []string
			if name == "UTD_MHAD_inertial" {
				want = []string{"c0 -8 ×50 in 18", "c1 -8 ×3 in 3", "c2 -8 ×3 in 3", "c3 -1001 ×7 in 4", "c3 1001 ×8 in 5", "c4 -1001 ×12 in 10", "c5 1001 ×5 in 3"}
			} else if single > 1 {
				t.Errorf("%s: %d takes look clipped by themselves", name, single)
			}
			if diff := cmp.Diff(want, got); diff != "" {
				t.Errorf("%s: %s", name, diff)
			}
			t.Logf("%s × %g: %d of %d takes look clipped by themselves", name, factor, single, len(takes))
		}
	}
}

func ExampleClipping() {
	d := signal.NewClipping(1, nil)
	for range 3 {
		data := make([]float64, 100)
		for i := range data {
			data[i] = min(120*math.Sin(float64(i)/3), 8*channels.StandardGravity)
		}
		d.Add(data)
	}
	for _, c := range d.Findings() {
		fmt.Printf("channel %d never passes %.2f m/s²: %d frames in %d takes\n", c.Channel, c.Level, c.Count, c.Takes)
	}
	// Output: channel 0 never passes 78.45 m/s²: 87 frames in 3 takes
}
