package path_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"strandwise/augment/path"
)

// drawClock draws the clock of a take of 2 to 100 frames: uneven seconds, and
// an arc length that rests now and then, at both ends too.
func drawClock(t *rapid.T) (seconds, arc []float64) {
	n := rapid.IntRange(2, 100).Draw(t, "frames")
	seconds, arc = make([]float64, n), make([]float64, n)
	seconds[0] = rapid.Float64Range(-10, 1e6).Draw(t, "start")
	for i := 1; i < n; i++ {
		seconds[i] = seconds[i-1] + rapid.Float64Range(0.001, 1).Draw(t, "step")
		arc[i] = arc[i-1] + rapid.SampledFrom([]float64{0, 0, 0.01, 1, 5}).Draw(t, "moved")
	}
	return seconds, arc
}

func TestClockOfTimeAlone(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		seconds, arc := drawClock(t)
		c := path.NewClock(seconds, arc, 1)
		for i := range 11 {
			u := float64(i) / 10
			near(t, "parameter and time", []float64{c.Parameter(u), c.Time(u)}, []float64{u, u}, 1e-12)
		}
	})
}

func TestClockOfArcLengthAlone(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		seconds, arc := drawClock(t)
		whole := arc[len(arc)-1]
		if whole == 0 {
			t.Skip("stands still")
		}
		c := path.NewClock(seconds, arc, 0)
		for i := range arc {
			u := (seconds[i] - seconds[0]) / (seconds[len(seconds)-1] - seconds[0])
			near(t, "parameter", []float64{c.Parameter(u)}, []float64{arc[i] / whole}, 1e-12)
		}
	})
}

// The parameter rises with time from 0 to 1, and is found again from its time.
func TestClockRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		seconds, arc := drawClock(t)
		c := path.NewClock(seconds, arc, rapid.Float64Range(0.01, 1).Draw(t, "time share"))
		near(t, "ends", []float64{c.Parameter(0), c.Time(0), c.Parameter(1), c.Time(1)}, []float64{0, 0, 1, 1}, 1e-15)
		before := 0.0
		for i := range 101 {
			p := float64(i) / 100
			near(t, "parameter of its time", []float64{c.Parameter(c.Time(p))}, []float64{p}, 1e-9)
			if now := c.Parameter(p); now < before {
				t.Fatalf("parameter falls from %v to %v at time %v", before, now, p)
			} else {
				before = now
			}
		}
	})
}

// A take that moves for a second, rests for two and moves for a second spends
// half of its time at rest, and has no arc length there.
func TestClockAtRest(t *testing.T) {
	seconds, arc := []float64{10, 11, 12, 13, 14}, []float64{0, 3, 3, 3, 6}
	for _, c := range []struct{ share, extent float64 }{{0, 0}, {0.5, 0.25}, {1, 0.5}} {
		clock := path.NewClock(seconds, arc, c.share)
		near(t, "extent of the rest", []float64{clock.Parameter(0.75) - clock.Parameter(0.25)}, []float64{c.extent}, 1e-15)
	}
	if got := path.NewClock(seconds, arc, 0).Time(0.5); got != 0.25 {
		t.Errorf("the parameter of a rest without extent is first reached at %v, want its start, 0.25", got)
	}
	if got := path.NewClock([]float64{0, 1, 2}, []float64{0, 0, 3}, 0).Time(0); got != 0 {
		t.Errorf("a rest at the start is first reached at %v, want 0", got)
	}
}

func TestClockWithoutMovement(t *testing.T) {
	c := path.NewClock([]float64{0, 1, 4}, []float64{0, 0, 0}, 0)
	near(t, "parameter", []float64{c.Parameter(0), c.Parameter(0.5), c.Parameter(1)}, []float64{0, 0.5, 1}, 1e-15)
}

func TestClockMisuse(t *testing.T) {
	panics(t, "one frame", func() { path.NewClock([]float64{1}, []float64{0}, 1) })
	panics(t, "an arc length short", func() { path.NewClock([]float64{1, 2}, []float64{0}, 1) })
}

func newMap(intervals []float64) *path.Map {
	return path.NewMap(path.Fractions(make([]float64, len(intervals)+1), intervals))
}

func TestMapOfEqualIntervalsIsIdentity(t *testing.T) {
	for _, knots := range []int{2, 3, 8, 33} {
		intervals := make([]float64, knots-1)
		for i := range intervals {
			intervals[i] = 1
		}
		m := newMap(intervals)
		for i := range 101 {
			p := float64(i) / 100
			near(t, "shown parameter", []float64{m.At(p)}, []float64{p}, 1e-12)
		}
	}
}

// The map keeps both ends, never runs back, passes through its knots and has
// no kink there.
func TestMapIsSmoothAndIncreasing(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		intervals := rapid.SliceOfN(rapid.Float64Range(0.02, 1.98), 2, 32).Draw(t, "intervals")
		m := newMap(intervals)
		near(t, "ends", []float64{m.At(0), m.At(1)}, []float64{0, 1}, 1e-15)
		n := len(intervals)
		for k, f := range path.Fractions(make([]float64, n+1), intervals) {
			p, h := float64(k)/float64(n), 1e-5/float64(n)
			near(t, "knot", []float64{m.At(p)}, []float64{f}, 1e-12)
			if k > 0 && k < n {
				left, right := (m.At(p)-m.At(p-h))/h, (m.At(p+h)-m.At(p))/h
				near(t, "slope on both sides", []float64{left}, []float64{right}, 1e-3*float64(n))
			}
		}
		before := math.Inf(-1)
		for i := range 1001 {
			now := m.At(float64(i) / 1000)
			if now <= before {
				t.Fatalf("map falls from %v to %v", before, now)
			}
			before = now
		}
	})
}
