package lognormal_test

import (
	"math"
	"math/rand/v2"

	"strandwise/augment/lognormal"
)

// drawModel draws a movement of 1 to 8 overlapping strokes with the sizes of
// hand movements, in metres and seconds, and a clock at 100 Hz that spans it.
func drawModel(width int, rng *rand.Rand) (*lognormal.Model, []float64) {
	m := &lognormal.Model{Width: width}
	for c := range width {
		m.Start[c] = rng.Float64()
	}
	within := func(low, high float64) float64 { return low + (high-low)*rng.Float64() }
	t0, end := 0.0, 0.0
	for range 1 + rng.IntN(8) {
		k := lognormal.Planar(within(0.05, 0.5), t0, within(-1.9, -1.2), within(0.1, 0.4), 0, within(0, 2))
		k.Mid, k.Normal = axes(width, rng)
		if width == 1 {
			k.Turn = 0
		}
		m.Strokes = append(m.Strokes, k)
		end = max(end, t0+math.Exp(k.Mu+2.5*k.Sigma))
		t0 += within(0.08, 0.3)
	}
	var clock []float64
	for t := 0.0; t < end; t += 0.01 {
		clock = append(clock, t)
	}
	return m, clock
}

// axes draws two unit vectors at right angles, in the plane for a width of 2.
func axes(width int, rng *rand.Rand) (a, b lognormal.Vec) {
	switch width {
	case 1:
		return lognormal.Vec{float64(1 - 2*rng.IntN(2))}, lognormal.Vec{0, 1}
	case 2:
		sin, cos := math.Sincos(rng.Float64() * 2 * math.Pi)
		side := float64(1 - 2*rng.IntN(2))
		return lognormal.Vec{cos, sin}, lognormal.Vec{-side * sin, side * cos}
	}
	for c := range a {
		a[c], b[c] = rng.NormFloat64(), rng.NormFloat64()
	}
	a = scaled(a, 1/length(a))
	along := inner(a, b)
	for c := range b {
		b[c] -= along * a[c]
	}
	return a, scaled(b, 1/length(b))
}

func inner(a, b lognormal.Vec) float64 { return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] }

func length(v lognormal.Vec) float64 { return math.Sqrt(inner(v, v)) }

func scaled(v lognormal.Vec, f float64) lognormal.Vec {
	return lognormal.Vec{f * v[0], f * v[1], f * v[2]}
}

// angle returns the angle between two directions in radians.
func angle(a, b lognormal.Vec) float64 {
	return math.Acos(min(max(inner(a, b)/(length(a)*length(b)), -1), 1))
}
