package lognormal

import (
	"math"
	"testing"
)

// The inflexions of the speed lie where the published relations put them: its
// second difference changes sign there. σ comes back from the ratios of the
// speeds at the characteristic points.
func TestCharacteristicPoints(t *testing.T) {
	for _, sigma := range []float64{0.05, 0.1, 0.25, 0.4, 0.7} {
		k := Planar(1, 0, -1.5, sigma, 0, 0)
		a2, a3, a4 := characteristic(sigma)
		instant := func(a float64) float64 { return math.Exp(k.Mu - a) }
		const h = 1e-5
		bend := func(at float64) float64 { return k.Speed(at-h) - 2*k.Speed(at) + k.Speed(at+h) }
		for _, a := range []float64{a2, a4} {
			before, after := bend(instant(a)*0.999), bend(instant(a)*1.001)
			if before*after > 0 {
				t.Errorf("σ %v: no inflexion at a = %v", sigma, a)
			}
		}
		if math.Abs(instant(a3)-k.PeakTime()) > 1e-12 {
			t.Errorf("σ %v: peak at %v, want %v", sigma, instant(a3), k.PeakTime())
		}
		v2, v3, v4 := k.Speed(instant(a2)), k.Speed(instant(a3)), k.Speed(instant(a4))
		for name, got := range map[string]float64{
			"first inflexion and peak":  sigmaFromPeak(v2 / v3),
			"second inflexion and peak": sigmaFromPeak(v4 / v3),
			"both inflexions":           sigmaFromInflexions(v4 / v2),
		} {
			if math.Abs(got-sigma) > 1e-6 {
				t.Errorf("σ from %s is %v, want %v", name, got, sigma)
			}
		}
	}
}

// The first guesses from the exact characteristic points are the lognormal.
func TestGuessesOfAnExactLump(t *testing.T) {
	k := Planar(0.4, 0.3, -1.5, 0.3, 0, 0)
	a2, a3, a4 := characteristic(k.Sigma)
	var l lump
	l.t2, l.t3, l.t4 = k.T0+math.Exp(k.Mu-a2), k.T0+math.Exp(k.Mu-a3), k.T0+math.Exp(k.Mu-a4)
	l.v2, l.v3, l.v4 = k.Speed(l.t2), k.Speed(l.t3), k.Speed(l.t4)
	guesses := l.guesses()
	if len(guesses) != 4 {
		t.Fatalf("%d guesses, want 4", len(guesses))
	}
	for _, g := range guesses[1:] {
		for name, pair := range map[string][2]float64{"D": {g.D, k.D}, "t0": {g.T0, k.T0}, "mu": {g.Mu, k.Mu}, "sigma": {g.Sigma, k.Sigma}} {
			if math.Abs(pair[0]-pair[1]) > 1e-6 {
				t.Errorf("%s is %v, want %v", name, pair[0], pair[1])
			}
		}
	}
}
