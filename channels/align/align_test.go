package align_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"

	"strandwise/channels/align"
)

const tolerance = 1e-9 // of a frame, and of a cost near 1

// walk is a smooth random movement of n frames.
func walk(r *rand.Rand, n, width int) []float64 {
	x := make([]float64, n*width)
	speed := make([]float64, width)
	for i := range x {
		c := i % width
		speed[c] = 0.8*speed[c] + r.NormFloat64()
		x[i] = speed[c]
		if i >= width {
			x[i] += x[i-width]
		}
	}
	return x
}

func TestAlignIsItsDefinition(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 1))
	var used *align.Aligner
	for _, o := range []align.Options{align.Default(), {Band: 0.05, Open: 0.3, Step: 0.02, Skip: 0.1}, {Band: 1}} {
		o.Smooth = 0
		used = align.NewAligner(o)
		for range 120 {
			width := 1 + r.IntN(7)
			a, b := walk(r, 1+r.IntN(40), width), walk(r, 1+r.IntN(40), width)
			got, want := used.Align(a, b, width), plain(a, b, width, o)
			if got.Begin != want.Begin || got.End != want.End || got.First != want.First || got.Last != want.Last || math.Abs(got.Cost-want.Cost) > tolerance*(1+want.Cost) {
				t.Fatalf("%d and %d frames of %d, %+v:\n%+v, want\n%+v", len(a)/width, len(b)/width, width, o, got, want)
			}
			for i := range want.At {
				if math.Abs(got.At[i]-want.At[i]) > tolerance {
					t.Fatalf("%d and %d frames of %d: frame %d at %v, want %v", len(a)/width, len(b)/width, width, i, got.At[i], want.At[i])
				}
			}
		}
	}
}

// Whatever the lengths, the values and the options, there is a map; it does
// not decrease and stays on b.
func TestAlignAlwaysFindsAMap(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		width := rapid.IntRange(1, 5).Draw(t, "width")
		value := rapid.Float64()
		if rapid.Bool().Draw(t, "few values") {
			value = rapid.SampledFrom([]float64{-1, 0, 1})
		}
		draw := func(name string) []float64 {
			n := rapid.SampledFrom([]int{1, 2, 3, 8, 17, 60}).Draw(t, name)
			return rapid.SliceOfN(value, n*width, n*width).Draw(t, name+" values")
		}
		a, b := draw("a"), draw("b")
		fraction := rapid.Float64Range(0, 1)
		o := align.Options{
			Band: fraction.Draw(t, "band"), Open: fraction.Draw(t, "open"), Step: fraction.Draw(t, "step"),
			Skip: fraction.Draw(t, "skip"), Smooth: rapid.SampledFrom([]float64{0, 0.1, 2, 30}).Draw(t, "smooth"),
		}
		checkMap(t, align.Align(a, b, width, o), len(a)/width, len(b)/width)
	})
}

func checkMap(t interface{ Fatalf(string, ...any) }, al align.Alignment, n, m int) {
	if len(al.At) != n || al.First < 0 || al.First > al.Last || al.Last >= n || !(al.Cost >= 0) {
		t.Fatalf("no sound alignment of %d and %d frames: %+v", n, m, al)
	}
	before := 0.0
	for i, at := range al.At {
		if !(at >= before && at <= float64(m-1)) {
			t.Fatalf("frame %d of %d at %v after %v, of %d frames", i, n, at, before, m)
		}
		before = at
	}
}

func FuzzAlign(f *testing.F) {
	f.Add([]byte{1, 2, 3, 4, 5, 6}, 3, 1)
	f.Add([]byte{0, 0, 0, 0, 255}, 1, 2)
	f.Fuzz(func(t *testing.T, data []byte, split, width int) {
		width = 1 + max(0, width)%4
		whole := len(data) / width
		if whole < 2 || whole > 400 {
			return
		}
		values := make([]float64, whole*width)
		for i := range values {
			values[i] = float64(int8(data[i]))
		}
		n := 1 + max(0, split)%(whole-1)
		checkMap(t, align.Align(values[:n*width], values[n*width:], width, align.Default()), n, whole-n)
	})
}

