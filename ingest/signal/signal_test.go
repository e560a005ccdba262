package signal_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/ingest/signal"
	"strandwise/testdata/opendata"
)

func TestMissing(t *testing.T) {
	nan := math.NaN()
	for _, c := range []struct {
		name string
		data []float64
		want []signal.Finding
	}{
		{"nothing", nil, nil},
		{"all there", []float64{1, 2, 3, 4}, nil},
		{"two runs", []float64{1, nan, nan, nan, 5, 6, nan, 8, nan, 9}, []signal.Finding{
			{Channel: 0, First: 1, Count: 3, Longest: 2, Value: nan},
			{Channel: 1, First: 0, Count: 2, Longest: 2, Value: nan},
		}},
	} {
		if d := cmp.Diff(c.want, signal.Missing(c.data, 2), cmpopts.EquateNaNs()); d != "" {
			t.Errorf("%s: %s", c.name, d)
		}
	}
}

func TestStuck(t *testing.T) {
	random := rand.New(rand.NewPCG(9, 1))
	moving := made(100, func(i float64) float64 { return math.Sin(i/5) + 0.01*random.NormFloat64() })
	still := made(100, func(float64) float64 { return 0.5 })
	dies := slices.Clone(moving)
	for i := 40; i < 100; i++ {
		dies[i] = 0.25
	}
	flicker := made(100, func(float64) float64 { return math.Round(0.6*random.NormFloat64()) / 64 })
	group := [][]int{{0, 1, 2}}
	for _, c := range []struct {
		name   string
		data   []float64
		groups [][]int
		want   []signal.Finding
	}{
		{"all move", columns(moving, moving, moving), group, nil},
		{"one stands", columns(moving, still, moving), group, []signal.Finding{{Channel: 1, Count: 100, Longest: 100, Value: 0.5}}},
		{"one dies", columns(moving, moving, dies), group, []signal.Finding{{Channel: 2, First: 40, Count: 60, Longest: 60, Value: 0.25}}},
		{"all stand", columns(still, still, still), group, nil},
		{"others flicker at rest", columns(flicker, still, flicker), group, nil},
		{"alone in its group", columns(moving, still, moving), [][]int{{0, 2}, {1}}, nil},
		{"a short take", columns(moving[:15], still[:15], moving[:15]), group, nil},
		{"never seen", columns(moving, made(100, func(float64) float64 { return math.NaN() }), moving), group, nil},
		{"nothing", nil, group, nil},
	} {
		if d := cmp.Diff(c.want, signal.Stuck(c.data, 3, c.groups)); d != "" {
			t.Errorf("%s: %s", c.name, d)
		}
	}
}

func TestSpikes(t *testing.T) {
	random := rand.New(rand.NewPCG(2, 3))
	clean := made(300, func(i float64) float64 { return math.Sin(i/8) + 0.005*random.NormFloat64() })
	with := func(series []float64, at int, values ...float64) []float64 {
		out := slices.Clone(series)
		for i, v := range values {
			out[at+i] += v
		}
		return out
	}
	for _, c := range []struct {
		name   string
		series []float64
		want   []signal.Finding
	}{
		{"a movement", clean, nil},
		{"one wild value", with(clean, 100, 5), []signal.Finding{{First: 100, Count: 1, Longest: 1, Value: clean[100] + 5}}},
		{"two, one downwards", with(with(clean, 100, 5), 200, -4), []signal.Finding{{First: 100, Count: 2, Longest: 1, Value: clean[100] + 5}}},
		{"too small to be wild", with(clean, 100, 0.5), nil},
		{"two wild frames together", with(clean, 100, 5, 5), nil},
		{"a knock that rings on", with(clean, 100, 5, -3, 2, -1), nil},
		{"a step that stays", with(clean, 100, slices.Repeat([]float64{5}, 200)...), nil},
		{"missing beside it", with(clean, 100, 5, math.NaN()), nil},
		{"missing near it", with(clean, 100, 5, 0, math.NaN()), []signal.Finding{{First: 100, Count: 1, Longest: 1, Value: clean[100] + 5}}},
		{"rest", made(300, func(float64) float64 { return 1 }), nil},
		{"one value at rest", with(made(300, func(float64) float64 { return 1 }), 7, 1), []signal.Finding{{First: 7, Count: 1, Longest: 1, Value: 2}}},
		{"nothing", nil, nil},
		{"two frames", []float64{1, 2}, nil},
	} {
		if d := cmp.Diff(c.want, signal.Spikes(c.series, 1)); d != "" {
			t.Errorf("%s: %s", c.name, d)
		}
	}
}

