package clock_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"

	"strandwise/ingest/clock"
)

// uniform returns n times at a rate in Hz, from a start.
func uniform(start, rate float64, n int) []float64 {
	out := make([]float64, n)
	for i := range out {
		out[i] = start + float64(i)/rate
	}
	return out
}

// without returns the values but those from one place up to another.
func without(values []float64, from, to int) []float64 {
	return slices.Delete(slices.Clone(values), from, to)
}

func TestInspect(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for _, c := range []struct {
		name    string
		seconds []float64
		want    clock.Report
	}{
		{"nothing", nil, clock.Report{}},
		{"one frame", []float64{3}, clock.Report{Frames: 1, First: 3, Last: 3}},
		{"one instant", []float64{3, 3}, clock.Report{Frames: 2, First: 3, Last: 3, Duplicates: []int{1}}},
		{"even", uniform(0, 4, 5), clock.Report{Frames: 5, Last: 1, Step: 0.25}},
		{"a gap of two", []float64{0, 1, 2, 5, 6}, clock.Report{Frames: 5, Last: 6, Step: 1, Gaps: []clock.Gap{{Row: 2, Frames: 2, Length: 3}}}},
		{"a gap at the end", []float64{0, 1, 2, 4}, clock.Report{Frames: 4, Last: 4, Step: 1, Gaps: []clock.Gap{{Row: 2, Frames: 1, Length: 2}}}},
		{"stamped late, no gap", []float64{0, 1, 2.6, 3, 4}, clock.Report{Frames: 5, Last: 4, Step: 1, Jitter: 0, Jitter99: 0.6}},
		{"one and a half is no gap", []float64{0, 1, 2.5, 3.5}, clock.Report{Frames: 4, Last: 3.5, Step: 3.5 / 3, Jitter: 1. / 6, Jitter99: 1. / 6}},
		{"twice the same", []float64{0, 1, 1, 2}, clock.Report{Frames: 4, Last: 2, Step: 1, Duplicates: []int{2}}},
		{"swapped", []float64{0, 2, 1, 3}, clock.Report{Frames: 4, Last: 3, Step: 1, Reversals: []int{2}}},
		{"a late block that repeats", []float64{2, 3, 0, 1, 2}, clock.Report{Frames: 5, Last: 3, Step: 1, Reversals: []int{2}, Duplicates: []int{4}}},
		{"no time", []float64{nan, 0, 1, inf, 2}, clock.Report{Frames: 5, Last: 2, Step: 1, NotFinite: []int{0, 3}}},
	} {
		before := slices.Clone(c.seconds)
		got := clock.Inspect(c.seconds)
		options := cmp.Options{cmpopts.EquateEmpty(), cmpopts.EquateApprox(0, 1e-12), cmpopts.IgnoreFields(clock.Report{}, "Slowest", "Fastest")}
		if d := cmp.Diff(c.want, got, options); d != "" {
			t.Errorf("%s: %s", c.name, d)
		}
		if d := cmp.Diff(before, c.seconds, cmpopts.EquateNaNs()); d != "" {
			t.Errorf("%s: the times were changed: %s", c.name, d)
		}
	}
}

// A sensor that slows down in the middle of a take has an honest mean and two
// very different local rates.
func TestInspectUnevenRate(t *testing.T) {
	times := uniform(0, 100, 200)
	times = append(times, uniform(times[199]+1/80., 80, 200)...)
	r := clock.Inspect(times)
	if math.Abs(r.Fastest-100) > 1e-6 || math.Abs(r.Slowest-80) > 1e-6 || r.Rate() < 80 || r.Rate() > 100 || len(r.Gaps) > 0 {
		t.Errorf("%g to %g Hz, mean %g, gaps %v", r.Slowest, r.Fastest, r.Rate(), r.Gaps)
	}
}

