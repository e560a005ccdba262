package augment_test

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"strandwise/augment"
	"strandwise/augment/variation"
	"strandwise/channels"
)

// unvaried is the recipe with nothing to vary: what is drawn has no size.
func unvaried() augment.Variation {
	v := noSizes(augment.Default())
	v.Sizes[variation.Timing], v.Mix, v.PathShare = 0, 0, 0
	return coupled(v, 1)
}

// bent is unvaried but for its timing.
func bent() augment.Variation {
	v := unvaried()
	v.Sizes[variation.Timing] = 0.3
	return v
}

// withRest holds the take still over its middle third.
func withRest(take *channels.Take) *channels.Take {
	n := take.Frames()
	for i := n / 3; i < 2*n/3; i++ {
		copy(take.Frame(i), take.Frame(n/3))
	}
	return take
}

func TestRecipeWithoutVariationIsItsSource(t *testing.T) {
	l := positions(t)
	for _, take := range []*channels.Take{wander(l, "moving", 80, 1), withRest(wander(l, "resting", 80, 2)), wander(l, "two frames", 2, 3)} {
		for _, share := range []float64{0, 0.3, 1} {
			v := unvaried()
			v.TimeShare = share
			got := source(t, v, 1, take).Draw(5)
			if !slices.Equal(got.Time, take.Time) {
				t.Errorf("%s, time share %v: the clock differs", take.ID, share)
			}
			for i, x := range got.Data {
				if math.Abs(x-take.Data[i]) > 1e-9 {
					t.Fatalf("%s, time share %v: value %d is %v, in the source %v", take.ID, share, i, x, take.Data[i])
				}
			}
		}
	}
}

// line is a one-channel take whose value is the time since its start, so that
// a draw shows which instant of the source each frame was read at.
func line(t testing.TB, seconds ...float64) *channels.Take {
	l := grouped(t, &channels.Layout{Channels: []channels.Channel{{Name: "a"}}}, channels.Group{Name: "a", Channels: []int{0}})
	take := &channels.Take{ID: "line", Layout: l, Time: seconds}
	for _, s := range seconds {
		take.Data = append(take.Data, s-seconds[0])
	}
	return take
}

// An uneven clock is made even: steps near the median, from the first to the
// last instant. What it shows is still the source.
func TestUnevenClockBecomesEven(t *testing.T) {
	for _, c := range []struct {
		name    string
		seconds []float64
		frames  int
	}{
		{"jitter", []float64{5, 5.11, 5.19, 5.3, 5.41, 5.5}, 6},
		{"gap of two frames", []float64{0, 0.1, 0.2, 0.5, 0.6}, 7},
		{"two frames", []float64{1, 3}, 2},
		{"three frames", []float64{0, 1, 4}, 3}, // no step counts as less than one
	} {
		take := line(t, c.seconds...)
		got := source(t, unvaried(), 1, take).Draw(0)
		if got.Frames() != c.frames {
			t.Errorf("%s: %d frames, want %d", c.name, got.Frames(), c.frames)
		}
		first, last := c.seconds[0], c.seconds[len(c.seconds)-1]
		if got.Time[0] != first || got.Time[got.Frames()-1] != last {
			t.Errorf("%s: from %v to %v s, want %v to %v s", c.name, got.Time[0], got.Time[got.Frames()-1], first, last)
		}
		for i, at := range got.Time {
			if even := first + (last-first)*float64(i)/float64(got.Frames()-1); math.Abs(at-even) > 1e-12 {
				t.Errorf("%s: frame %d at %v s, want %v s", c.name, i, at, even)
			}
			if x := got.Data[i]; math.Abs(x-(at-first)) > 1e-9 {
				t.Errorf("%s: frame %d shows instant %v, want %v", c.name, i, x, at-first)
			}
		}
	}
}

// A clock of bursts and long gaps must not ask for frames without end.
func TestGapsDoNotMultiplyFrames(t *testing.T) {
	take := line(t, 0, 1e-6, 2e-6, 3e-6, 3600)
	got := source(t, unvaried(), 1, take).Draw(0)
	if got.Frames() > 100 {
		t.Errorf("%d frames from %d", got.Frames(), take.Frames())
	}
}

func evenSeconds(frames int, rate float64) []float64 {
	out := make([]float64, frames)
	for i := range out {
		out[i] = float64(i) / rate
	}
	return out
}

// The trims a draw tells are the instants at which it begins and ends; a shift
// outwards holds the end frame. Their sizes follow the variation.
func TestTrimsShiftStartAndEnd(t *testing.T) {
	take := line(t, evenSeconds(101, 50)...)
	v := unvaried()
	v.Sizes[variation.Trim] = 0.05
	source := source(t, v, 1, take)
	const draws = 2000
	squares, inwards, outwards := 0.0, 0, 0
	for k := range draws {
		got := source.Draw(k)
		start, end := got.Made.Parameters["start_s"], -got.Made.Parameters["end_s"]
		if limit := 2.5 * 0.05 * take.Duration(); math.Abs(start) > limit || math.Abs(end) > limit {
			t.Fatalf("draw %d trims %v s and %v s, beyond %v s", k, start, end, limit)
		}
		if x := got.Data[0]; math.Abs(x-max(start, 0)) > 1e-9 {
			t.Fatalf("draw %d begins at %v s, trim %v s", k, x, start)
		}
		if x := got.Data[100]; math.Abs(x-(2-max(end, 0))) > 1e-9 {
			t.Fatalf("draw %d ends at %v s of 2 s, trim %v s", k, x, end)
		}
		squares += (start*start + end*end) / (2 * draws)
		if start > 0 {
			inwards++
		} else {
			outwards++
		}
	}
	// Cut at 2.5 standard deviations, a normal draw keeps 0.978 of its own.
	if sd := math.Sqrt(squares) / take.Duration(); math.Abs(sd-0.978*0.05) > 0.05*0.05 {
		t.Errorf("trims have a standard deviation of %v of the duration, want about %v", sd, 0.978*0.05)
	}
	if min(inwards, outwards) < draws/3 {
		t.Errorf("%d starts move inwards, %d outwards", inwards, outwards)
	}
}

