package method

import "math/rand/v2"

// TimeWarp plays a take at a tempo that varies smoothly and keeps its
// duration (Um et al. 2017): a cubic spline through normal draws about 1 is
// the tempo, its running sum, stretched to the take's duration, is the map from
// the new clock to the source's.
//
// Departures from the description: one map for all channels, since a map for
// each would tear a movement's axes apart; a tempo kept above
// [SlowestTempo], so that time never runs backwards; reading between
// frames by a cubic and not linearly, since linear reading smears.
type TimeWarp struct {
	Deviation float64 // standard deviation of the tempo at a knot, as a fraction of the source's, ≥ 0
	Knots     int     // knots between the ends, ≥ 1
}

// SlowestTempo is the least tempo of a [TimeWarp], as a fraction of the
// source's.
const SlowestTempo = 0.05

// PublishedTimeWarp returns the published setting: deviation 0.2 and four knots
// between the ends.
func PublishedTimeWarp() TimeWarp { return TimeWarp{Deviation: 0.2, Knots: 4} }

// Apply makes one take; see the package's contract.
func (w TimeWarp) Apply(dst, src []float64, width int, time []float64, rng *rand.Rand) []float64 {
	dst, n := prepare(dst, src, width, time)
	instants := w.Map(nil, time, rng)
	if n > 1 && w.Deviation != 0 {
		readAt(dst, src, width, time, instants)
	}
	return dst
}

// Map draws one time map: for each frame of the new take, the instant of the
// source it shows, in seconds. The first and last instants are the source's
// own and the map rises strictly. dst has one value per instant; nil
// allocates.
func (w TimeWarp) Map(dst, time []float64, rng *rand.Rand) []float64 {
	checkKnots(w.Knots)
	n := len(time)
	if dst == nil {
		dst = make([]float64, n)
	}
	tempo := make([]float64, n)
	curve(tempo, w.Deviation, w.Knots, rng)
	passed := 0.0
	for i := range n {
		if i > 0 { // the trapezium rule, on a clock of any steps
			mean := (max(tempo[i-1], SlowestTempo) + max(tempo[i], SlowestTempo)) / 2
			passed += mean * (time[i] - time[i-1])
		}
		dst[i] = passed
	}
	for i := range n {
		if passed > 0 {
			dst[i] = time[0] + dst[i]*(time[n-1]-time[0])/passed
		} else {
			dst[i] = time[i]
		}
	}
	if n > 0 {
		dst[n-1] = time[n-1]
	}
	return dst
}
