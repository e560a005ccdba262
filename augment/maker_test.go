package augment_test

import (
	"math"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/augment"
	"strandwise/channels"
)

// timed and published vary enough for every part of a method to show.
func timed() augment.Variation {
	return augment.Variation{Method: augment.TimedPath, Knots: 7, Spread: 0.1, TimeShare: 0.5, Trim: 0.05, Coupling: 1}
}

func published() augment.Variation {
	return augment.Variation{Method: augment.Path, Knots: 12, Spread: 0.25, Coupling: 1}
}

// eachMethod runs a test for both methods.
func eachMethod(t *testing.T, test func(*testing.T, augment.Variation)) {
	for _, v := range []augment.Variation{timed(), published()} {
		t.Run(string(v.Method), func(t *testing.T) { test(t, v) })
	}
}

// drawTake draws a valid take of 2 to 40 frames: one to four groups of one to
// three channels on up to three limbs, on an even or uneven clock, with
// channels that stand still, rest, jump, and are very large or very small.
func drawTake(t *rapid.T) *channels.Take {
	l, groups := new(channels.Layout), make([]channels.Group, rapid.IntRange(1, 4).Draw(t, "groups"))
	for g := range groups {
		groups[g].Name = string(rune('a' + g))
		groups[g].Limb = rapid.SampledFrom([]string{"left", "right", "body"}).Draw(t, "limb")
		for range rapid.IntRange(1, 3).Draw(t, "channels") {
			groups[g].Channels = append(groups[g].Channels, len(l.Channels))
			l.Channels = append(l.Channels, channels.Channel{Name: string(rune('A' + len(l.Channels)))})
		}
	}
	l, err := l.WithGroups(groups)
	if err != nil {
		t.Fatalf("layout: %v", err)
	}
	n, w := rapid.IntRange(2, 40).Draw(t, "frames"), len(l.Channels)
	take := &channels.Take{ID: rapid.StringN(0, 8, -1).Draw(t, "id"), Layout: l, Time: drawSeconds(t, n), Data: make([]float64, n*w)}
	for c := range w {
		size := rapid.SampledFrom([]float64{0, 1, 1e-12, 1e-200, 1e6, 1e150}).Draw(t, "size")
		for i := range n {
			take.Data[i*w+c] = size * rapid.SampledFrom([]float64{-1, 0, 0, 0.3, 1}).Draw(t, "value")
		}
	}
	if err := take.Validate(); err != nil {
		t.Skip(err)
	}
	return take
}

// drawSeconds draws a clock of n frames, even or not, from an instant near 0 or
// in seconds since 1970.
func drawSeconds(t *rapid.T, n int) []float64 {
	start := rapid.SampledFrom([]float64{0, -3.5, 1.7e9}).Draw(t, "start")
	even := rapid.Bool().Draw(t, "even")
	out := make([]float64, n)
	at := 0.0
	for i := range out {
		out[i] = start + at
		if even {
			at = float64(i+1) / 50
		} else {
			at += rapid.SampledFrom([]float64{0.001, 0.019, 0.02, 0.021, 1, 100}).Draw(t, "step")
		}
	}
	return out
}

