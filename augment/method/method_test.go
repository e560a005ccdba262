package method_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"
	"strandwise/augment/method"
)

// maker is what all methods that need one take only have in common.
type maker interface {
	Apply(dst, src []float64, width int, time []float64, rng *rand.Rand) []float64
}

// Every method must meet the contract.
var (
	_ maker = method.Jitter{}
	_ maker = method.Scaling{}
	_ maker = method.Rotation{}
	_ maker = method.MagnitudeWarp{}
	_ maker = method.TimeWarp{}
	_ maker = method.Slice{}
	_ maker = method.NoiseField{}
	_ maker = method.Parts{}
)

// averaged is a barycentre of a source and two scaled copies, as a maker.
type averaged struct{ others bool }

func (a averaged) Apply(dst, src []float64, width int, _ []float64, rng *rand.Rand) []float64 {
	var others [][]float64
	if a.others && len(src) > 0 {
		for _, f := range []float64{0.9, 1.2} {
			other := slices.Clone(src[:len(src)-len(src)/width/4*width])
			for i := range other {
				other[i] *= f
			}
			others = append(others, other)
		}
	}
	return method.DefaultBarycentre().Apply(dst, src, others, width, rng)
}

// strengths has each method as published or by default, and without strength.
var strengths = map[string]struct{ full, none maker }{
	"jitter":         {method.PublishedJitter(), method.Jitter{}},
	"scaling":        {method.PublishedScaling(), method.Scaling{}},
	"scaling mean":   {method.Scaling{Deviation: 0.3, AboutMean: true}, method.Scaling{AboutMean: true}},
	"rotation":       {method.PublishedRotation(), method.Rotation{}},
	"rotation mean":  {method.Rotation{Limit: 1, AboutMean: true}, method.Rotation{AboutMean: true}},
	"magnitude":      {method.PublishedMagnitudeWarp(), method.MagnitudeWarp{Knots: 4}},
	"magnitude mean": {method.MagnitudeWarp{Deviation: 0.4, Knots: 1, AboutMean: true}, method.MagnitudeWarp{Knots: 1, AboutMean: true}},
	"time warp":      {method.PublishedTimeWarp(), method.TimeWarp{Knots: 4}},
	"wild time warp": {method.TimeWarp{Deviation: 3, Knots: 2}, method.TimeWarp{Knots: 2}},
	"slice":          {method.PublishedSlice(), method.Slice{Share: 1}},
	"noise field":    {method.DefaultNoiseField(), method.NoiseField{Cells: 4, Octaves: 2, Persistence: 0.5}},
	"parts":          {method.DefaultParts(), method.Parts{Count: 3, AtBends: true}},
	"drawn parts":    {method.Parts{Count: 6, Angle: 0.3, Scale: 0.3, Shift: 0.3}, method.Parts{Count: 6}},
	"barycentre":     {averaged{others: true}, averaged{}},
}

// take is frames × width values on a clock of uneven steps.
type take struct {
	src, time []float64
	width     int
}

func anyTake(t *rapid.T) take {
	k := take{width: rapid.IntRange(1, 7).Draw(t, "width")}
	frames := rapid.IntRange(1, 40).Draw(t, "frames")
	value := rapid.Float64Range(-10, 10)
	still := rapid.Bool().Draw(t, "still")
	at := rapid.Float64Range(-1e3, 1e3).Draw(t, "begin")
	for i := range frames {
		k.time = append(k.time, at)
		at += rapid.Float64Range(0.001, 1).Draw(t, "step")
		for c := range k.width {
			if still && i > 0 {
				k.src = append(k.src, k.src[c])
			} else {
				k.src = append(k.src, value.Draw(t, "value"))
			}
		}
	}
	return k
}

