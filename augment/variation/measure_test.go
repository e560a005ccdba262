package variation_test

import (
	"context"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/augment/variation"
	"strandwise/channels"
)

// The result does not depend on the order of the takes nor on the number of
// workers, only on the seed.
func TestMeasureIsDeterministic(t *testing.T) {
	takes := waves(t)
	o := quick()
	o.Workers = 1
	want := measure(t, o, takes...)
	shuffled := slices.Clone(takes)
	rand.New(rand.NewPCG(1, 1)).Shuffle(len(shuffled), func(i, j int) { shuffled[i], shuffled[j] = shuffled[j], shuffled[i] })
	o.Workers = 5
	scales := &channels.Scales{} // sums in the same order, to the last bit
	for _, k := range takes {
		scales.Add(k)
	}
	got, err := variation.Measure(context.Background(), shuffled, scales, o)
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(want, got); d != "" {
		t.Errorf("another order and number of workers:\n%s", d)
	}
	o.Seed++
	if cmp.Equal(want, measure(t, o, takes...)) {
		t.Error("another seed gave the same intervals")
	}
}

// Takes that are all the same differ in nothing: sizes of 0, used sizes
// between that and the defaults.
func TestMeasureWithoutVariation(t *testing.T) {
	l := layoutOf(t, []string{"accel.x", "accel.y", "accel.z"}, []string{"still.accel.x"})
	var takes []*channels.Take
	for k := range 4 {
		takes = append(takes, takeOf(l, "wave", k, 50, func(c int, u float64) float64 {
			if c == 3 {
				return 7
			}
			return math.Sin(float64(c+2) * 3 * u)
		}))
	}
	m := measure(t, quick(), takes...)
	for _, p := range []variation.Part{variation.Timing, variation.Trim, variation.Duration, variation.Amplitude, variation.Offset, variation.Shape} {
		f, _ := m.Find(p, "", "")
		if f.Measured > 1e-6 || f.Raw > 1e-6 || f.Pairs != 12 || f.Takes != 4 {
			t.Errorf("%s: %+v", p, f)
		}
	}
	if f, own := m.Find(variation.Amplitude, "", "group1"); !own || !f.Default || f.Used != variation.Amplitude.Default() {
		t.Errorf("amplitude of a group that never moves: %+v", f)
	}
}

func TestMeasureOneTakeEach(t *testing.T) {
	takes := waves(t)[:2]
	m := measure(t, quick(), takes...)
	for _, p := range variation.Parts() {
		f, _ := m.Find(p, "wave", "group0")
		if !f.Default || f.Why == "" || f.Used != p.Default() || f.Pairs != 0 {
			t.Errorf("%s: %+v", p, f)
		}
	}
	if len(m.Motions) != 3 || m.Motion("wave").Takes != 1 {
		t.Errorf("kinds of motion: %+v", m.Motions)
	}
}

// Of labels where some have one take, the others are measured.
func TestMeasureSomeSingles(t *testing.T) {
	takes := waves(t)[:5] // three of one label, two of the other
	takes[1].Label = "alone"
	m := measure(t, quick(), takes...)
	if f, own := m.Find(variation.Timing, "wave", ""); !own || f.Takes != 3 || f.Pairs != 6 {
		t.Errorf("%+v", f)
	}
	if f, own := m.Find(variation.Timing, "alone", ""); own || f.Label != "" || f.Takes != 3 {
		t.Errorf("the figure of a label of one take is its own: %+v", f)
	}
}

func TestMeasureFaults(t *testing.T) {
	takes := waves(t)
	scales := &channels.Scales{}
	scales.Add(takes[0])
	other := takeOf(layoutOf(t, []string{"accel.x"}), "wave", 9, 20, func(_ int, u float64) float64 { return u })
	bare := other.Clone()
	bare.Layout = &channels.Layout{Channels: other.Layout.Channels}
	stands := takes[1].Clone()
	stands.Time[3] = stands.Time[2]
	for _, c := range []struct {
		name  string
		takes []*channels.Take
		o     func(*variation.Options)
		says  string
	}{
		{"no take", nil, nil, "there are no takes"},
		{"two layouts", []*channels.Take{takes[0], other}, nil, "do not share their channels"},
		{"no groups", []*channels.Take{bare}, nil, "in no groups"},
		{"a clock that stands", []*channels.Take{takes[0], stands}, nil, "does not come after"},
		{"no workers", takes, func(o *variation.Options) { o.Workers = 0 }, "workers is 0; it must be at least 1"},
		{"few frames", takes, func(o *variation.Options) { o.Frames = 15 }, "frames is 15; it must be at least 16"},
	} {
		o := quick()
		if c.o != nil {
			c.o(&o)
		}
		if _, err := variation.Measure(context.Background(), c.takes, scales, o); err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s: error %v, want it to say %q", c.name, err, c.says)
		}
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := variation.Measure(ctx, takes, scales, quick()); err == nil {
		t.Error("a cancelled measurement ended without an error")
	}
}

// Whatever the takes are, every figure is a size.
func TestMeasureAnyTakes(t *testing.T) {
	l := layoutOf(t, []string{"accel.x", "accel.y"}, []string{"quat.x"})
	rapid.Check(t, func(t *rapid.T) {
		value := rapid.Float64Range(-1e6, 1e6)
		if rapid.Bool().Draw(t, "few values") {
			value = rapid.SampledFrom([]float64{-1, 0, 0, 1})
		}
		scales := &channels.Scales{}
		var takes []*channels.Take
		for k := range rapid.IntRange(1, 4).Draw(t, "takes") {
			frames := rapid.IntRange(2, 40).Draw(t, "frames")
			values := rapid.SliceOfN(value, 3*frames, 3*frames).Draw(t, "values")
			label := rapid.SampledFrom([]string{"a", "b"}).Draw(t, "label")
			take := takeOf(l, label, k, frames, func(int, float64) float64 { return 0 })
			take.Data = values
			if take.Validate() != nil {
				return
			}
			takes = append(takes, take)
			scales.Add(take)
		}
		o := quick()
		o.Draws, o.Frames, o.Workers = 4, 16, 1
		m, err := variation.Measure(context.Background(), takes, scales, o)
		if err != nil {
			t.Fatal(err)
		}
		if err := m.Validate(); err != nil {
			t.Fatal(err)
		}
		for _, f := range m.Figures {
			if !(f.Low <= f.Measured*(1+1e-9) && f.Measured <= f.High*(1+1e-9)) {
				t.Fatalf("%s of %q measured %v, from %v to %v", f.Part, f.Of, f.Measured, f.Low, f.High)
			}
		}
	})
}
