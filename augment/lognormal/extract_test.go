package lognormal_test

import (
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"
	"strandwise/augment/lognormal"
)

// The extraction reconstructs movements the model itself made, at 25 dB or
// better. The seeds are fixed.
func TestExtractReconstructsItsOwnStrokes(t *testing.T) {
	const least = 25 // decibels
	for width, name := range []string{1: "on a line", 2: "in the plane", 3: "in space"} {
		if width == 0 {
			continue
		}
		t.Run(name, func(t *testing.T) {
			var snr []float64
			for seed := range uint64(40) {
				planted, clock := drawModel(width, rand.New(rand.NewPCG(seed, 7)))
				path := planted.Path(nil, clock)
				got, err := lognormal.Extract(path, width, clock, lognormal.Default())
				if err != nil {
					t.Errorf("seed %d: %v", seed, err)
					continue
				}
				if got.SNR < least {
					t.Errorf("seed %d: %.1f dB with %d strokes for %d", seed, got.SNR, len(got.Strokes), len(planted.Strokes))
				}
				snr = append(snr, lognormal.SNR(path, got.Path(nil, clock), width, clock))
				if stated, checked := min(got.SNR, 90), min(snr[len(snr)-1], 90); math.Abs(stated-checked) > 0.01 {
					t.Errorf("seed %d: states %v dB, its path has %v", seed, stated, checked)
				}
			}
			slices.Sort(snr)
			t.Logf("%d paths: least %.1f, median %.1f dB", len(snr), snr[0], snr[len(snr)/2])
		})
	}
}

// One stroke alone comes back with its own parameters.
func TestExtractOneStroke(t *testing.T) {
	planted := lognormal.Planar(0.3, 0.1, -1.4, 0.25, 0.5, 1.6)
	var clock []float64
	for i := range 100 {
		clock = append(clock, 5+float64(i)*0.01)
	}
	planted.T0 += 5
	m := &lognormal.Model{Width: 2, Start: lognormal.Vec{1, 2}, Strokes: []lognormal.Stroke{planted}}
	got, err := lognormal.Extract(m.Path(nil, clock), 2, clock, lognormal.Default())
	if err != nil {
		t.Fatal(err)
	}
	if len(got.Strokes) != 1 {
		t.Fatalf("%d strokes, want 1", len(got.Strokes))
	}
	k := got.Strokes[0]
	start, end := k.Angles()
	for name, pair := range map[string][2]float64{
		"D": {k.D, 0.3}, "t0": {k.T0, 5.1}, "mu": {k.Mu, -1.4}, "sigma": {k.Sigma, 0.25}, "θs": {start, 0.5}, "θe": {end, 1.6},
	} {
		if math.Abs(pair[0]-pair[1]) > 0.01 {
			t.Errorf("%s is %v, want %v", name, pair[0], pair[1])
		}
	}
}

// The same movement in another unit has the same strokes in that unit.
func TestExtractKnowsNoUnit(t *testing.T) {
	planted, clock := drawModel(3, rand.New(rand.NewPCG(5, 7)))
	path := planted.Path(nil, clock)
	want, err := lognormal.Extract(path, 3, clock, lognormal.Default())
	if err != nil {
		t.Fatal(err)
	}
	for _, unit := range []float64{1024, 1.0 / (1 << 30)} { // exact in binary
		in := slices.Clone(path)
		for i := range in {
			in[i] *= unit
		}
		got, err := lognormal.Extract(in, 3, clock, lognormal.Default())
		if err != nil {
			t.Fatal(err)
		}
		if len(got.Strokes) != len(want.Strokes) || math.Abs(got.SNR-want.SNR) > 1e-6 {
			t.Errorf("unit %v: %d strokes at %v dB, want %d at %v", unit, len(got.Strokes), got.SNR, len(want.Strokes), want.SNR)
		}
	}
}

func TestExtractRefusesNoise(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	path, clock := make([]float64, 300), make([]float64, 100)
	for i := range path {
		path[i] = rng.NormFloat64()
	}
	for i := range clock {
		clock[i] = float64(i) / 50
	}
	_, err := lognormal.Extract(path, 3, clock, lognormal.Default())
	var poor *lognormal.PoorFitError
	if !errors.As(err, &poor) {
		t.Fatalf("white noise gives %v, want a PoorFitError", err)
	}
	if !(poor.SNR < 15) || poor.Floor != 15 || !strings.Contains(err.Error(), "dB") {
		t.Errorf("%+v: %v", poor, err)
	}
}