// The contract of the package, for every method: the size of the source,
// finite values, the same values from the same generator, the source left as
// it was, and the source itself where the method has no strength.
func TestContract(t *testing.T) {
	for name, m := range strengths {
		t.Run(name, func(t *testing.T) {
			rapid.Check(t, func(t *rapid.T) {
				k := anyTake(t)
				seed := rapid.Uint64().Draw(t, "seed")
				before := slices.Clone(k.src)
				got := m.full.Apply(nil, k.src, k.width, k.time, rand.New(rand.NewPCG(seed, 1)))
				if len(got) != len(k.src) {
					t.Fatalf("%d values from %d", len(got), len(k.src))
				}
				for i, v := range got {
					if math.IsNaN(v) || math.IsInf(v, 0) {
						t.Fatalf("value %d is %v", i, v)
					}
				}
				dst := make([]float64, len(k.src))
				for i := range dst {
					dst[i] = math.NaN()
				}
				again := m.full.Apply(dst, k.src, k.width, k.time, rand.New(rand.NewPCG(seed, 1)))
				if !slices.Equal(got, again) || &again[0] != &dst[0] {
					t.Fatal("the same generator gives other values, or not in the destination")
				}
				if !slices.Equal(before, k.src) {
					t.Fatal("the source was changed")
				}
				same := m.none.Apply(nil, k.src, k.width, k.time, rand.New(rand.NewPCG(seed, 1)))
				if !slices.Equal(same, k.src) {
					t.Fatal("a method of no strength changed the take")
				}
			})
		})
	}
}

// Every method changes a movement.
func TestEveryMethodDoesSomething(t *testing.T) {
	k := stroke(60)
	for name, m := range strengths {
		got := m.full.Apply(nil, k.src, k.width, k.time, rand.New(rand.NewPCG(1, 1)))
		if d := distance(got, k.src); d < 0.01 {
			t.Errorf("%s: root mean square change %v", name, d)
		}
	}
}

func TestSizesThatDisagreePanic(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	for name, call := range map[string]func(){
		"width":       func() { method.PublishedJitter().Apply(nil, make([]float64, 6), 4, make([]float64, 2), rng) },
		"destination": func() { method.PublishedSlice().Apply(make([]float64, 5), make([]float64, 6), 3, []float64{0, 1}, rng) },
		"share":       func() { method.Slice{}.Apply(nil, make([]float64, 6), 3, []float64{0, 1}, rng) },
		"knots":       func() { method.TimeWarp{}.Apply(nil, make([]float64, 6), 3, []float64{0, 1}, rng) },
		"octaves":     func() { method.NoiseField{Cells: 1}.Apply(nil, make([]float64, 6), 3, []float64{0, 1}, rng) },
		"space": func() {
			method.NoiseField{Cells: 1, Octaves: 1, OverSpace: true}.Apply(nil, make([]float64, 8), 4, []float64{0, 1}, rng)
		},
		"parts":      func() { method.Parts{}.Apply(nil, make([]float64, 6), 3, []float64{0, 1}, rng) },
		"dimensions": func() { method.NewNoise(4, rng) },
		"place":      func() { method.NewNoise(2, rng).At(1) },
		"weights":    func() { method.DefaultBarycentre().Average(nil, []float64{1}, [][]float64{{1}}, nil, 1) },
		"no frames":  func() { method.DefaultBarycentre().Average(nil, []float64{1}, [][]float64{{}}, []float64{1}, 1) },
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%s: no panic", name)
				}
			}()
			call()
		}()
	}
}

// stroke returns a smooth movement in space with a bend, at 50 Hz.
func stroke(frames int) take {
	k := take{width: 3}
	for i := range frames {
		u := float64(i) / float64(frames-1)
		k.time = append(k.time, float64(i)/50)
		k.src = append(k.src, math.Sin(3*u), math.Cos(5*u), u*u)
	}
	return k
}

// distance returns the root mean square difference of two takes.
func distance(a, b []float64) float64 {
	sum := 0.0
	for i := range a {
		sum += (a[i] - b[i]) * (a[i] - b[i])
	}
	return math.Sqrt(sum / float64(len(a)))
}