func TestAlignToItself(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		width := rapid.IntRange(1, 9).Draw(t, "width")
		n := rapid.IntRange(1, 70).Draw(t, "frames")
		a := rapid.SliceOfN(rapid.Float64Range(-9, 9), n*width, n*width).Draw(t, "values")
		al := align.Align(a, a, width, align.Default())
		for i, at := range al.At {
			if math.Abs(at-float64(i)) > tolerance {
				t.Fatalf("frame %d at %v", i, at)
			}
		}
		if al.Cost != 0 || al.Begin != 0 || al.End != 0 || al.First != 0 || al.Last != n-1 {
			t.Fatalf("%+v", al)
		}
	})
}

// A take and the same movement seen some frames later match at that shift,
// which shows at both ends. No two frames of noise are alike, so the shift is
// found exactly.
func TestAlignFindsAShift(t *testing.T) {
	r := rand.New(rand.NewPCG(2, 2))
	for range 50 {
		const n, width = 80, 40
		shift := r.IntN(9)
		long := make([]float64, (n+shift)*width)
		for i := range long {
			long[i] = r.NormFloat64()
		}
		early, late := long[:n*width], long[shift*width:]
		for _, c := range []struct {
			a, b  []float64
			shift int // of a against b, in frames
		}{{early, late, -shift}, {late, early, shift}} {
			al := align.Align(c.a, c.b, width, align.Default())
			if al.Begin != c.shift || al.End != c.shift || al.Cost != 0 {
				t.Fatalf("begins at %d and ends at %d, cost %v, want %d", al.Begin, al.End, al.Cost, c.shift)
			}
			for i := al.First; i <= al.Last; i++ {
				if math.Abs(al.At[i]-float64(i+c.shift)) > tolerance {
					t.Fatalf("shift %d: frame %d at %v", c.shift, i, al.At[i])
				}
			}
		}
	}
}

// A movement played at another, changing tempo is matched to a frame or so.
func TestAlignFindsAWarp(t *testing.T) {
	const n, m = 120, 90
	motion := func(u float64) (x, y float64) { return math.Sin(7 * u), math.Cos(5*u) + u }
	warp := func(u float64) float64 { return u + 0.06*math.Sin(2*math.Pi*u) }
	var a, b []float64
	for i := range n {
		x, y := motion(warp(float64(i) / (n - 1)))
		a = append(a, x, y)
	}
	for j := range m {
		x, y := motion(float64(j) / (m - 1))
		b = append(b, x, y)
	}
	al := align.Align(a, b, 2, align.Default())
	worst := 0.0
	for i, at := range al.At {
		worst = max(worst, math.Abs(at-(m-1)*warp(float64(i)/(n-1))))
	}
	if worst > 1.5 {
		t.Errorf("a frame is %v frames off", worst)
	}
}

func TestAlignPanics(t *testing.T) {
	for name, call := range map[string]func(){
		"no frame":        func() { align.Align(nil, []float64{1}, 1, align.Default()) },
		"no whole frames": func() { align.Align([]float64{1, 2, 3}, []float64{1, 2}, 2, align.Default()) },
		"no width":        func() { align.Align([]float64{1}, []float64{1}, 0, align.Default()) },
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

func TestMedoid(t *testing.T) {
	at := []float64{0, 10, 4, 5, 4}
	medoid, to := align.Medoid(len(at), func(i, j int) float64 { return math.Abs(at[i] - at[j]) })
	if medoid != 2 { // 4 comes twice; the first counts
		t.Errorf("medoid %d", medoid)
	}
	for i, d := range to {
		if d != math.Abs(at[i]-4) {
			t.Errorf("item %d at distance %v", i, d)
		}
	}
	if m, to := align.Medoid(1, nil); m != 0 || len(to) != 1 || to[0] != 0 {
		t.Errorf("of one item: %d, %v", m, to)
	}
	if m, to := align.Medoid(0, nil); m != -1 || to != nil {
		t.Errorf("of none: %d, %v", m, to)
	}
}
