package puppets

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
)

// performances returns one take of every cue by every person.
func performances(seed uint64) []performance {
	var out []performance
	for _, p := range programme(seed) {
		if p.take == 5 {
			rng := generator(seed, p.id())
			out = append(out, p.person.perform(rng, p.cue, p.person.wear(rng).seat, p.vigour))
		}
	}
	return out
}

func TestHangingArmReachesDown(t *testing.T) {
	a := arm{side: 1, shoulder: r3.Vec{Y: 0.2, Z: 0.5}, upper: 0.3, fore: 0.25, bandToForearm: r3.Rotation{Real: 1}}
	cases := []struct {
		name string
		q    posture
		want r3.Vec
	}{
		{"hanging", posture{}, r3.Vec{Y: 0.2, Z: -0.05}},
		{"raised to the front", posture{flexion: math.Pi / 2}, r3.Vec{X: 0.55, Y: 0.2, Z: 0.5}},
		{"raised to the side", posture{abduction: math.Pi / 2}, r3.Vec{Y: 0.75, Z: 0.5}},
		{"elbow bent", posture{elbow: math.Pi / 2}, r3.Vec{X: 0.25, Y: 0.2, Z: 0.2}},
		{"across the body", posture{elbow: math.Pi / 2, rotation: math.Pi / 2}, r3.Vec{Y: -0.05, Z: 0.2}},
		{"turned palm", posture{pronation: 1}, r3.Vec{Y: 0.2, Z: -0.05}},
	}
	for _, c := range cases {
		got := a.band(still(), motion{home: c.q}.at(0)).position
		if r3.Norm(r3.Sub(got, c.want)) > 1e-12 {
			t.Errorf("%s: wrist at %.3f, want %.3f", c.name, got, c.want)
		}
		right := a
		right.side, right.shoulder.Y = -1, -0.2
		mirrored := right.band(still(), motion{home: c.q}.at(0)).position
		if mirrored.Y = -mirrored.Y; r3.Norm(r3.Sub(got, mirrored)) > 1e-12 {
			t.Errorf("%s: the right wrist is at %.3f, no mirror image of %.3f", c.name, mirrored, got)
		}
	}
}

// The recursion's acceleration against second differences of its position.
// Strokes have kinks in jerk, so the difference is only as good as the step.
func TestAccelerationIsSecondDerivativeOfPosition(t *testing.T) {
	const h, tolerance = 1e-5, 0.02 // seconds, m/s²
	for _, p := range performances(3) {
		for hand := range hands {
			for x := 0.013; x < p.duration; x += 0.017 {
				a, b, c := p.band(hand, x-h).position, p.band(hand, x), p.band(hand, x+h).position
				want := r3.Scale(1/(h*h), r3.Add(a, r3.Sub(c, r3.Scale(2, b.position))))
				if d := r3.Norm(r3.Sub(b.accel, want)); d > tolerance {
					t.Fatalf("at %g s the acceleration is off by %g m/s²", x, d)
				}
			}
		}
	}
}

// Summing the gyroscope's turns from frame to frame must lead from the first
// orientation to the last.
func TestGyroscopeIntegratesToOrientation(t *testing.T) {
	const step, tolerance = 1e-3, 1e-4 // seconds, radians
	for _, p := range performances(4) {
		for hand := range hands {
			at := p.band(hand, 0).orientation
			steps := int(p.duration / step)
			for i := range steps {
				w := p.band(hand, (float64(i)+0.5)*step).bodyRate()
				at = then(at, r3.NewRotation(r3.Norm(w)*step, w))
			}
			if e := angleBetween(at, p.band(hand, float64(steps)*step).orientation); e > tolerance {
				t.Errorf("the gyroscope's sum is off by %g rad after %g s", e, p.duration)
			}
		}
	}
}

func angleBetween(a, b r3.Rotation) float64 {
	d := quat.Mul(quat.Conj(quat.Number(a)), quat.Number(b))
	return 2 * math.Atan2(math.Sqrt(d.Imag*d.Imag+d.Jmag*d.Jmag+d.Kmag*d.Kmag), math.Abs(d.Real))
}

func TestRestingBandSensesGravity(t *testing.T) {
	for _, p := range performances(5) {
		p.pitch, p.roll = sway{size: 0.1, phase: 1}, sway{}
		for hand := range hands {
			l := p.band(hand, 0)
			if got := r3.Norm(l.specificForce()); math.Abs(got-channels.StandardGravity) > 1e-9 {
				t.Errorf("specific force at rest is %.12f m/s², want 9.80665", got)
			}
			if got := r3.Norm(l.bodyRate()); got != 0 {
				t.Errorf("angular rate at rest is %g rad/s, want 0", got)
			}
		}
	}
}
