package lognormal

import "math"

// The characteristic points of a lognormal speed: its first inflexion, its peak
// and its second inflexion lie at t₀ + exp(μ − aₖ) with
//
//	a₂ = 3σ²/2 + σ√(σ²/4 + 1)    a₃ = σ²    a₄ = 3σ²/2 − σ√(σ²/4 + 1)
//
// (O'Reilly & Plamondon 2009; checked by differentiating the speed twice).
func characteristic(sigma float64) (a2, a3, a4 float64) {
	s := sigma * sigma
	root := sigma * math.Sqrt(s/4+1)
	return 1.5*s + root, s, 1.5*s - root
}

// sigmaFromPeak returns σ from the ratio of the speed at one of the inflexions
// to that at the peak. With L = ln(ratio), σ² = −2L − 2 − 1/(2L): the ratio is
// below e^(−1/2) at the first inflexion, above it at the second; σ is NaN
// where the ratio is not in (0, 1).
func sigmaFromPeak(ratio float64) float64 {
	l := math.Log(ratio)
	return math.Sqrt(max(-2*l-2-1/(2*l), 0))
}

// sigmaFromInflexions returns σ from the ratio of the speed at the second
// inflexion to that at the first: σ² = −2 + 2√(1 + L²).
func sigmaFromInflexions(ratio float64) float64 {
	l := math.Log(ratio)
	return math.Sqrt(2*math.Sqrt(1+l*l) - 2)
}

// lump is one peak of a speed profile: instants in seconds and speeds.
type lump struct {
	t2, t3, t4 float64 // first inflexion, peak, second inflexion
	v2, v3, v4 float64
	low, high  int // steps from the valley before to the valley after
}

// guesses returns lognormals that have the peak of the lump and two of its
// three characteristic points, for the σ each pair of speeds asks for and for
// one that is common in recorded movements. Each has the lump's peak time and
// peak speed.
func (l lump) guesses() []Stroke {
	sigmas := []float64{
		usualSigma,
		sigmaFromPeak(l.v2 / l.v3),
		sigmaFromPeak(l.v4 / l.v3),
		sigmaFromInflexions(l.v4 / l.v2),
	}
	var out []Stroke
	for _, sigma := range sigmas {
		if !(sigma > 0) || math.IsInf(sigma, 0) {
			continue
		}
		sigma = clip(sigma, 0.05, 0.8)
		a2, a3, a4 := characteristic(sigma)
		// exp(μ) from the distance of the inflexions, t₀ from the peak.
		scale := (l.t4 - l.t2) / (math.Exp(-a4) - math.Exp(-a2))
		k := Stroke{T0: l.t3 - scale*math.Exp(-a3), Mu: math.Log(scale), Sigma: sigma}
		k.D = 1
		k.D = l.v3 / k.Speed(l.t3)
		out = append(out, k)
	}
	return out
}

// usualSigma is a log-response time in the middle of those of hand movements.
const usualSigma = 0.25

// biggestLump returns the peak with the most energy between its valleys in a
// smoothed speed profile, or false when nothing moves.
func (s signal) biggestLump() (lump, bool) {
	speed := smoothed(s)
	n := len(speed)
	best, most := -1, 0.0
	bounds := [2]int{}
	for i := 0; i < n; {
		low := i
		for i+1 < n && speed[i+1] >= speed[i] {
			i++
		}
		peak := i
		for i+1 < n && speed[i+1] < speed[i] {
			i++
		}
		energy := 0.0
		for j := low; j <= i; j++ {
			energy += dot(s.velocity[j], s.velocity[j])
		}
		if energy > most && speed[peak] > 0 {
			best, most, bounds = peak, energy, [2]int{low, i + 1}
		}
		i++
	}
	if best < 0 {
		return lump{}, false
	}
	return s.measure(speed, best, bounds[0], bounds[1]), true
}

// measure reads the characteristic points of a peak off its speed profile: the
// inflexions are the steepest places on either side.
func (s signal) measure(speed []float64, peak, low, high int) lump {
	mid := func(i int) float64 { return (s.time[i] + s.time[i+1]) / 2 }
	l := lump{t3: mid(peak), v3: speed[peak], low: low, high: high}
	steepest := 0.0
	l.t2, l.v2 = (s.time[low]+l.t3)/2, l.v3*0.6
	for i := low; i < peak; i++ {
		if rise := (speed[i+1] - speed[i]) / (mid(i+1) - mid(i)); rise > steepest {
			steepest, l.t2, l.v2 = rise, (mid(i)+mid(i+1))/2, (speed[i]+speed[i+1])/2
		}
	}
	steepest = 0
	l.t4, l.v4 = (s.time[high]+l.t3)/2, l.v3*0.6
	for i := peak; i+1 < high; i++ {
		if fall := (speed[i] - speed[i+1]) / (mid(i+1) - mid(i)); fall > steepest {
			steepest, l.t4, l.v4 = fall, (mid(i)+mid(i+1))/2, (speed[i]+speed[i+1])/2
		}
	}
	return l
}

// smoothed returns the speeds over the steps, each the mean of itself, twice
// counted, and its neighbours.
func smoothed(s signal) []float64 {
	n := len(s.velocity)
	raw, out := make([]float64, n), make([]float64, n)
	for i, v := range s.velocity {
		raw[i] = math.Sqrt(dot(v, v))
	}
	for i := range out {
		out[i] = (raw[max(i-1, 0)] + 2*raw[i] + raw[min(i+1, n-1)]) / 4
	}
	return out
}
