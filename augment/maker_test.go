package augment_test

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/augment"
	"strandwise/augment/variation"
	"strandwise/channels"
)

// knots and published vary enough for every part of a method to show.
func knots() augment.Variation {
	v := augment.Default()
	v.Timing, v.Knots, v.Spread, v.TimeShare = augment.Knots, 7, 0.1, 0.5
	return v
}

func published() augment.Variation {
	v := augment.Published(augment.Path)
	v.Knots = 12
	return v
}

// eachMethod runs a test for the recipe with both ways of timing, and for path
// resampling.
func eachMethod(t *testing.T, test func(*testing.T, augment.Variation)) {
	for name, v := range map[string]augment.Variation{"smooth": augment.Default(), "knots": knots(), "path": published()} {
		t.Run(name, func(t *testing.T) { test(t, v) })
	}
}

func coupled(v augment.Variation, rho float64) augment.Variation {
	v.Coupling = &rho
	return v
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

// Whatever a valid take holds, a synthetic one has a clock that rises from the
// same instant in the same steps and finite values, whatever the method.
func TestDrawsAreSound(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		take := drawTake(t)
		other := take.Clone()
		other.ID = take.ID + "'"
		v := drawVariation(t)
		m, err := augment.NewMaker(v, training(take, other), rapid.Uint64().Draw(t, "seed"))
		if err != nil {
			t.Fatalf("maker: %v", err)
		}
		before := take.Clone()
		s, err := m.Source(take)
		if err != nil {
			t.Skip(err) // such as a mirror image of a take without sides
		}
		takes, tally := s.Takes(2)
		if len(takes)+2*tally.Refused != 2 {
			t.Fatalf("%d takes, tally %+v", len(takes), tally)
		}
		if !slices.Equal(take.Data, before.Data) || !slices.Equal(take.Time, before.Time) {
			t.Fatal("the source was changed")
		}
		for _, got := range takes {
			if err := sound(got, take); err != "" {
				t.Fatalf("%s by %s: %s", got.ID, got.Made.Method, err)
			}
		}
	})
}

func drawVariation(t *rapid.T) augment.Variation {
	v := augment.Default()
	for _, m := range rapid.SliceOfNDistinct(rapid.SampledFrom(augment.Methods()), 1, 3, rapid.ID).Draw(t, "methods") {
		if len(v.Blend) == 1 && v.Blend[0].Method == augment.Recipe {
			v.Blend = nil
		}
		v.Blend = append(v.Blend, augment.Share{Method: m, Weight: rapid.Float64Range(0.1, 4).Draw(t, "weight")})
	}
	v.Reach = rapid.Float64Range(0, 3).Draw(t, "reach")
	v.Kind = rapid.SampledFrom([]augment.Kind{augment.Gesture, augment.Ongoing}).Draw(t, "kind")
	v.Timing = rapid.SampledFrom([]augment.Timing{augment.Smooth, augment.Knots}).Draw(t, "timing")
	v.Knots = rapid.SampledFrom([]int{0, 3, 4, 40}).Draw(t, "knots")
	v.Spread = rapid.Float64Range(0, 0.33).Draw(t, "spread")
	v.TimeShare = rapid.Float64Range(0, 1).Draw(t, "time share")
	v.Mix = rapid.Float64Range(0, 1).Draw(t, "mix")
	for _, part := range variation.Parts() {
		if rapid.Bool().Draw(t, string(part)) {
			v.Sizes[part] = rapid.Float64Range(0.02, 0.15).Draw(t, "size")
		}
	}
	return coupled(v, rapid.Float64Range(0, 1).Draw(t, "coupling"))
}

