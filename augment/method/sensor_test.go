package method_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
	"strandwise/augment/method"
)

// moments returns mean and standard deviation.
func moments(values []float64) (mean, deviation float64) {
	for _, v := range values {
		mean += v / float64(len(values))
	}
	for _, v := range values {
		deviation += (v - mean) * (v - mean) / float64(len(values))
	}
	return mean, math.Sqrt(deviation)
}

// constant returns frames × width values of one size on a clock of 1 Hz.
func constant(frames, width int, value float64) take {
	k := take{width: width, src: make([]float64, frames*width), time: make([]float64, frames)}
	for i := range k.src {
		k.src[i] = value
	}
	for i := range k.time {
		k.time[i] = float64(i)
	}
	return k
}

// What is drawn has the stated mean and spread, over many draws of one seed.
func TestMoments(t *testing.T) {
	const draws, tolerance = 4000, 0.05
	k := constant(9, 1, 1)
	warped := func(at int, about float64) func(got []float64) float64 {
		return func(got []float64) float64 { return got[at] - about }
	}
	for name, c := range map[string]struct {
		m         maker
		of        func([]float64) float64
		deviation float64
	}{
		"jitter":                  {method.PublishedJitter(), warped(4, 1), 0.05},
		"scaling":                 {method.PublishedScaling(), warped(4, 1), 0.1},
		"magnitude, first knot":   {method.PublishedMagnitudeWarp(), warped(0, 1), 0.2},
		"magnitude, last knot":    {method.PublishedMagnitudeWarp(), warped(8, 1), 0.2},
		"magnitude, middle of 1":  {method.MagnitudeWarp{Deviation: 0.2, Knots: 1}, warped(4, 1), 0.2},
		"noise field":             {method.DefaultNoiseField(), warped(4, 1), 0.1},
		"noise field, one octave": {method.NoiseField{Size: 0.3, Cells: 2.7, Octaves: 1}, warped(2, 1), 0.3},
		"noise field, space":      {method.NoiseField{Size: 0.3, Cells: 2.7, Octaves: 2, Persistence: 0.7, OverSpace: true}, warped(2, 1), 0.3},
	} {
		rng := rand.New(rand.NewPCG(1, 5))
		values := make([]float64, draws)
		for i := range values {
			values[i] = c.of(c.m.Apply(nil, k.src, 1, k.time, rng))
		}
		mean, deviation := moments(values)
		if math.Abs(mean) > tolerance*c.deviation*2 || math.Abs(deviation/c.deviation-1) > tolerance {
			t.Errorf("%s: mean %v and deviation %v, want 0 and %v", name, mean, deviation, c.deviation)
		}
	}
}

// Scaling has one factor per channel, and about the mean it leaves the mean.
func TestScalingKeepsProportions(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := anyTake(t)
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		got := method.Scaling{Deviation: 0.2, AboutMean: true}.Apply(nil, k.src, k.width, k.time, rng)
		for c := range k.width {
			off := 0.0
			for i := c; i < len(got); i += k.width {
				off += got[i] - k.src[i]
			}
			if math.Abs(off) > 1e-9*float64(len(got)+1) {
				t.Fatalf("channel %d: the mean moved by %v", c, off/float64(len(k.time)))
			}
		}
	})
}

// A rotation about zero keeps every triad's length, the angles between frames
// and with them everything but the direction; channels without axes stay.
func TestRotationKeepsLengths(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := anyTake(t)
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		got := method.PublishedRotation().Apply(nil, k.src, k.width, k.time, rng)
		for i := range k.time {
			for j := range k.time {
				a, b := 0.0, 0.0
				for c := range k.width {
					a += k.src[i*k.width+c] * k.src[j*k.width+c]
					b += got[i*k.width+c] * got[j*k.width+c]
				}
				if math.Abs(a-b) > 1e-9*(1+math.Abs(a)) {
					t.Fatalf("product of frames %d and %d went from %v to %v", i, j, a, b)
				}
			}
		}
		if k.width%2 != 0 && k.width%3 != 0 && distance(got, k.src) != 0 {
			t.Fatal("channels without axes were turned")
		}
	})
}

// A time map rises strictly from the first instant to the last, however wild.
func TestTimeWarpMap(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := anyTake(t)
		w := method.TimeWarp{Deviation: rapid.Float64Range(0, 5).Draw(t, "deviation"), Knots: rapid.IntRange(1, 9).Draw(t, "knots")}
		m := w.Map(nil, k.time, rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1)))
		n := len(m)
		if m[0] != k.time[0] || m[n-1] != k.time[n-1] {
			t.Fatalf("the map runs from %v to %v, the clock from %v to %v", m[0], m[n-1], k.time[0], k.time[n-1])
		}
		for i := 1; i < n; i++ {
			if !(m[i] > m[i-1]) {
				t.Fatalf("the map falls at frame %d: %v after %v", i, m[i], m[i-1])
			}
		}
	})
}

// All channels of a warped take show one instant: a take whose channels are
// one another's multiples keeps them so.
func TestTimeWarpKeepsChannelsTogether(t *testing.T) {
	k := stroke(40)
	for i := range k.time {
		k.src[3*i+1], k.src[3*i+2] = 2*k.src[3*i], -k.src[3*i]
	}
	got := method.PublishedTimeWarp().Apply(nil, k.src, 3, k.time, rand.New(rand.NewPCG(1, 1)))
	for i := range k.time {
		if math.Abs(got[3*i+1]-2*got[3*i]) > 1e-12 || math.Abs(got[3*i+2]+got[3*i]) > 1e-12 {
			t.Fatalf("frame %d: %v", i, got[3*i:3*i+3])
		}
	}
}

// A slice of a straight line is a straight line over the stated share of it.
func TestSliceOfALine(t *testing.T) {
	const frames, share = 101, 0.9
	k := constant(frames, 1, 0)
	for i := range k.src {
		k.src[i] = float64(i)
	}
	rng := rand.New(rand.NewPCG(2, 2))
	low, high := math.Inf(1), 0.0
	for range 500 {
		got := method.Slice{Share: share}.Apply(nil, k.src, 1, k.time, rng)
		if rise := got[frames-1] - got[0]; math.Abs(rise-share*(frames-1)) > 1e-9 {
			t.Fatalf("the slice spans %v of %v", rise, frames-1)
		}
		low, high = min(low, got[0]), max(high, got[0])
	}
	if low < 0 || high > 10 || low > 0.5 || high < 9.5 {
		t.Errorf("slices begin between %v and %v, want the whole of 0 to 10", low, high)
	}
}