// Whatever a valid take holds, a synthetic one is a valid clock with finite
// values, from the first to the last instant of its source.
func TestDrawsAreSound(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		take := drawTake(t)
		v := augment.Variation{
			Method:     rapid.SampledFrom(augment.Methods()).Draw(t, "method"),
			Knots:      rapid.IntRange(3, 40).Draw(t, "knots"),
			Spread:     rapid.Float64Range(0, 0.33).Draw(t, "spread"),
			TimeShare:  rapid.Float64Range(0, 1).Draw(t, "time share"),
			Straighten: rapid.SampledFrom([]float64{0, 0.5, 1}).Draw(t, "straighten"),
			Trim:       rapid.Float64Range(0, 0.15).Draw(t, "trim"),
			Coupling:   rapid.Float64Range(0, 1).Draw(t, "coupling"),
		}
		if v.Method == augment.Path && rapid.Bool().Draw(t, "regression") {
			v.Knots = 0
		}
		scales := new(channels.Scales)
		scales.Add(take)
		m, err := augment.NewMaker(v, scales, rapid.Uint64().Draw(t, "seed"))
		if err != nil {
			t.Fatalf("maker: %v", err)
		}
		before := take.Clone()
		got := m.Source(take).Draw(rapid.IntRange(0, 1000).Draw(t, "draw"))

		if !slices.Equal(take.Data, before.Data) || !slices.Equal(take.Time, before.Time) {
			t.Fatal("the source was changed")
		}
		if len(got.Data) != got.Frames()*got.Width() || got.Frames() < 2 {
			t.Fatalf("%d values for %d frames", len(got.Data), got.Frames())
		}
		if got.Time[0] != take.Time[0] || got.Time[got.Frames()-1] != take.Time[take.Frames()-1] {
			t.Fatalf("clock runs from %v to %v s, the source's from %v to %v s",
				got.Time[0], got.Time[got.Frames()-1], take.Time[0], take.Time[take.Frames()-1])
		}
		for i, at := range got.Time {
			if i > 0 && at <= got.Time[i-1] {
				t.Fatalf("time %v s at frame %d does not come after %v s", at, i, got.Time[i-1])
			}
			for c, x := range got.Frame(i) {
				if math.IsNaN(x) || math.IsInf(x, 0) {
					t.Fatalf("frame %d: channel %d is %v", i, c, x)
				}
			}
		}
	})
}

func TestDrawsDependOnSeedTakeAndNumberAlone(t *testing.T) {
	eachMethod(t, func(t *testing.T, v augment.Variation) {
		v.Coupling = 0.5
		take := wander(sensorLayout(t, 4), "take", 60, 1)
		same := maker(t, v, 1, take)
		first := same.Source(take).Draw(3)
		again := maker(t, v, 1, take).Source(take)
		again.Draw(0) // draws made before do not matter
		if diff := cmp.Diff(first, again.Draw(3)); diff != "" {
			t.Errorf("the same draw differs: %s", diff)
		}
		renamed := take.Clone()
		renamed.ID = "other"
		for name, other := range map[string]*channels.Take{
			"other seed":   maker(t, v, 2, take).Source(take).Draw(3),
			"other take":   same.Source(renamed).Draw(3),
			"other number": same.Source(take).Draw(4),
		} {
			if slices.Equal(first.Data, other.Data) {
				t.Errorf("%s: the same samples", name)
			}
		}
	})
}

func TestMakeIsTheFirstDraws(t *testing.T) {
	eachMethod(t, func(t *testing.T, v augment.Variation) {
		take := wander(sensorLayout(t, 2), "take", 50, 1)
		m := maker(t, v, 1, take)
		made, err := m.Make(take, 3)
		if err != nil || len(made) != 3 {
			t.Fatalf("%d takes, %v", len(made), err)
		}
		for k, got := range made {
			if diff := cmp.Diff(m.Source(take).Draw(k), got); diff != "" {
				t.Errorf("take %d is not draw %d: %s", k, k, diff)
			}
		}
	})
}

func TestDrawsTellWhereTheyComeFrom(t *testing.T) {
	eachMethod(t, func(t *testing.T, v augment.Variation) {
		take := wander(sensorLayout(t, 2), "take", 50, 1)
		take.Split, take.Where = channels.Train, "wave.csv:2"
		seen := map[string]bool{take.ID: true}
		for k := range 5 {
			got := maker(t, v, 1, take).Source(take).Draw(k)
			if got.Label != take.Label || got.Subject != take.Subject || got.Session != take.Session || got.Split != take.Split {
				t.Errorf("label %q, subject %q, session %q, split %q differ from the source's", got.Label, got.Subject, got.Session, got.Split)
			}
			if got.Layout != take.Layout || got.Where != "" || got.Origin() != channels.Synthetic {
				t.Errorf("layout %p, where %q, origin %q", got.Layout, got.Where, got.Origin())
			}
			if seen[got.ID] {
				t.Errorf("id %q is taken", got.ID)
			}
			seen[got.ID] = true
			if got.Made.Source != take.ID || got.Made.Draw != k || got.Made.Method != string(v.Method) {
				t.Errorf("draw %d was made so: %+v", k, got.Made)
			}
			p := got.Made.Parameters
			if p["knots"] != float64(v.Knots) || p["spread"] != v.Spread || p["coupling"] != v.Coupling {
				t.Errorf("parameters %v do not tell %+v", p, v)
			}
		}
	})
}