// sound tells what is wrong with a synthetic take, empty for nothing.
func sound(got, source *channels.Take) string {
	if len(got.Data) != got.Frames()*got.Width() || got.Frames() < 2 {
		return fmt.Sprintf("%d values for %d frames", len(got.Data), got.Frames())
	}
	if got.Time[0] != source.Time[0] {
		return fmt.Sprintf("begins at %v s, the source at %v s", got.Time[0], source.Time[0])
	}
	for i, at := range got.Time {
		if i > 0 && at <= got.Time[i-1] {
			return fmt.Sprintf("time %v s at frame %d does not come after %v s", at, i, got.Time[i-1])
		}
		for c, x := range got.Frame(i) {
			if math.IsNaN(x) || math.IsInf(x, 0) {
				return fmt.Sprintf("frame %d: channel %d is %v", i, c, x)
			}
		}
	}
	return ""
}

func TestDrawsDependOnSeedTakeAndNumberAlone(t *testing.T) {
	eachMethod(t, func(t *testing.T, v augment.Variation) {
		v = coupled(v, 0.5)
		take := wander(sensorLayout(t, 4), "take", 60, 1)
		first := source(t, v, 1, take).Draw(3)
		again := source(t, v, 1, take)
		again.Draw(0) // draws made before do not matter
		if diff := cmp.Diff(first, again.Draw(3)); diff != "" {
			t.Errorf("the same draw differs: %s", diff)
		}
		renamed := take.Clone()
		renamed.ID = "other"
		for name, other := range map[string]*channels.Take{
			"other seed":   source(t, v, 2, take).Draw(3),
			"other take":   source(t, v, 1, renamed).Draw(3),
			"other number": source(t, v, 1, take).Draw(4),
		} {
			if slices.Equal(first.Data, other.Data) {
				t.Errorf("%s: the same samples", name)
			}
		}
	})
}

// Without gates the takes made are the first draws, in the order of choice.
func TestTakesAreTheFirstDrawsInOrder(t *testing.T) {
	eachMethod(t, func(t *testing.T, v augment.Variation) {
		take := wander(sensorLayout(t, 2), "take", 50, 1)
		made, err := maker(t, v, 1, take).Make(take, 6)
		if err != nil || len(made) != 6 {
			t.Fatalf("%d takes, %v", len(made), err)
		}
		seen := map[int]bool{}
		for rank, got := range made {
			if got.Made.Rank != rank {
				t.Errorf("take %d has rank %d", rank, got.Made.Rank)
			}
			seen[got.Made.Draw] = true
			want := source(t, v, 1, take).Draw(got.Made.Draw)
			want.Made.Rank = rank
			if diff := cmp.Diff(want, got); diff != "" {
				t.Errorf("take %d is not draw %d: %s", rank, got.Made.Draw, diff)
			}
		}
		for draw := range 6 {
			if !seen[draw] {
				t.Errorf("draw %d is not among the takes", draw)
			}
		}
	})
}

// The place of a dropped take goes to the next in rank, and a further draw makes
// the number up.
func TestDroppedTakesAreReplaced(t *testing.T) {
	take := wander(sensorLayout(t, 2), "take", 50, 1)
	v := augment.Default()
	all, _ := source(t, v, 1, take).Takes(6)
	v.Dropped = map[string]bool{all[1].ID: true, all[4].ID: true}
	got, tally := source(t, v, 1, take).Takes(6)
	var ids []string
	for rank, g := range got {
		ids = append(ids, g.ID)
		if g.Made.Rank != rank {
			t.Errorf("%s has rank %d, want %d", g.ID, g.Made.Rank, rank)
		}
	}
	want := []string{all[0].ID, all[2].ID, all[3].ID, all[5].ID, "take~6", "take~7"}
	if !slices.Equal(ids, want) || tally.Dropped != 2 || tally.Made != 6 {
		t.Errorf("%v, want %v; tally %+v", ids, want, tally)
	}
}

