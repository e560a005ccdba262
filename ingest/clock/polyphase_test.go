package clock_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"strandwise/ingest/clock"
)

// slowly resamples by the definition: zeros between the values, one long
// convolution, every down-th value of it.
func slowly(x []float64, up, down int, edge clock.Edge) []float64 {
	g := 1
	for i := 2; i <= min(up, down); i++ {
		if up%i == 0 && down%i == 0 {
			g = i
		}
	}
	up, down = up/g, down/g
	half := 10 * max(up, down)
	taps, sum := make([]float64, 2*half+1), 0.0
	for i := range taps {
		n := float64(i-half) / float64(max(up, down))
		if taps[i] = 1; n != 0 {
			taps[i] = math.Sin(math.Pi*n) / (math.Pi * n)
		}
		r := float64(i-half) / float64(half)
		taps[i] *= besselByIntegral(5 * math.Sqrt(1-r*r))
		sum += taps[i]
	}
	value := func(i int) float64 { // of the series, which goes on beyond its ends
		switch {
		case i >= 0 && i < len(x):
			return x[i]
		case edge == clock.Zero:
			return 0
		case len(x) == 1:
			return x[0]
		}
		return turned(x, i)
	}
	var out []float64
	for k := 0; k*down < len(x)*up; k++ {
		v := 0.0
		for i := range taps {
			if at := k*down + half - i; at%up == 0 {
				v += taps[i] * float64(up) / sum * value(at/up)
			}
		}
		out = append(out, v)
	}
	return out
}

// turned turns a series about its ends as often as it takes.
func turned(x []float64, i int) float64 {
	last := len(x) - 1
	switch {
	case i < 0:
		return 2*x[0] - turned(x, -i)
	case i > last:
		return 2*x[last] - turned(x, 2*last-i)
	}
	return x[i]
}

// besselByIntegral is I0(x) = 1/π ∫ exp(x cos θ) dθ from 0 to π (Abramowitz
// and Stegun 9.6.16), by the trapezium rule, which converges fast for a
// periodic function.
func besselByIntegral(x float64) float64 {
	const n = 64
	sum := (math.Exp(x) + math.Exp(-x)) / 2
	for i := 1; i < n; i++ {
		sum += math.Exp(x * math.Cos(math.Pi*float64(i)/n))
	}
	return sum / n
}

func TestPolyphaseAgainstTheDefinition(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		up, down := rapid.IntRange(1, 9).Draw(t, "up"), rapid.IntRange(1, 9).Draw(t, "down")
		x := rapid.SliceOfN(rapid.Float64Range(-10, 10), 1, 40).Draw(t, "x")
		edge := rapid.SampledFrom([]clock.Edge{clock.Odd, clock.Zero}).Draw(t, "edge")
		p := clock.NewPolyphase(up, down)
		got, want := p.Resample(nil, x, edge), slowly(x, up, down, edge)
		if len(got) != len(want) || p.Len(len(x)) != len(want) {
			t.Fatalf("%d values, want %d", len(got), len(want))
		}
		for i := range got {
			if math.Abs(got[i]-want[i]) > 1e-9 {
				t.Fatalf("value %d is %g, want %g", i, got[i], want[i])
			}
		}
	})
}

