package method

import (
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"
	"strandwise/channels/body"
)

// Rotation turns the axes of a take by one rotation, as if the sensor were
// worn turned (Um et al. 2017): about an axis of uniform direction, by an angle
// uniform in ±Limit. Channels are taken as triads of axes x, y, z that all
// turn alike when their number is a multiple of three, as pairs x, y in one
// plane when it is a multiple of two and not of three. Other numbers of
// channels have no axes to turn and stay as they are.
type Rotation struct {
	Limit     float64 // largest angle, radians, ≥ 0
	AboutMean bool    // turn about the take's mean, as positions need, and not about zero, as published
}

// PublishedRotation returns the published setting: any angle, about zero.
func PublishedRotation() Rotation { return Rotation{Limit: math.Pi} }

// Apply makes one take; see the package's contract.
func (r Rotation) Apply(dst, src []float64, width int, time []float64, rng *rand.Rand) []float64 {
	dst, n := prepare(dst, src, width, time)
	turn := drawTurn(width, r.Limit*(2*rng.Float64()-1), rng)
	if turn == nil || r.Limit == 0 {
		return dst
	}
	m := centre(src, width, r.AboutMean)
	for i := range n {
		frame := dst[i*width : (i+1)*width]
		for c := range frame {
			frame[c] -= m[c]
		}
		turn(frame)
		for c := range frame {
			frame[c] += m[c]
		}
	}
	return dst
}

// drawTurn returns a function that turns a frame in place by an angle in
// radians about an axis of uniform direction, or nil when frames of this width
// have no axes to turn.
func drawTurn(width int, angle float64, rng *rand.Rand) func(frame []float64) {
	switch {
	case width%3 == 0:
		axis := r3.Vec{X: rng.NormFloat64(), Y: rng.NormFloat64(), Z: rng.NormFloat64()}
		if r3.Norm(axis) == 0 {
			axis.Z = 1
		}
		q := body.Exp(r3.Scale(angle/r3.Norm(axis), axis))
		return func(frame []float64) { turnTriads(frame, q) }
	case width%2 == 0:
		sin, cos := math.Sincos(angle)
		return func(frame []float64) { turnPairs(frame, sin, cos) }
	}
	return nil
}

func turnTriads(frame []float64, q quat.Number) {
	for c := 0; c < len(frame); c += 3 {
		v := body.Rotate(q, r3.Vec{X: frame[c], Y: frame[c+1], Z: frame[c+2]})
		frame[c], frame[c+1], frame[c+2] = v.X, v.Y, v.Z
	}
}

func turnPairs(frame []float64, sin, cos float64) {
	for c := 0; c < len(frame); c += 2 {
		x, y := frame[c], frame[c+1]
		frame[c], frame[c+1] = cos*x-sin*y, sin*x+cos*y
	}
}
