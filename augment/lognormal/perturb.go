package lognormal

import (
	"math"
	"math/rand/v2"
)

// Perturbation says how far the parameters of each stroke are drawn from where
// the extraction found them: each is changed by a draw uniform within the
// stated distance, on either side.
type Perturbation struct {
	D     float64 // of the length, as a share of it, 0 ≤ D < 1
	T0    float64 // of the time of the command, seconds, ≥ 0
	Mu    float64 // of the log-time delay: 0.1 is a tempo a tenth up or down, ≥ 0
	Sigma float64 // of the log-response time, as a share of it, 0 ≤ Sigma < 1
	Angle float64 // of the directions at start and end, radians, ≥ 0
}

// Published returns ranges of the size used for duplicated signatures
// (Galbally, Plamondon, Fierrez, Ortega-Garcia, "Synthetic on-line signature
// generation. Part I", Pattern Recognition 45 (2012) 2610) and synthetic stroke
// gestures (Leiva, Martín-Albo, Plamondon, "Gestures à Go Go", ACM Trans.
// Intelligent Systems and Technology 7 (2016) 15): a tenth to a seventh of each
// parameter. Written down from memory and not checked against the papers.
func Published() Perturbation {
	return Perturbation{D: 0.15, T0: 0.01, Mu: 0.1, Sigma: 0.1, Angle: 0.1}
}

// Draw returns the model with every stroke's parameters drawn anew. Start and
// width are kept; SNR stays that of the extraction.
func (p Perturbation) Draw(m *Model, rng *rand.Rand) *Model {
	out := *m
	out.Strokes = make([]Stroke, len(m.Strokes))
	for j, k := range m.Strokes {
		out.Strokes[j] = p.stroke(k, m.Width, rng)
	}
	return &out
}

// Synthesise draws one path: the model with its parameters drawn anew, at the
// given instants in seconds. dst as in [Model.Path].
func (p Perturbation) Synthesise(dst []float64, m *Model, time []float64, rng *rand.Rand) []float64 {
	return p.Draw(m, rng).Path(dst, time)
}

func (p Perturbation) stroke(k Stroke, width int, rng *rand.Rand) Stroke {
	within := func(size float64) float64 { return size * (2*rng.Float64() - 1) }
	k.D *= 1 + within(p.D)
	k.T0 += within(p.T0)
	k.Mu += within(p.Mu)
	k.Sigma *= 1 + within(p.Sigma)
	start, end := within(p.Angle), within(p.Angle)
	tilt := within(p.Angle)
	if width == 1 || p.Angle == 0 {
		return k
	}
	// Start and end turned in the plane of the arc: half-way by their mean, the
	// turn by their difference.
	sin, cos := math.Sincos((start + end) / 2)
	k.Mid, k.Normal = combine(cos, k.Mid, sin, k.Normal), combine(cos, k.Normal, -sin, k.Mid)
	k.Turn += end - start
	if width == 3 {
		k.Mid, k.Normal = tipped(k.Mid, k.Normal, tilt, rng.Float64()*2*math.Pi)
	}
	return k
}

// tipped turns the plane of an arc by an angle about an axis in it, which lies
// the given angle from the direction half-way.
func tipped(mid, normal Vec, angle, axis float64) (Vec, Vec) {
	sin, cos := math.Sincos(axis)
	about := combine(cos, mid, sin, normal)
	side := combine(-sin, mid, cos, normal)
	sinTip, cosTip := math.Sincos(angle)
	side = combine(cosTip, side, sinTip, cross(mid, normal))
	return combine(cos, about, -sin, side), combine(sin, about, cos, side)
}