// twoLimbs is a take of three groups of two channels that carry the same two
// signals: the first and the last on the left limb, the middle one on the
// right.
func twoLimbs(t testing.TB) *channels.Take {
	l := &channels.Layout{Channels: make([]channels.Channel, 6)}
	l = grouped(t, l,
		channels.Group{Name: "a", Limb: "left", Channels: []int{0, 1}},
		channels.Group{Name: "b", Limb: "right", Channels: []int{2, 3}},
		channels.Group{Name: "c", Limb: "left", Channels: []int{4, 5}})
	take := wander(l, "take", 60, 1)
	for i := range take.Frames() {
		f := take.Frame(i)
		copy(f[2:4], f[:2])
		copy(f[4:6], f[:2])
	}
	return take
}

func TestCouplingOfLimbs(t *testing.T) {
	eachMethod(t, func(t *testing.T, v augment.Variation) {
		v.Trim = 0
		take := twoLimbs(t)
		for _, coupling := range []float64{0, 0.5, 1} {
			v.Coupling = coupling
			source := maker(t, v, 1, take).Source(take)
			var before []float64
			for k := range 20 {
				got := source.Draw(k)
				apart := 0.0
				for i := range got.Frames() {
					f := got.Frame(i)
					apart = max(apart, math.Abs(f[0]-f[2]))
					if !slices.Equal(f[:2], f[4:]) {
						t.Fatalf("coupling %v, draw %d: groups of one limb part at frame %d", coupling, k, i)
					}
				}
				if slices.Equal(got.Data, before) {
					t.Errorf("coupling %v: draws %d and %d are the same", coupling, k-1, k)
				}
				before = got.Data
				if (apart == 0) != (coupling == 1) {
					t.Errorf("coupling %v, draw %d: the limbs part by up to %v", coupling, k, apart)
				}
			}
		}
	})
}

// A tighter coupling keeps two limbs with one signal closer together.
func TestCouplingIsGradual(t *testing.T) {
	eachMethod(t, func(t *testing.T, v augment.Variation) {
		take := twoLimbs(t)
		before := math.Inf(1)
		for _, coupling := range []float64{0, 0.6, 0.95} {
			v.Coupling = coupling
			source := maker(t, v, 1, take).Source(take)
			apart := 0.0
			for k := range 100 {
				got := source.Draw(k)
				for i := range got.Frames() {
					f := got.Frame(i)
					apart += (f[0] - f[2]) * (f[0] - f[2])
				}
			}
			if apart > 0.8*before {
				t.Errorf("coupling %v parts the limbs by %v, a looser one by %v", coupling, apart, before)
			}
			before = apart
		}
	})
}

// Groups are weighed by their size: a channel in another unit gives the same
// draw in that unit.
func TestDrawsFollowTheUnit(t *testing.T) {
	eachMethod(t, func(t *testing.T, v augment.Variation) {
		if v.Method == augment.Path {
			v.Knots = 0 // the regression too sees groups in units of their size
		}
		l := sensorLayout(t, 2)
		take := wander(l, "take", 400, 1)
		inUnits := take.Clone()
		for i := range inUnits.Frames() {
			for _, c := range l.Groups[1].Channels {
				inUnits.Frame(i)[c] *= 1024
			}
		}
		got, want := maker(t, v, 1, inUnits).Source(inUnits).Draw(0), maker(t, v, 1, take).Source(take).Draw(0)
		for i := range want.Frames() {
			for c, x := range want.Frame(i) {
				if slices.Contains(l.Groups[1].Channels, c) {
					x *= 1024
				}
				if y := got.Frame(i)[c]; math.Abs(y-x) > 1e-9*(1+math.Abs(x)) {
					t.Fatalf("frame %d, channel %d: %v, want %v", i, c, y, x)
				}
			}
		}
	})
}
