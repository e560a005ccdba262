package path_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"

	"strandwise/augment/path"
)

// drawSamples draws 2 to 60 frames of 1 to 5 channels on an uneven clock.
func drawSamples(t *rapid.T) path.Samples {
	n, width := rapid.IntRange(2, 60).Draw(t, "frames"), rapid.IntRange(1, 5).Draw(t, "width")
	s := path.Samples{Time: make([]float64, n), Width: width}
	s.Values = rapid.SliceOfN(rapid.Float64Range(-100, 100), n*width, n*width).Draw(t, "values")
	for i := 1; i < n; i++ {
		s.Time[i] = s.Time[i-1] + rapid.Float64Range(1e-3, 2).Draw(t, "step")
	}
	return s
}

func allChannels(width int) []int {
	out := make([]int, width)
	for c := range out {
		out[c] = c
	}
	return out
}

func at(s path.Samples, t float64) []float64 {
	row := make([]float64, s.Width)
	s.At(row, t, allChannels(s.Width))
	return row
}

func TestSamplesReproduceFrames(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := drawSamples(t)
		for i, instant := range s.Time {
			near(t, "frame", at(s, instant), s.Values[i*s.Width:(i+1)*s.Width], 0)
		}
	})
}

func TestSamplesHoldBeyondEnds(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := drawSamples(t)
		far := rapid.Float64Range(0, 1e6).Draw(t, "far")
		near(t, "before", at(s, s.Time[0]-far), s.Values[:s.Width], 0)
		near(t, "after", at(s, s.Time[len(s.Time)-1]+far), s.Values[len(s.Values)-s.Width:], 0)
	})
}

func TestSamplesReproduceStraightLines(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := drawSamples(t)
		slope, start := rapid.Float64Range(-5, 5).Draw(t, "slope"), rapid.Float64Range(-5, 5).Draw(t, "start")
		for i := range s.Values {
			s.Values[i] = start + slope*s.Time[i/s.Width] + float64(i%s.Width)
		}
		share := rapid.Float64Range(0, 1).Draw(t, "share")
		for i := 1; i < len(s.Time); i++ {
			instant := s.Time[i-1] + share*(s.Time[i]-s.Time[i-1])
			want := make([]float64, s.Width)
			for c := range want {
				want[c] = start + slope*instant + float64(c)
			}
			near(t, "line", at(s, instant), want, 1e-11)
		}
	})
}

// The textbook form for even steps: half of (2b) + (c−a)u + (2a−5b+4c−d)u² +
// (3b−a−3c+d)u³ between b and c, with neighbours a and d.
func TestSamplesAgreeWithTextbookAtEvenSteps(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	s := path.Samples{Time: ramp(40), Values: walk(rng, 40, 1), Width: 1}
	for i := 1; i < 38; i++ {
		a, b, c, d := s.Values[i-1], s.Values[i], s.Values[i+1], s.Values[i+2]
		for _, u := range []float64{0, 0.1, 0.25, 0.5, 0.9, 1} {
			want := (2*b + (c-a)*u + (2*a-5*b+4*c-d)*u*u + (3*b-a-3*c+d)*u*u*u) / 2
			near(t, "value", at(s, float64(i)+u), []float64{want}, 1e-14)
		}
	}
}

// Half-way between frames linear reading of a sine is off by up to h²/8 (h the
// step in radians), the cubic by about 3h⁴/128: with 16 frames a period,
// 1.9e-2 against 5.6e-4.
func TestSamplesReadSineBetweenFrames(t *testing.T) {
	const perPeriod, frames = 16, 65
	h := 2 * math.Pi / perPeriod
	s := path.Samples{Time: ramp(frames), Values: make([]float64, frames), Width: 1}
	for i := range s.Values {
		s.Values[i] = math.Sin(h * float64(i))
	}
	cubic, linear := 0.0, 0.0
	for i := 1; i < frames-2; i++ {
		want := math.Sin(h * (float64(i) + 0.5))
		cubic = max(cubic, math.Abs(at(s, float64(i)+0.5)[0]-want))
		linear = max(linear, math.Abs((s.Values[i]+s.Values[i+1])/2-want))
	}
	if cubic > 1.1*3*math.Pow(h, 4)/128 || cubic > linear/20 {
		t.Errorf("cubic reading is off by %v, linear by %v", cubic, linear)
	}
}

// The listed channels are read, in the order of the list.
func TestSamplesReadListedChannels(t *testing.T) {
	s := path.Samples{Time: []float64{0, 1}, Values: []float64{1, 2, 3, 10, 20, 30}, Width: 3}
	row := make([]float64, 2)
	s.At(row, 1, []int{2, 0})
	near(t, "channels 2 and 0", row, []float64{30, 10}, 0)
}
