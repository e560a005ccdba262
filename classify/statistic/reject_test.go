package statistic_test

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"strandwise/classify/statistic"
)

// readings returns sorted readings of weight 1.
func readings(gestures, others []float64) []statistic.Reading {
	var out []statistic.Reading
	for _, d := range gestures {
		out = append(out, statistic.Reading{Distance: d, Gesture: true, Weight: 1})
	}
	for _, d := range others {
		out = append(out, statistic.Reading{Distance: d, Weight: 1})
	}
	slices.SortStableFunc(out, func(a, b statistic.Reading) int { return cmp.Compare(a.Distance, b.Distance) })
	return out
}

func TestEqualError(t *testing.T) {
	inf := math.Inf(1)
	for name, c := range map[string]struct {
		gestures, others []float64
		threshold, rate  float64
	}{
		// By hand: rates are counted on either side of every threshold.
		"apart":          {[]float64{1, 2, 3}, []float64{5, 6}, 4, 0},
		"one each wrong": {[]float64{1, 2, 6}, []float64{3, 7, 8}, 4.5, 1.0 / 3},
		"turned round":   {[]float64{5, 6}, []float64{1, 2}, 3.5, 1},
		"all tied":       {[]float64{2, 2}, []float64{2, 2}, math.Nextafter(2, 0), 0.5},
		"never near":     {[]float64{1, 2}, []float64{inf, inf}, 2, 0},
		"first of two":   {[]float64{1, 4}, []float64{3}, 2, 0.25}, // 3.5 would be as far from even
	} {
		threshold, rate := statistic.EqualError(readings(c.gestures, c.others))
		if threshold != c.threshold || math.Abs(rate-c.rate) > 1e-15 {
			t.Errorf("%s: threshold %g and rate %g, want %g and %g", name, threshold, rate, c.threshold, c.rate)
		}
	}
	for _, r := range [][]statistic.Reading{nil, readings([]float64{1}, nil), readings(nil, []float64{1})} {
		if threshold, rate := statistic.EqualError(r); !math.IsNaN(threshold) || !math.IsNaN(rate) {
			t.Errorf("readings of one kind, %v, give threshold %g and rate %g", r, threshold, rate)
		}
	}
}

// TestEqualErrorAgainstEveryThreshold tries every threshold there is.
func TestEqualErrorAgainstEveryThreshold(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		draw := func(name string) []float64 {
			whole := rapid.SliceOfN(rapid.IntRange(0, 20), 1, 15).Draw(t, name)
			out := make([]float64, len(whole))
			for i, v := range whole {
				out[i] = float64(v)
			}
			return out
		}
		gestures, others := draw("gestures"), draw("others")
		shares := func(threshold float64) (missed, taken float64) {
			for _, d := range gestures {
				if d > threshold {
					missed += 1 / float64(len(gestures))
				}
			}
			for _, d := range others {
				if d <= threshold {
					taken += 1 / float64(len(others))
				}
			}
			return missed, taken
		}
		threshold, rate := statistic.EqualError(readings(gestures, others))
		missed, taken := shares(threshold)
		if math.Abs((missed+taken)/2-rate) > 1e-12 {
			t.Fatalf("at %g the rates are %g and %g, their mean is said to be %g", threshold, missed, taken, rate)
		}
		for at := -0.5; at < 21; at++ {
			if m, f := shares(at); math.Abs(m-f) < math.Abs(missed-taken)-1e-12 {
				t.Fatalf("at %g the rates %g and %g are nearer than at %g", at, m, f, threshold)
			}
		}
	})
}

// TestEqualErrorWeighs counts a reading of weight 3 like three readings.
func TestEqualErrorWeighs(t *testing.T) {
	once := readings([]float64{1, 2, 6}, []float64{3, 7})
	once[3].Weight = 3
	t1, r1 := statistic.EqualError(once)
	t2, r2 := statistic.EqualError(readings([]float64{1, 2, 6, 6, 6}, []float64{3, 7}))
	if t1 != t2 || math.Abs(r1-r2) > 1e-15 {
		t.Errorf("weighed: %g and %g, repeated: %g and %g", t1, r1, t2, r2)
	}
}

func ExampleEqualError() {
	threshold, rate := statistic.EqualError([]statistic.Reading{
		{Distance: 1.0, Gesture: true, Weight: 1},
		{Distance: 1.4, Gesture: true, Weight: 1},
		{Distance: 2.6, Gesture: false, Weight: 1},
		{Distance: 3.0, Gesture: false, Weight: 1},
	})
	fmt.Printf("accept up to %.1f: %.0f %% wrong either way\n", threshold, 100*rate)
	// Output: accept up to 2.0: 0 % wrong either way
}