func TestSteady(t *testing.T) {
	var bursts []float64 // four frames at a time, 40 ms apart
	for i := range 400 {
		bursts = append(bursts, float64(i/4)*0.04+float64(i%4)*1e-4)
	}
	paused := append(uniform(0, 100, 200), uniform(60, 100, 200)...)
	lossy := uniform(0, 100, 1000)
	random := rand.New(rand.NewPCG(1, 2))
	lossy = slices.DeleteFunc(lossy, func(float64) bool { return random.Float64() < 0.2 })
	for _, c := range []struct {
		name  string
		times []float64
		want  bool
	}{{"even", uniform(0, 50, 100), true}, {"bursts", bursts, false}, {"one long pause", paused, true}, {"a fifth lost", lossy, true}, {"two frames", uniform(0, 50, 2), true}, {"none", nil, true}} {
		if got := clock.Inspect(c.times).Steady(); got != c.want {
			t.Errorf("%s: steady is %v: %+v", c.name, got, clock.Inspect(c.times))
		}
	}
}

func TestNominal(t *testing.T) {
	stamped := func(rate float64, n int, tick float64) []float64 {
		out := uniform(0, rate, n)
		for i, v := range out {
			out[i] = math.Round(v/tick) * tick
		}
		return out
	}
	for _, c := range []struct {
		name  string
		times []float64
		want  float64
		near  float64
	}{
		{"whole", uniform(7, 50, 500), 50, 0},
		{"stamped in ms", stamped(60, 300, 1e-3), 60, 0},
		{"stamped in hundredths", stamped(64, 1000, 1e-2), 64, 0},
		{"not whole, and long enough to tell", uniform(0, 69.9926, 700), 69.9926, 1e-9}, // rate of an open C3D recording
		{"film rate in ms for ten minutes", stamped(59.94, 36000, 1e-3), 59.94, 1e-3},
	} {
		if got := clock.Inspect(c.times).Nominal(); math.Abs(got-c.want) > c.near {
			t.Errorf("%s: %v Hz, want %v", c.name, got, c.want)
		}
	}
	if got := clock.Inspect(nil).Nominal(); got != 0 {
		t.Errorf("no times make %g Hz", got)
	}
}

// Faults put into an even clock are found exactly: each gap with its length,
// each repeated frame, each frame out of order.
func TestInspectFindsWhatWasPutIn(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rate := rapid.SampledFrom([]float64{25, 50, 60, 100, 120, 148.148, 1000}).Draw(t, "rate")
		times := uniform(rapid.SampledFrom([]float64{0, -3, 5e4}).Draw(t, "start"), rate, 400)
		var lengths []int
		for place := 390; place > 20; place -= rapid.IntRange(10, 90).Draw(t, "apart") {
			n := rapid.IntRange(1, 4).Draw(t, "gap")
			lengths = append([]int{n}, lengths...)
			times = without(times, place, place+n)
		}
		jitter := rapid.Float64Range(0, 0.12).Draw(t, "jitter")
		random := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 0))
		for i := range times {
			times[i] += jitter / rate * (2*random.Float64() - 1)
		}
		twice, swapped := rapid.Bool().Draw(t, "twice"), rapid.Bool().Draw(t, "swapped")
		want := clock.Report{}
		if twice {
			times = slices.Insert(times, 12, times[11])
			want.Duplicates = []int{12}
		}
		if swapped {
			times[5], times[6] = times[6], times[5]
			want.Reversals = []int{6}
		}
		r := clock.Inspect(times)
		var found []int
		for _, g := range r.Gaps {
			found = append(found, g.Frames)
		}
		if !slices.Equal(found, lengths) {
			t.Fatalf("gaps %v, want %v", found, lengths)
		}
		if !slices.Equal(r.Duplicates, want.Duplicates) || !slices.Equal(r.Reversals, want.Reversals) {
			t.Fatalf("duplicates %v, reversals %v; want %+v", r.Duplicates, r.Reversals, want)
		}
		off := 2*jitter*float64(len(lengths)+1)/float64(len(times)-len(lengths)-1) + 1e-7 // at the ends of all stretches, and of the digits
		if math.Abs(r.Step*rate-1) > off || r.Jitter99 > (2*jitter+off)/rate || r.Jitter > r.Jitter99 || r.Slowest > r.Fastest {
			t.Fatalf("rate %g, want %g; jitter %g, %g with %g put in", r.Rate(), rate, r.Jitter, r.Jitter99, jitter/rate)
		}
	})
}