// Without trims and straightening a draw shows the source's own moments in
// their order, so a rising channel rises, at an uneven pace.
func TestTimingNeverRunsBack(t *testing.T) {
	take := line(t, evenSeconds(101, 50)...)
	v := unvaried()
	v.Sizes[variation.Timing] = 0.8
	source := source(t, v, 1, take)
	for k := range 200 {
		got := source.Draw(k)
		moved := 0.0
		for i := 1; i < got.Frames(); i++ {
			if got.Data[i] <= got.Data[i-1] {
				t.Fatalf("draw %d: instant %v s comes after %v s", k, got.Data[i], got.Data[i-1])
			}
			moved = max(moved, math.Abs(got.Data[i]-got.Time[i]))
		}
		if moved < 1e-3 {
			t.Errorf("draw %d moves no moment by more than %v s", k, moved)
		}
	}
}

// More spread moves moments further; more knots move them less.
func TestSpreadAndKnotsControlTiming(t *testing.T) {
	take := line(t, evenSeconds(101, 50)...)
	moved := func(knots int, spread float64) float64 {
		v := unvaried()
		v.Timing, v.Knots, v.Spread = augment.Knots, knots, spread
		source, sum := source(t, v, 1, take), 0.0
		for k := range 300 {
			got := source.Draw(k)
			for i, x := range got.Data {
				sum += (x - got.Time[i]) * (x - got.Time[i])
			}
		}
		return math.Sqrt(sum / 300 / 101)
	}
	if little, much := moved(6, 0.02), moved(6, 0.2); much < 2*little {
		t.Errorf("a spread of 0.02 moves by %v s, of 0.2 by %v s", little, much)
	}
	if few, many := moved(4, 0.1), moved(32, 0.1); few < 2*many {
		t.Errorf("4 knots move by %v s, 32 by %v s", few, many)
	}
}

// A cubic reading swings beyond its frames by at most a quarter of their range
// (its negative weights sum to u(1−u) ≤ ¼).
func TestTimingStaysNearSourceRange(t *testing.T) {
	for seed := range uint64(20) {
		take := wander(positions(t), fmt.Sprint(seed), 40, seed)
		source := source(t, bent(), seed, take)
		low, high := slices.Clone(take.Frame(0)), slices.Clone(take.Frame(0))
		for i := range take.Frames() {
			for c, x := range take.Frame(i) {
				low[c], high[c] = min(low[c], x), max(high[c], x)
			}
		}
		for k := range 20 {
			got := source.Draw(k)
			for i := range got.Frames() {
				for c, x := range got.Frame(i) {
					if slack := (high[c] - low[c]) / 4; x < low[c]-slack || x > high[c]+slack {
						t.Fatalf("channel %d reaches %v, the source %v to %v", c, x, low[c], high[c])
					}
				}
			}
		}
	}
}

// With full straightening the group moves by the same length between any two
// of the 16 knots, which fall on every fifth frame here.
func TestStraightenEvensDisplacements(t *testing.T) {
	take := wander(positions(t), "take", 76, 1)
	plain := bent()
	v := bent()
	v.Sizes[variation.Straighten] = 1
	source, unstraightened := source(t, v, 1, take), source(t, plain, 1, take)
	for k := range 20 {
		got, before := steps(source.Draw(k), 5), steps(unstraightened.Draw(k), 5)
		mean := 0.0
		for _, d := range before {
			mean += d / float64(len(before))
		}
		for i, d := range got {
			if math.Abs(d-mean) > 1e-9*mean {
				t.Errorf("draw %d: displacement %d is %v long, want %v", k, i, d, mean)
			}
		}
		if slices.Max(before)-slices.Min(before) < 0.1*mean {
			t.Errorf("draw %d: displacements %v are even without straightening", k, before)
		}
	}
}

// steps returns how far the first group of a take moves from each every-th
// frame to the next.
func steps(take *channels.Take, every int) []float64 {
	var out []float64
	for i := every; i < take.Frames(); i += every {
		sum := 0.0
		for _, c := range take.Layout.Groups[0].Channels {
			d := take.Frame(i)[c] - take.Frame(i - every)[c]
			sum += d * d
		}
		out = append(out, math.Sqrt(sum))
	}
	return out
}

// A rest keeps most of its duration when the parameter follows time at least in
// part. The source rests for 30 frames.
func TestRestKeepsADuration(t *testing.T) {
	take := withRest(wander(positions(t), "take", 90, 1))
	v := bent()
	for _, share := range []float64{0.5, 1} {
		v.TimeShare = share
		source, still := source(t, v, 1, take), 0
		const draws = 200
		for k := range draws {
			still += framesAt(source.Draw(k), take.Frame(45))
		}
		if mean := float64(still) / draws; mean < 18 || mean > 36 {
			t.Errorf("time share %v: draws rest for %v frames on average", share, mean)
		}
	}
}

// framesAt counts the frames of a take that show the given values.
func framesAt(take *channels.Take, frame []float64) int {
	count := 0
	for i := range take.Frames() {
		away := 0.0
		for c, x := range take.Frame(i) {
			away = max(away, math.Abs(x-frame[c]))
		}
		if away < 1e-9 {
			count++
		}
	}
	return count
}