// The values are those of scipy.signal.resample_poly(x, up, down, padtype=…)
// of SciPy 1.10.1, with padtype "constant" for Zero and "antireflect" for Odd.
func TestPolyphaseAgainstSciPy(t *testing.T) {
	x := []float64{3, 1, 4, 1, 5, 9, 2, 6, 5, 3, 5, 8, 9, 7, 9, 3, 2, 3, 8, 4, 6, 2, 6, 4}
	for _, c := range []struct {
		up, down int
		edge     clock.Edge
		want     []float64
	}{
		{1, 2, clock.Zero, []float64{2.01078188125, 2.05194629542, 4.97202352668, 5.66308703883, 3.94837223304, 5.31536549262, 8.69454433077, 6.95226360467, 2.11287964221, 6.10452368492, 4.26368509453, 4.62094997999}},
		{1, 2, clock.Odd, []float64{3, 1.87694158837, 5.04049068766, 5.6185119315, 3.98334607647, 5.27513811549, 8.74437361051, 6.88079424352, 2.21716360303, 5.94399859468, 4.51721829067, 4.14254188217}},
		{2, 3, clock.Zero, []float64{1.70735512216, 2.77961621352, 1.92437988438, 7.10863429869, 4.25779927987, 5.37254360266, 3.29718476552, 6.70784289413, 8.44493726787, 8.17875992491, 4.05801498767, 1.99738834368, 6.72306298037, 4.76797495437, 3.77737916729, 5.01552753302}},
		{2, 3, clock.Odd, []float64{3.0006519631, 2.28189161383, 2.20741487775, 6.934438536, 4.36730470976, 5.3044803701, 3.33681895981, 6.68176523372, 8.46726825622, 8.14960918732, 4.09267578137, 1.94059936831, 6.81281913858, 4.62800884346, 4.00559207515, 4.5844517313}},
		{7, 5, clock.Zero, []float64{3.00198781596, 1.30056287387, 1.99163951885, 4.10559716885, 1.59313211109, 1.42399171859, 7.69900735926, 9.00596344788, 3.3081649631, 2.69130966248, 6.57864496688, 5.6796445054, 2.93622902055, 3.57829316732, 5.0033130266, 6.83255973948, 9.44430208097, 8.48904474406, 6.78132003261, 8.94027898861, 7.65990587771, 3.00198781596, 2.03737062869, 1.72447319864, 3.83994454215, 7.90757385096, 5.67388499521, 4.17461945679, 6.00397563192, 3.08967071002, 2.63577956069, 6.5643630985, 4.93348172556, 0.837141132543}},
		{1, 5, clock.Zero, []float64{1.64721669555, 4.3654985248, 6.32144918903, 5.61051445419, 4.37309208896}},
		{1, 5, clock.Odd, []float64{3, 4.21752447379, 6.30776598175, 5.71636005529, 4.13712622886}},
	} {
		got := clock.NewPolyphase(c.up, c.down).Resample(nil, x, c.edge)
		if len(got) != len(c.want) {
			t.Fatalf("%d/%d: %d values, want %d", c.up, c.down, len(got), len(c.want))
		}
		for i := range got {
			if math.Abs(got[i]-c.want[i]) > 1e-9 {
				t.Errorf("%d/%d, edge %v: value %d is %.12g, want %.12g", c.up, c.down, c.edge, i, got[i], c.want[i])
			}
		}
	}
}

// What the package comment promises of the filter: the gain for a sine, by its
// frequency relative to half the new rate, away from the ends.
func TestPolyphaseGain(t *testing.T) {
	for _, ratio := range [][2]int{{1, 2}, {2, 5}, {3, 4}, {1, 10}} {
		p := clock.NewPolyphase(ratio[0], ratio[1])
		gain := func(relative float64) float64 { // largest amplitude that comes out
			x := make([]float64, 4000)
			for i := range x {
				x[i] = math.Cos(math.Pi * relative * float64(ratio[0]) / float64(ratio[1]) * float64(i))
			}
			y := p.Resample(nil, x, clock.Zero)
			top := 0.0
			for _, v := range y[20 : len(y)-20] {
				top = max(top, math.Abs(v))
			}
			return top
		}
		for _, relative := range []float64{0, 0.1, 0.25, 0.5, 0.8} {
			if g := gain(relative); math.Abs(g-1) > 0.01 {
				t.Errorf("%v: gain %g at %g of the new Nyquist frequency", ratio, g, relative)
			}
		}
		for relative := 1.2; relative*float64(ratio[0])/float64(ratio[1]) < 1; relative += 0.07 {
			if g := gain(relative); g > 0.00316 { // −50 dB
				t.Errorf("%v: gain %g (%.1f dB) at %g of the new Nyquist frequency", ratio, g, 20*math.Log10(g), relative)
			}
		}
	}
}

func TestPolyphaseConstant(t *testing.T) {
	x := make([]float64, 200)
	for i := range x {
		x[i] = 9.80665
	}
	for _, ratio := range [][2]int{{1, 2}, {2, 3}, {7, 5}, {5, 12}} {
		for _, v := range clock.NewPolyphase(ratio[0], ratio[1]).Resample(nil, x, clock.Odd) {
			if math.Abs(v/9.80665-1) > 1e-3 { // the gain of the design at its phases
				t.Fatalf("%v: %g", ratio, v)
			}
		}
	}
}

func TestPolyphaseMistakes(t *testing.T) {
	for name, mistake := range map[string]func(){
		"no ratio": func() { clock.NewPolyphase(0, 1) },
		"length":   func() { clock.NewPolyphase(1, 2).Resample(make([]float64, 3), make([]float64, 4), clock.Odd) },
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%s: no panic", name)
				}
			}()
			mistake()
		}()
	}
}
