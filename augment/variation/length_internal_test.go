package variation

import (
	"math"
	"math/rand/v2"
	"testing"

	"strandwise/augment/smooth"
)

// The variance of a mean, against the double integral of the covariance.
func TestMeanVariance(t *testing.T) {
	const n, tolerance = 800, 1e-5
	for _, length := range []float64{0.03, 0.1, 0.2, 0.6} {
		for _, h := range []float64{0.05, slopeWindow, 1} {
			want := 0.0
			for i := range n {
				x := (float64(i) + 0.5) / n * h
				want += 2 * (h - x) / (h * h) * math.Exp(-x*x/(2*length*length)) * h / n
			}
			if got := meanVariance(h, length); math.Abs(got-want) > tolerance {
				t.Errorf("window %v, length %v: %v, want %v", h, length, got, want)
			}
		}
	}
}

// The two ratios against draws of the process, and that they can be turned
// round.
func TestLengthRatios(t *testing.T) {
	const frames, draws, tolerance = 129, 6000, 0.05 // relative
	places := make([]float64, frames)
	for i := range places {
		places[i] = float64(i) / (frames - 1)
	}
	r := rand.New(rand.NewPCG(1, 1))
	for _, length := range []float64{0.05, 0.1, 0.2, 0.4} {
		p := smooth.NewProcess(places, length)
		var bend, slope, shape, increment float64
		x, g := make([]float64, frames), make([]float64, frames)
		for range draws {
			p.Draw(x, r)
			centre(x, 1, 0)
			for i := 1; i < frames; i++ {
				g[i] = g[i-1] + (x[i]+x[i-1])/2/(frames-1)
			}
			for i := range x {
				bend += square(g[i]-g[frames-1]*places[i]) / frames
				shape += square(x[i]) / frames
			}
			h, k := (frames-1)/8, (frames-1)/16
			for i := 0; i+h < frames; i++ {
				slope += square((g[i+h]-g[i])*8) / float64(frames-h)
			}
			for i := 0; i+k < frames; i++ {
				increment += square(x[i+k]-x[i]) / 2 / float64(frames-k)
			}
		}
		for name, c := range map[string]struct {
			got   float64
			ratio func(float64) float64
		}{"bend to slope": {bend / slope, bendToSlope}, "increment to shape": {increment / shape, incrementToShape}} {
			if want := c.ratio(length); math.Abs(c.got/want-1) > tolerance {
				t.Errorf("%s of length %v: %v in draws, %v by formula", name, length, c.got, want)
			}
			if back := inverse(c.ratio, c.ratio(length)); math.Abs(back-length) > 1e-6 {
				t.Errorf("%s: length %v comes back as %v", name, length, back)
			}
		}
	}
}

// What is drawn has the sizes asked for: the timing about its mean, the trims,
// the turn, the amplitude.
func TestModelDraws(t *testing.T) {
	const draws, tolerance = 4000, 0.05 // relative
	f := &form{frames: 64, width: 1, layout: oneChannel()}
	m := newModel(f, 0.2, 0.2)
	r := rand.New(rand.NewPCG(2, 2))
	s := sizes{timing: 0.1, timingLength: 0.2, trim: 0.03}
	var rate, begin float64
	for range draws {
		at := m.drawTiming(s, r)
		for i := 1; i < len(at); i++ {
			mean := (at[63] - at[0]) / 63
			rate += square(math.Log((at[i]-at[i-1])/mean)) / 63 / draws
		}
		begin += square(at[0]/63) / draws
	}
	if got := math.Sqrt(rate); math.Abs(got/s.timing-1) > tolerance {
		t.Errorf("log rate %v, want %v", got, s.timing)
	}
	if got := math.Sqrt(begin); math.Abs(got/s.trim-1) > tolerance {
		t.Errorf("trim %v, want %v", got, s.trim)
	}
	var amplitude, gain, shape float64
	ramp := make([]float64, 64)
	for i := range ramp {
		ramp[i] = math.Sin(float64(i))
	}
	centre(ramp, 1, 0)
	rms := math.Sqrt(sumOfSquares(ramp) / 64)
	for range draws {
		m.varied = append(m.varied[:0], ramp...)
		m.drawGroup([]int{0}, 0.15, 0, 0, 0, r)
		amplitude += square(math.Log(m.varied[7]/ramp[7])) / draws
		m.varied = append(m.varied[:0], ramp...)
		m.drawGroup([]int{0}, 0, 0.2, 0, 0, r)
		for i := range ramp {
			gain += square(math.Log(m.varied[i]/ramp[i])) / draws / 64
		}
		m.varied = append(m.varied[:0], ramp...)
		m.drawGroup([]int{0}, 0, 0, 0, 0.3, r)
		for i := range ramp {
			shape += square(m.varied[i]-ramp[i]) / draws / 64
		}
	}
	for name, c := range map[string][2]float64{
		"amplitude": {amplitude, 0.15}, "gain": {gain, 0.2 * within(slowness)}, "shape": {shape, 0.3 * rms * within(slowness)},
	} {
		if got := math.Sqrt(c[0]); math.Abs(got/c[1]-1) > tolerance {
			t.Errorf("%s %v, want %v", name, got, c[1])
		}
	}
}

func sumOfSquares(x []float64) float64 {
	s := 0.0
	for _, v := range x {
		s += v * v
	}
	return s
}
