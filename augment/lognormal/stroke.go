package lognormal

import "math"

// Vec is a point or direction; a planar path has 0 as its third coordinate.
type Vec [3]float64

// Stroke is one stroke of the model: a circular arc travelled with a lognormal
// speed.
type Stroke struct {
	D     float64 // length of the arc, in the unit of the path, > 0
	T0    float64 // time of the command, in seconds on the clock of the take
	Mu    float64 // log-time delay: mean of ln((t−T0)/1 s)
	Sigma float64 // log-response time: standard deviation of ln((t−T0)/1 s), > 0

	Mid    Vec     // unit direction of travel half-way along the arc
	Normal Vec     // unit normal to Mid, to the side the arc turns to
	Turn   float64 // angle the direction turns by from start to end, radians
}

// Planar returns the stroke of the published model in the x, y plane: its
// direction turns from the angle start to the angle end, radians from the x axis
// towards the y axis.
func Planar(d, t0, mu, sigma, start, end float64) Stroke {
	sin, cos := math.Sincos((start + end) / 2)
	return Stroke{D: d, T0: t0, Mu: mu, Sigma: sigma, Mid: Vec{cos, sin}, Normal: Vec{-sin, cos}, Turn: end - start}
}

// Angles returns the directions θs and θe of a planar stroke in radians, θs
// within ±2π.
func (s Stroke) Angles() (start, end float64) {
	turn := s.Turn
	if s.Mid[0]*s.Normal[1]-s.Mid[1]*s.Normal[0] < 0 {
		turn = -turn
	}
	mid := math.Atan2(s.Mid[1], s.Mid[0])
	return mid - turn/2, mid + turn/2
}

// Speed returns the speed at time t, in the path's unit per second.
func (s Stroke) Speed(t float64) float64 {
	tau := t - s.T0
	if tau <= 0 {
		return 0
	}
	z := (math.Log(tau) - s.Mu) / s.Sigma
	return s.D * math.Exp(-z*z/2) / (s.Sigma * math.Sqrt(2*math.Pi) * tau)
}

// Progress returns the share of the arc covered at time t, from 0 to 1.
func (s Stroke) Progress(t float64) float64 {
	tau := t - s.T0
	if tau <= 0 {
		return 0
	}
	return math.Erfc(-(math.Log(tau)-s.Mu)/(s.Sigma*math.Sqrt2)) / 2
}

// PeakTime returns the time of the greatest speed, T0 + exp(μ − σ²).
func (s Stroke) PeakTime() float64 { return s.T0 + math.Exp(s.Mu-s.Sigma*s.Sigma) }

// Direction returns the unit direction of travel at time t.
func (s Stroke) Direction(t float64) Vec {
	sin, cos := math.Sincos(s.Turn * (s.Progress(t) - 0.5))
	return combine(cos, s.Mid, sin, s.Normal)
}

// Displacement returns how far the stroke has moved the path at time t, in its
// unit. With p the progress it is D·∫ direction dp, which has a closed form.
func (s Stroke) Displacement(t float64) Vec {
	arc := arcAt(s.Progress(t), s.Turn)
	return combine(s.D*arc.along, s.Mid, s.D*arc.across, s.Normal)
}

// arc is a point of an arc of length 1, by its coordinates along the direction
// half-way and across it, with their derivatives by the turning angle.
type arc struct {
	along, across         float64
	alongTurn, acrossTurn float64
	lift                  float64 // across/turn, which has a limit where turn is 0
}

// slightTurn is the angle below which an arc is taken from its power series,
// whose first neglected term is turn⁴ times less than a thousandth.
const slightTurn = 1e-3

// arcAt returns the point at progress p of an arc that turns by turn radians.
func arcAt(p, turn float64) arc {
	q := p - 0.5
	if math.Abs(turn) < slightTurn {
		cube, square := (q*q*q+0.125)/3, (q*q-0.25)/2
		return arc{p - turn*turn*cube/2, turn * square, -turn * cube, square, square}
	}
	sin, cos := math.Sincos(turn * q)
	sinEnd, cosEnd := math.Sincos(turn / 2)
	a := arc{along: (sin + sinEnd) / turn, across: (cosEnd - cos) / turn}
	a.alongTurn = (q*cos+cosEnd/2)/turn - a.along/turn
	a.acrossTurn = (q*sin-sinEnd/2)/turn - a.across/turn
	a.lift = a.across / turn
	return a
}

// combine returns x·a + y·b.
func combine(x float64, a Vec, y float64, b Vec) Vec {
	return Vec{x*a[0] + y*b[0], x*a[1] + y*b[1], x*a[2] + y*b[2]}
}

func dot(a, b Vec) float64 { return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] }

func cross(a, b Vec) Vec {
	return Vec{a[1]*b[2] - a[2]*b[1], a[2]*b[0] - a[0]*b[2], a[0]*b[1] - a[1]*b[0]}
}

// unit returns v at length 1, or otherwise where v has none.
func unit(v, otherwise Vec) Vec {
	n := math.Sqrt(dot(v, v))
	if !(n > 0) || math.IsInf(n, 0) {
		return otherwise
	}
	return Vec{v[0] / n, v[1] / n, v[2] / n}
}