func TestExtractErrors(t *testing.T) {
	clock := []float64{0, 1, 2, 3}
	for name, c := range map[string]struct {
		path []float64
		w    int
		time []float64
		want string
	}{
		"wide":     {make([]float64, 16), 4, clock, "4 coordinates"},
		"short":    {make([]float64, 6), 2, clock[:3], "3 frames are too few"},
		"gap":      {[]float64{0, 0, 0, 0, 0, math.NaN(), 0, 0}, 2, clock, "frame 2, coordinate 1"},
		"infinite": {[]float64{0, math.Inf(1), 0, 0}, 1, clock, "frame 1, coordinate 0"},
		"huge":     {[]float64{-1e308, 1e308, 0, 0}, 1, clock, "speed"},
	} {
		_, err := lognormal.Extract(c.path, c.w, c.time, lognormal.Default())
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: error %v does not mention %q", name, err, c.want)
		}
	}
}

func TestExtractOfARest(t *testing.T) {
	m, err := lognormal.Extract([]float64{1, 2, 1, 2, 1, 2, 1, 2}, 2, []float64{0, 1, 2, 3}, lognormal.Default())
	if err != nil {
		t.Fatal(err)
	}
	if len(m.Strokes) != 0 || !math.IsInf(m.SNR, 1) {
		t.Errorf("a rest has %d strokes at %v dB", len(m.Strokes), m.SNR)
	}
	for i, v := range m.Path(nil, []float64{0, 1, 2}) {
		if v != []float64{1, 2}[i%2] {
			t.Errorf("value %d is %v", i, v)
		}
	}
}

// Whatever the path, there is either a model that is finite and as good as it
// says, or a refusal that says how good.
func TestExtractOfAnyPath(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		width := rapid.IntRange(1, 3).Draw(t, "width")
		frames := rapid.IntRange(4, 40).Draw(t, "frames")
		path, clock := make([]float64, frames*width), make([]float64, frames)
		value := rapid.Float64Range(-3, 3)
		smooth := rapid.Bool().Draw(t, "smooth")
		for i := range path {
			path[i] = value.Draw(t, "value")
			if smooth && i >= 2*width {
				path[i] = 0.05*path[i] + 1.8*path[i-width] - 0.82*path[i-2*width]
			}
		}
		for i := 1; i < frames; i++ {
			clock[i] = clock[i-1] + rapid.Float64Range(0.005, 0.05).Draw(t, "step")
		}
		o := lognormal.Default()
		o.Floor = rapid.SampledFrom([]float64{-10, 5, 15}).Draw(t, "floor")
		m, err := lognormal.Extract(path, width, clock, o)
		var poor *lognormal.PoorFitError
		if errors.As(err, &poor) {
			if !(poor.SNR < o.Floor) {
				t.Fatalf("refused at %v dB with a floor of %v", poor.SNR, o.Floor)
			}
			return
		}
		if err != nil {
			t.Fatal(err)
		}
		got := m.Path(nil, clock)
		for i, v := range got {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				t.Fatalf("value %d is %v", i, v)
			}
		}
		// No stroke has to fit, but none may make it worse.
		if !(m.SNR >= max(o.Floor, 0)) {
			t.Fatalf("accepted at %v dB", m.SNR)
		}
		if snr := lognormal.SNR(path, got, width, clock); math.Abs(min(snr, 60)-min(m.SNR, 60)) > 0.05 {
			t.Fatalf("states %v dB, its path has %v", m.SNR, snr)
		}
	})
}

func TestStrokeBound(t *testing.T) {
	planted, clock := drawModel(2, rand.New(rand.NewPCG(11, 7)))
	for _, most := range []int{1, 2} {
		m, err := lognormal.Extract(planted.Path(nil, clock), 2, clock, lognormal.Options{Floor: -100, Target: 200, Strokes: most})
		if err != nil {
			t.Fatal(err)
		}
		if len(m.Strokes) != most {
			t.Errorf("%d strokes, want %d", len(m.Strokes), most)
		}
	}
}
