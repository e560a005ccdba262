package realism

import (
	"math"

	"strandwise/channels"
)

// PowerLaw compares exponents of the two-thirds power law. A negative exponent
// nearer to 0 means that the hand slows down less where its path bends.
type PowerLaw struct {
	Recorded  float64 `json:"recorded"`  // mean exponent of the recorded paths
	Synthetic float64 `json:"synthetic"` // mean exponent of the synthetic ones
	Change
	Paths int `json:"paths"` // recorded paths that show an exponent
}

const (
	leastPoints = 8    // that bend, for an exponent
	slowest     = 0.05 // of the largest speed; slower points are rests and tell nothing
	straightest = 0.1  // curvature times the size of the path; straighter points have no logarithm to speak of
)

// Exponent returns the slope of the logarithm of speed on that of curvature
// along a planar path of evenly spaced frames, by least squares: −1/3 for a
// hand that keeps the two-thirds power law, and for harmonic motion on an
// ellipse exactly (F. Lacquaniti, C. Terzuolo, P. Viviani, "The law relating
// the kinematic and figural aspects of drawing movements", Acta Psychologica 54
// (1983) 115–130). It says false when fewer than 8 frames move and bend.
//
// Derivatives are those of parabolas through five frames (A. Savitzky, M. J. E.
// Golay, "Smoothing and differentiation of data by simplified least squares
// procedures", Analytical Chemistry 36 (1964) 1627–1639). Left out are frames
// of less than 5 % of the largest speed, and those that bend less than a
// circle of ten times the path's size would (common practice).
func Exponent(x, y []float64) (float64, bool) {
	speeds, curvatures := kinematics(x, y)
	fastest := 0.0
	for _, v := range speeds {
		fastest = max(fastest, v)
	}
	size := math.Hypot(reach(x), reach(y))
	var logs [2][]float64
	for i, v := range speeds {
		if k := curvatures[i]; v > slowest*fastest && k*size > straightest && !math.IsInf(k, 0) {
			logs[0], logs[1] = append(logs[0], math.Log(k)), append(logs[1], math.Log(v))
		}
	}
	if len(logs[0]) < leastPoints {
		return 0, false
	}
	return slope(logs[0], logs[1])
}

// kinematics returns speed, in path units per frame, and curvature at every
// frame that has two on either side.
func kinematics(x, y []float64) (speeds, curvatures []float64) {
	first := func(p []float64, i int) float64 { return (2*(p[i+2]-p[i-2]) + p[i+1] - p[i-1]) / 10 }
	second := func(p []float64, i int) float64 { return (2*(p[i+2]+p[i-2]) - p[i+1] - p[i-1] - 2*p[i]) / 7 }
	for i := 2; i+2 < len(x); i++ {
		dx, dy := first(x, i), first(y, i)
		v := math.Hypot(dx, dy)
		speeds = append(speeds, v)
		curvatures = append(curvatures, math.Abs(dx*second(y, i)-dy*second(x, i))/(v*v*v))
	}
	return speeds, curvatures
}

// reach returns the difference of the largest and the smallest value.
func reach(x []float64) float64 {
	low, high := math.Inf(1), math.Inf(-1)
	for _, v := range x {
		low, high = min(low, v), max(high, v)
	}
	return high - low
}

// slope returns the least-squares slope of b on a; false when a does not vary.
func slope(a, b []float64) (float64, bool) {
	ma, mb := mean(a), mean(b)
	up, down := 0.0, 0.0
	for i := range a {
		up += (a[i] - ma) * (b[i] - mb)
		down += (a[i] - ma) * (a[i] - ma)
	}
	if down <= 1e-12*float64(len(a)) {
		return 0, false
	}
	return up / down, true
}

// exponents returns the exponent of every planar path of a take: the groups of
// two channels that are positions.
func exponents(t *channels.Take) []float64 {
	var out []float64
	for _, g := range t.Layout.Groups {
		if len(g.Channels) != 2 || t.Layout.Channels[g.Channels[0]].Quantity != channels.Position {
			continue
		}
		if e, ok := Exponent(series(t, g.Channels[0]), series(t, g.Channels[1])); ok {
			out = append(out, e)
		}
	}
	return out
}

// series returns one channel of a take.
func series(t *channels.Take, c int) []float64 {
	out := make([]float64, t.Frames())
	for i := range out {
		out[i] = t.Data[i*t.Width()+c]
	}
	return out
}