// Real movements hold few single wild values. The most are in the claps of one
// set; those of NATOPS are single joints that jump for one frame.
func TestSpikesOpenSets(t *testing.T) {
	for name, most := range map[string]int{"BasicMotions": 2, "Epilepsy": 0, "Libras": 0, "NATOPS": 9, "UWaveGestureLibrary": 0, "UTD_MHAD_inertial": 27} {
		takes := opendata.Set(t, name)
		width := takes[0].Width()
		found := 0
		for _, x := range takes {
			found += len(signal.Spikes(x.Data, width))
		}
		t.Logf("%s: %d channels of %d takes", name, found, len(takes))
		if found > most {
			t.Errorf("%s: %d channels of %d takes have spikes, not %d", name, found, len(takes), most)
		}
	}
}

// worn is ten seconds of an accelerometer at 50 Hz in m/s²: rest, a movement,
// rest again, tilted.
func worn(gravity, noise float64) []float64 {
	random := rand.New(rand.NewPCG(4, 5))
	out := make([]float64, 0, 1500)
	for i := range 500 {
		move := 0.0
		if i > 150 && i < 350 {
			move = 6 * math.Sin(float64(i)/4)
		}
		for _, part := range []float64{0.48, -0.6, 0.64} {
			out = append(out, gravity*part+move*part*part+noise*random.NormFloat64())
		}
	}
	return out
}

func TestJudge(t *testing.T) {
	for _, c := range []struct {
		name    string
		gravity float64 // at rest, as the file states it
		unit    string  // stated
		want    signal.Verdict
	}{
		{"m/s^2", 9.81, "m/s^2", signal.Verdict{Gravity: signal.AsStated}},
		{"g", 1.02, "g", signal.Verdict{Gravity: signal.AsStated}},
		{"mg", 990, "mg", signal.Verdict{Gravity: signal.AsStated}},
		{"g taken for m/s^2", 1, "m/s^2", signal.Verdict{Gravity: signal.OtherUnit, Unit: "g"}},
		{"m/s^2 taken for g", 9.7, "g", signal.Verdict{Gravity: signal.OtherUnit, Unit: "m/s^2"}},
		{"mg taken for g", 1005, "g", signal.Verdict{Gravity: signal.OtherUnit, Unit: "mg"}},
		{"g taken for mg", 1, "mg", signal.Verdict{Gravity: signal.OtherUnit, Unit: "g"}},
		{"without gravity", 0, "m/s^2", signal.Verdict{Gravity: signal.Absent}},
		{"no unit fits", 4, "m/s^2", signal.Verdict{}},
	} {
		unit, err := channels.ParseUnit(c.unit)
		if err != nil {
			t.Fatal(err)
		}
		noise := 0.02 * unit.Factor // at most, in the unit of the file
		if c.unit == "mg" {
			noise = 20 * unit.Factor * min(1, c.gravity/1000)
		}
		rest, ok := signal.AtRest(worn(c.gravity*unit.Factor, noise), 3, [3]int{0, 1, 2}, 25)
		if !ok {
			t.Fatalf("%s: no rest", c.name)
		}
		if got := signal.Judge(rest, unit); got != c.want {
			t.Errorf("%s: %+v at %+v", c.name, got, rest)
		}
	}
}

func TestAtRest(t *testing.T) {
	axes := [3]int{0, 1, 2}
	rest, ok := signal.AtRest(worn(9.81, 0.01), 3, axes, 25)
	if !ok || math.Abs(rest.Level-9.81) > 0.01 || math.Abs(rest.Spread-0.01*math.Sqrt(3)) > 0.005 || rest.First > 150 && rest.First < 350 {
		t.Errorf("%+v", rest)
	}
	if _, ok := signal.AtRest(worn(9.81, 0)[:3*20], 3, axes, 25); ok {
		t.Error("rest in a take shorter than a window")
	}
	gone := worn(9.81, 0)
	for i := 0; i < len(gone); i += 3 * 10 {
		gone[i] = math.NaN()
	}
	if _, ok := signal.AtRest(gone, 3, axes, 25); ok {
		t.Error("rest where no window is complete")
	}
	// Always moving: there is a stillest window, but it says nothing.
	moving := made(1500, func(i float64) float64 { return 9.81*math.Mod(i, 3)/2 + 8*math.Sin(i/9) })
	rest, ok = signal.AtRest(moving, 3, axes, 25)
	if si, _ := channels.ParseUnit("m/s^2"); !ok || signal.Judge(rest, si).Gravity != signal.Unclear {
		t.Errorf("%+v", rest)
	}
}