func TestDrawsTellWhereTheyComeFrom(t *testing.T) {
	eachMethod(t, func(t *testing.T, v augment.Variation) {
		take := wander(sensorLayout(t, 2), "take", 50, 1)
		take.Split, take.Where = channels.Train, "wave.csv:2"
		seen := map[string]bool{take.ID: true}
		for k := range 5 {
			got := source(t, v, 1, take).Draw(k)
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
			if got.Made.Source != take.ID || got.Made.Draw != k || got.Made.Method != string(v.Blend[0].Method) {
				t.Errorf("draw %d was made so: %+v", k, got.Made)
			}
			if len(got.Made.Parameters) == 0 {
				t.Error("no parameter tells what was drawn")
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

// noSizes takes away all that is drawn for each group, so that groups with one
// signal differ by their timing alone.
func noSizes(v augment.Variation) augment.Variation {
	for _, part := range variation.Parts() {
		if part != variation.Timing && part != variation.TimingLength && part != variation.ShapeLength {
			v.Sizes[part] = 0
		}
	}
	return v
}

func TestCouplingOfLimbs(t *testing.T) {
	eachMethod(t, func(t *testing.T, v augment.Variation) {
		v = noSizes(v)
		take := twoLimbs(t)
		for _, rho := range []float64{0, 0.5, 1} {
			source := source(t, coupled(v, rho), 1, take)
			var before []float64
			for k := range 20 {
				got := source.Draw(k)
				apart := 0.0
				for i := range got.Frames() {
					f := got.Frame(i)
					apart = max(apart, math.Abs(f[0]-f[2]))
					if !slices.Equal(f[:2], f[4:]) {
						t.Fatalf("coupling %v, draw %d: groups of one limb part at frame %d", rho, k, i)
					}
				}
				if slices.Equal(got.Data, before) {
					t.Errorf("coupling %v: draws %d and %d are the same", rho, k-1, k)
				}
				before = got.Data
				if (apart == 0) != (rho == 1) {
					t.Errorf("coupling %v, draw %d: the limbs part by up to %v", rho, k, apart)
				}
			}
		}
	})
}

// A tighter coupling keeps two limbs with one signal closer together.
func TestCouplingIsGradual(t *testing.T) {
	eachMethod(t, func(t *testing.T, v augment.Variation) {
		v = noSizes(v)
		take := twoLimbs(t)
		before := math.Inf(1)
		for _, rho := range []float64{0, 0.6, 0.95} {
			source := source(t, coupled(v, rho), 1, take)
			apart := 0.0
			for k := range 100 {
				got := source.Draw(k)
				for i := range got.Frames() {
					f := got.Frame(i)
					apart += (f[0] - f[2]) * (f[0] - f[2])
				}
			}
			if apart > 0.8*before {
				t.Errorf("coupling %v parts the limbs by %v, a looser one by %v", rho, apart, before)
			}
			before = apart
		}
	})
}

// positions is a layout of two tracked points, whose units no law of motion
// ties to each other.
func positions(t testing.TB) *channels.Layout {
	l := new(channels.Layout)
	for _, name := range []string{"a.pos.x", "a.pos.y", "a.pos.z", "b.pos.x", "b.pos.y", "b.pos.z"} {
		c, _ := channels.ParseHeader(name)
		l.Channels = append(l.Channels, c)
	}
	return grouped(t, l, channels.Group{Name: "a", Channels: []int{0, 1, 2}}, channels.Group{Name: "b", Channels: []int{3, 4, 5}})
}

// Groups are weighed by their size: a channel in another unit gives the same
// draw in that unit.
func TestDrawsFollowTheUnit(t *testing.T) {
	eachMethod(t, func(t *testing.T, v augment.Variation) {
		if v.Blend[0].Method == augment.Path {
			v.Knots = 0 // the regression too sees groups in units of their size
		}
		l := positions(t)
		v.PathShare = 0
		take := wander(l, "take", 400, 1)
		inUnits := take.Clone()
		for i := range inUnits.Frames() {
			for _, c := range l.Groups[1].Channels {
				inUnits.Frame(i)[c] *= 1024
			}
		}
		got, want := source(t, v, 1, inUnits).Draw(0), source(t, v, 1, take).Draw(0)
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
