package variation_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"strandwise/augment/variation"
	"strandwise/channels"
)

// resting are takes that rest in their first and last third, with noise of the
// given size on each channel.
func resting(t *testing.T, seed uint64, sd []float64) []*channels.Take {
	r := rand.New(rand.NewPCG(seed, 5))
	l := layoutOf(t, []string{"accel.x", "accel.y"})
	var takes []*channels.Take
	for k := range 6 {
		takes = append(takes, takeOf(l, "wave", k, 120, func(c int, u float64) float64 {
			s := min(max(3*u-1, 0), 1)
			return 5 + 10*math.Sin(2*math.Pi*s) + sd[c]*r.NormFloat64()
		}))
	}
	return takes
}

func TestNoiseAtRest(t *testing.T) {
	sd := []float64{0.1, 0.4}
	m := measure(t, quick(), resting(t, 1, sd)...)
	for c, name := range []string{"accel.x", "accel.y"} {
		f, own := m.Find(variation.Noise, "", name)
		if !own || f.Unit != "m/s^2" || f.Takes != 6 || f.Low > sd[c] || f.High < sd[c] {
			t.Errorf("noise of %v on %s: %+v", sd[c], name, f)
		}
	}
	if len(m.Spectra) != 2 || math.Abs(m.Spectra[0].Rate-50) > 1e-9 {
		t.Fatalf("spectra %+v", m.Spectra)
	}
	for _, s := range m.Spectra { // white, but for what the parabola takes from the lowest band
		if s.Shares[0] > s.Shares[1] || math.Abs(s.Shares[1]-s.Shares[2]) > 0.12 {
			t.Errorf("shares %v", s.Shares)
		}
	}
}

// Frames filled in at the end of a take, all the same, are no rest.
func TestFilledFramesAreNoRest(t *testing.T) {
	sd := []float64{0.1, 0.4}
	takes := resting(t, 2, sd)
	for _, k := range takes {
		last := k.Frame(k.Frames() - 1)
		for range 90 {
			k.Time = append(k.Time, k.Time[len(k.Time)-1]+0.02)
			k.Data = append(k.Data, last...)
		}
	}
	m := measure(t, quick(), takes...)
	if f, _ := m.Find(variation.Noise, "", "accel.y"); f.Low > sd[1] || f.High < sd[1] {
		t.Errorf("noise of %v: %+v", sd[1], f)
	}
}

func TestNoNoiseWithoutRest(t *testing.T) {
	l := layoutOf(t, []string{"accel.x"})
	m := measure(t, quick(), takeOf(l, "wave", 0, 90, func(_ int, u float64) float64 { return 40 * u }), takeOf(l, "wave", 1, 9, func(_ int, u float64) float64 { return u }))
	f, own := m.Find(variation.Noise, "", "accel.x")
	if !own || !f.Default || f.Used != 0 || f.Why != "no take rests" || len(m.Spectra) != 0 {
		t.Errorf("%+v, spectra %v", f, m.Spectra)
	}
}