func TestVerdicts(t *testing.T) {
	right, wrong := signal.Verdict{Gravity: signal.AsStated}, signal.Verdict{Gravity: signal.OtherUnit, Unit: "g"}
	for _, c := range []struct {
		name  string
		v     signal.Verdicts
		want  signal.Verdict
		takes int
	}{
		{"none", signal.Verdicts{}, signal.Verdict{}, 0},
		{"most", signal.Verdicts{right: 8, wrong: 1, {}: 3}, right, 8},
		{"divided", signal.Verdicts{right: 5, wrong: 4}, signal.Verdict{}, 0},
		{"a few by chance", signal.Verdicts{wrong: 6, {}: 40}, signal.Verdict{}, 40},
	} {
		if got, n := c.v.Common(); got != c.want || n != c.takes {
			t.Errorf("%s: %+v, %d", c.name, got, n)
		}
	}
}

// The set of Chen et al. (2015) is in g; one read as m/s² by mistake is found
// out. Sets that say nothing of their unit, or are normalised, get no verdict.
func TestJudgeOpenSets(t *testing.T) {
	for _, c := range []struct {
		set, stated string
		factor      float64 // to m/s², as a reader would convert what is stated
		want        signal.Verdict
	}{
		{"UTD_MHAD_inertial", "g", channels.StandardGravity, signal.Verdict{Gravity: signal.AsStated}},
		{"UTD_MHAD_inertial", "m/s^2", 1, signal.Verdict{Gravity: signal.OtherUnit, Unit: "g"}},
		{"UWaveGestureLibrary", "m/s^2", 1, signal.Verdict{}},
		{"BasicMotions", "m/s^2", 1, signal.Verdict{}},
		{"Epilepsy", "g", channels.StandardGravity, signal.Verdict{}},
	} {
		unit, err := channels.ParseUnit(c.stated)
		if err != nil {
			t.Fatal(err)
		}
		takes := opendata.Set(t, c.set)
		width := takes[0].Width()
		v := signal.Verdicts{}
		for _, x := range takes {
			for i := range x.Data {
				x.Data[i] *= c.factor
			}
			if rest, ok := signal.AtRest(x.Data, width, [3]int{0, 1, 2}, 12); ok {
				v[signal.Judge(rest, unit)]++
			}
		}
		got, n := v.Common()
		t.Logf("%s as %s: %+v in %d of %d takes (%v)", c.set, c.stated, got, n, len(takes), v)
		if got != c.want {
			t.Errorf("%s as %s: %+v, want %+v", c.set, c.stated, got, c.want)
		}
	}
}

// Any numbers at all are looked at without a panic, and what is found lies
// within them.
func TestDetectorsTakeAnything(t *testing.T) {
	odd := []float64{0, 1, -1, math.NaN(), math.Inf(1), math.Inf(-1), math.MaxFloat64, 5e-324}
	rapid.Check(t, func(t *rapid.T) {
		n, width := rapid.IntRange(0, 40).Draw(t, "frames"), rapid.IntRange(1, 4).Draw(t, "width")
		data := rapid.SliceOfN(rapid.OneOf(rapid.SampledFrom(odd), rapid.Float64()), n*width, n*width).Draw(t, "data")
		all := make([]int, width)
		for i := range all {
			all[i] = i
		}
		found := slices.Concat(signal.Missing(data, width), signal.Stuck(data, width, [][]int{all}), signal.Spikes(data, width))
		c := signal.NewClipping(width, [][]int{all})
		c.Add(data)
		for _, f := range c.Findings() {
			found = append(found, signal.Finding{Channel: f.Channel, First: f.First, Count: f.Count, Longest: f.Longest})
		}
		for _, f := range found {
			if f.Channel < 0 || f.Channel >= width || f.First < 0 || f.First >= n || f.Count < 1 || f.Count > n || f.Longest < 1 || f.Longest > f.Count {
				t.Fatalf("%d frames of %d channels: %+v", n, width, f)
			}
		}
		if width >= 3 {
			signal.AtRest(data, width, [3]int{0, 1, 2}, 5)
		}
		var d signal.Duplicates
		_, before := d.Add(1, data, width)
		if ref, after := d.Add(2, data, width); before || n > 0 && (!after || ref != 1) {
			t.Fatalf("the same take again: %v, %v", before, after)
		}
	})
}

func ExampleJudge() {
	stated, _ := channels.ParseUnit("m/s^2")
	rest := signal.Rest{Level: 1.01, Spread: 0.01}
	v := signal.Judge(rest, stated)
	fmt.Println(v.Gravity == signal.OtherUnit, v.Unit)
	// Output: true g
}
