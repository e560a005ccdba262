package realism

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"

	"strandwise/channels"
)

func TestWasserstein(t *testing.T) {
	for _, x := range []struct {
		a, b []float64
		want float64
	}{
		{[]float64{0, 1, 3}, []float64{5, 6, 8}, 5}, // the reference value of SciPy's documentation, scipy.stats.wasserstein_distance
		{[]float64{0, 1}, []float64{0, 1}, 0},
		{[]float64{0, 1}, []float64{0, 0, 1, 1}, 0},
		{[]float64{0}, []float64{0, 0, 0, 4}, 1},
		{[]float64{3, 1}, []float64{2}, 1},
		{nil, []float64{1}, math.NaN()},
		{[]float64{math.NaN()}, []float64{1}, math.NaN()},
	} {
		for _, got := range []float64{Wasserstein(x.a, x.b), Wasserstein(x.b, x.a)} {
			if !(math.Abs(got-x.want) < 1e-12 || math.IsNaN(got) && math.IsNaN(x.want)) {
				t.Errorf("Wasserstein(%v, %v) = %g, want %g", x.a, x.b, got, x.want)
			}
		}
	}
}

// TestWassersteinAgainstPlain holds it against the integral of the difference
// of the two distribution functions on whole numbers, step by step.
func TestWassersteinAgainstPlain(t *testing.T) {
	sample := rapid.SliceOfN(rapid.Map(rapid.IntRange(-9, 9), func(i int) float64 { return float64(i) }), 1, 12)
	below := func(x []float64, v float64) float64 {
		n := 0.0
		for _, u := range x {
			if u <= v {
				n++
			}
		}
		return n / float64(len(x))
	}
	rapid.Check(t, func(t *rapid.T) {
		a, b := sample.Draw(t, "a"), sample.Draw(t, "b")
		want := 0.0
		for v := -9.0; v < 9; v++ {
			want += math.Abs(below(a, v) - below(b, v))
		}
		if got := Wasserstein(a, b); math.Abs(got-want) > 1e-9 {
			t.Errorf("%g, plain %g", got, want)
		}
	})
}

// TestExponentOfEllipse checks the case of which the exponent is exact:
// harmonic motion on an ellipse has −1/3 (Lacquaniti, Terzuolo, Viviani 1983).
func TestExponentOfEllipse(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a, b := rapid.Float64Range(1, 5).Draw(t, "a"), rapid.Float64Range(0.2, 0.9).Draw(t, "b")
		frames, turns := rapid.IntRange(30, 200).Draw(t, "frames"), rapid.Float64Range(0.6, 3).Draw(t, "turns")
		tilt := rapid.Float64Range(0, 3).Draw(t, "tilt")
		var x, y []float64
		for i := range frames {
			at := 2 * math.Pi * turns * float64(i) / float64(frames)
			u, v := a*math.Cos(at), b*math.Sin(at)
			x, y = append(x, u*math.Cos(tilt)-v*math.Sin(tilt)+7), append(y, u*math.Sin(tilt)+v*math.Cos(tilt)-2)
		}
		if got, ok := Exponent(x, y); !ok || math.Abs(got+1.0/3) > 1e-6 {
			t.Errorf("exponent %g, %v", got, ok)
		}
	})
}

// TestExponentOfOtherPaths checks motion whose exponent is known and not −1/3,
// and paths that have none.
func TestExponentOfOtherPaths(t *testing.T) {
	// The same ellipse at constant speed has an exponent of 0: laid out by arc
	// length, by small steps.
	const frames, fine = 400, 400000
	var x, y []float64
	length, arcs := 0.0, make([]float64, fine+1)
	for i := 1; i <= fine; i++ {
		a, b := 2*math.Pi*float64(i-1)/fine, 2*math.Pi*float64(i)/fine
		length += math.Hypot(2*(math.Cos(b)-math.Cos(a)), math.Sin(b)-math.Sin(a))
		arcs[i] = length
	}
	for i, k := 0, 0; k < frames; k++ {
		for arcs[i] < length*float64(k)/frames {
			i++
		}
		at := 2 * math.Pi * float64(i) / fine
		x, y = append(x, 2*math.Cos(at)), append(y, math.Sin(at))
	}
	if got, ok := Exponent(x, y); !ok || math.Abs(got) > 0.005 {
		t.Errorf("constant speed: exponent %g, %v", got, ok)
	}
	line := make([]float64, 40)
	for i := range line {
		line[i] = float64(i * i)
	}
	still := make([]float64, 40)
	for name, p := range map[string][2][]float64{
		"a line": {line, line}, "at rest": {still, still}, "nothing": {nil, nil}, "five frames": {line[:5], still[:5]},
	} {
		if got, ok := Exponent(p[0], p[1]); ok {
			t.Errorf("%s has an exponent of %g", name, got)
		}
	}
}

