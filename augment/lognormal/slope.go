package lognormal

import "math"

// Parameters of a stroke in a fit, in the order of their columns. The last are
// absent where the path has fewer coordinates.
const (
	colT0    = iota
	colMu    // μ
	colSigma // ln σ
	colD     // ln D
	colSwing // turns the arc in its own plane
	colTurn  // the turning angle
	colTilt  // turns the direction half-way out of the plane
	colLift  // turns the normal out of the plane, times the turning angle
	maxColumns
)

// columns returns how many parameters a stroke has on a path of given width.
func columns(width int) int { return 2 + 2*width }

// slope is the derivative of a displacement by each parameter.
type slope [maxColumns]Vec

// slopeAt returns the displacement of a stroke at time t and its derivatives.
func slopeAt(k Stroke, t float64) (at Vec, d slope) {
	tau := t - k.T0
	if tau <= 0 {
		return at, d
	}
	z := (math.Log(tau) - k.Mu) / k.Sigma
	density := math.Exp(-z*z/2) / math.Sqrt(2*math.Pi)
	p := math.Erfc(-z/math.Sqrt2) / 2
	a := arcAt(p, k.Turn)
	at = combine(k.D*a.along, k.Mid, k.D*a.across, k.Normal)

	sin, cos := math.Sincos(k.Turn * (p - 0.5))
	way := combine(k.D*cos, k.Mid, k.D*sin, k.Normal) // derivative by progress
	scaled := func(f float64) Vec { return combine(f, way, 0, Vec{}) }
	d[colT0] = scaled(-density / (k.Sigma * tau))
	d[colMu] = scaled(-density / k.Sigma)
	d[colSigma] = scaled(-z * density)
	d[colD] = at
	d[colSwing] = combine(k.D*a.along, k.Normal, -k.D*a.across, k.Mid)
	d[colTurn] = combine(k.D*a.alongTurn, k.Mid, k.D*a.acrossTurn, k.Normal)
	out := cross(k.Mid, k.Normal)
	d[colTilt] = combine(k.D*a.along, out, 0, Vec{})
	d[colLift] = combine(k.D*a.lift, out, 0, Vec{})
	return at, d
}

// bounds hold the parameters where a stroke can be told from its neighbours on
// the clock of the path.
type bounds struct {
	earliest, latest float64 // of T0, seconds from the first frame
	minMu, maxMu     float64
	longest          float64 // of D, in the path's unit
}

// Bounds of σ: below, a stroke is as good as symmetric; above, it starts with a
// jump.
const (
	minSigma = 0.02
	maxSigma = 1.2
)

// moved returns the stroke with its parameters changed by delta, held to the
// bounds. A step changes no logarithm by more than one, no angle by more than a
// radian.
func (b bounds) moved(k Stroke, delta []float64) Stroke {
	var d [maxColumns]float64
	copy(d[:], delta)
	for c := colMu; c < maxColumns; c++ {
		d[c] = clip(d[c], -1, 1)
	}
	out := cross(k.Mid, k.Normal)
	mid := unit(Vec{
		k.Mid[0] + d[colSwing]*k.Normal[0] + d[colTilt]*out[0],
		k.Mid[1] + d[colSwing]*k.Normal[1] + d[colTilt]*out[1],
		k.Mid[2] + d[colSwing]*k.Normal[2] + d[colTilt]*out[2]}, k.Mid)
	bend := combine(k.Turn+d[colTurn], k.Normal, d[colLift], out)
	flat := combine(1, bend, -dot(bend, mid), mid)
	k.Turn = min(math.Sqrt(dot(flat, flat)), 2*math.Pi)
	k.Normal = unit(flat, unit(combine(1, k.Normal, -dot(k.Normal, mid), mid), k.Normal))
	k.Mid = mid
	k.T0 = clip(k.T0+d[colT0], b.earliest, b.latest)
	k.Mu = clip(k.Mu+d[colMu], b.minMu, b.maxMu)
	k.Sigma = clip(k.Sigma*math.Exp(d[colSigma]), minSigma, maxSigma)
	k.D = min(k.D*math.Exp(d[colD]), b.longest)
	return k
}

func clip(x, low, high float64) float64 { return min(max(x, low), high) }