// TestUpper holds the share of power against sines of known power.
func TestUpper(t *testing.T) {
	l := &channels.Layout{
		Channels: []channels.Channel{{Name: "a"}, {Name: "b"}, {Name: "c"}},
		Groups:   []channels.Group{{Name: "a", Channels: []int{0}}, {Name: "b", Channels: []int{1}}, {Name: "c", Channels: []int{2}}},
	}
	for _, x := range []struct {
		rate, low, high float64 // Hz
	}{{100, 5, 20}, {20, 1, 7}, {30, 7, 7.7}} {
		take := &channels.Take{Layout: l}
		for i := range 1000 {
			at := float64(i) / x.rate
			take.Time = append(take.Time, at)
			slow, fast := math.Sin(2*math.Pi*x.low*at), math.Sin(2*math.Pi*x.high*at)
			take.Data = append(take.Data, 3+slow+0.5*fast, 2*fast, 9) // shares 0.25/1.25, 1 and 0
		}
		if got, want := upper(take), (0.2+1+0)/3; math.Abs(got-want) > 0.01 {
			t.Errorf("%g Hz: share %g, want %g", x.rate, got, want)
		}
	}
}

// TestSpread checks distances to the medoid by hand.
func TestSpread(t *testing.T) {
	at := func(v float64) []float64 { return []float64{v, v} }
	recorded := [][]float64{at(0), at(2), at(3), at(7)} // medoid 2: distances 2, 1, 5
	s := spread(recorded, [][]float64{at(2), at(1), at(3)})
	if s == nil || math.Abs(s.Recorded-8.0/3) > 1e-12 || math.Abs(s.Synthetic-2.0/3) > 1e-12 || math.Abs(s.Wasserstein-0.75) > 1e-12 {
		t.Errorf("spread %+v", s)
	}
	if s := spread(recorded[:2], recorded); s != nil {
		t.Errorf("two recorded takes have a spread of %+v", s)
	}
	if s := spread([][]float64{at(1), at(1), at(1)}, recorded); s != nil {
		t.Errorf("takes that are all alike have a spread of %+v", s)
	}
}

// TestChange checks the standard error against the definition.
func TestChange(t *testing.T) {
	c, n := change([]float64{1, math.NaN(), 2, 6})
	if n != 3 || c.Mean != 3 || math.Abs(c.Error-math.Sqrt(7.0/3)) > 1e-12 { // variance (4+1+9)/2
		t.Errorf("change %+v of %d", c, n)
	}
	if c, n := change(nil); n != 0 || c != (Change{}) {
		t.Errorf("change of nothing %+v of %d", c, n)
	}
}

// TestDeal checks that folds are even within every label.
func TestDeal(t *testing.T) {
	w := &witness{options: Options{Folds: 4, Seed: 3}}
	sources := make([]described, 30)
	for i := range sources {
		sources[i].label = i / 10
	}
	w.deal(sources)
	count := map[[2]int]int{}
	for _, s := range sources {
		count[[2]int{s.label, s.fold}]++
	}
	for k, n := range count {
		if n < 2 || n > 3 {
			t.Errorf("label %d has %d of 10 takes in fold %d", k[0], n, k[1])
		}
	}
	if len(count) != 12 {
		t.Errorf("%d folds of labels, want 12", len(count))
	}
}

func TestMedoid(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 0))
		points := make([][]float64, rapid.IntRange(1, 9).Draw(t, "n"))
		for i := range points {
			points[i] = []float64{g.NormFloat64(), g.NormFloat64()}
		}
		total := func(i int) float64 {
			sum := 0.0
			for _, p := range points {
				sum += distance(points[i], p)
			}
			return sum
		}
		m := medoid(points)
		for i := range points {
			if total(i) < total(m) {
				t.Errorf("point %d is more central than %d", i, m)
			}
		}
	})
}
