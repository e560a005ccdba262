package body_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels/body"
	"strandwise/testdata/opendata"
)

// standardGravity is exact: 3rd CGPM 1901; ISO 80000-3.
const standardGravity = 9.80665

// sensor is what a generated take holds of a sensor: what it shows, and the
// truth behind.
type sensor struct {
	time, accel, gyro []float64
	up, linear        []float64 // truth: direction of gravity, linear acceleration, both seen from the sensor
}

// worn generates a take of a sensor on a wrist: half a second of rest at both
// ends and strokes in between, with a smooth path of orientations (turns of
// some 60° to 120° a stroke) and of places (0.3 m to 0.6 m a stroke).
// Everything but noise is exact by differentiating the closed form. bias is of
// the gyroscope in rad/s; noise is 0.05 m/s² and 0.01 rad/s.
func worn(rng *rand.Rand, rate float64, strokes int, bias float64) sensor {
	const rest, stroke = 0.5, 0.8
	turns, ways := make([]r3.Vec, strokes), make([]r3.Vec, strokes)
	for k := range turns {
		turns[k] = r3.Scale((60+60*rng.Float64())*degree, randomUnit(rng))
		ways[k] = r3.Scale(0.3+0.3*rng.Float64(), randomUnit(rng))
	}
	start := quat.Number(randomRotation(rng))
	pose := func(t float64) (quat.Number, r3.Vec) {
		q, at := start, r3.Vec{}
		for k := range turns {
			s := minimumJerk((t - rest - float64(k)*stroke) / stroke)
			q = body.After(q, r3.Scale(s, turns[k]))
			at = r3.Add(at, r3.Scale(s, ways[k]))
		}
		return q, at
	}
	drift := r3.Scale(bias, randomUnit(rng))
	var out sensor
	const h = 1e-4
	for i := 0; float64(i)/rate <= 2*rest+float64(strokes)*stroke; i++ {
		t := float64(i) / rate
		q, at := pose(t)
		before, placeBefore := pose(t - h)
		after, placeAfter := pose(t + h)
		world := r3.Scale(1/(h*h), r3.Add(placeBefore, r3.Sub(placeAfter, r3.Scale(2, at))))
		back := quat.Conj(q)
		up, linear := body.Rotate(back, r3.Vec{Z: 1}), body.Rotate(back, world)
		rate := r3.Add(r3.Scale(1/(2*h), body.Between(before, after)), drift)
		out.time = append(out.time, t)
		out.up = append(out.up, up.X, up.Y, up.Z)
		out.linear = append(out.linear, linear.X, linear.Y, linear.Z)
		shown := r3.Add(r3.Scale(standardGravity, up), linear)
		out.accel = append(out.accel, noisy(rng, shown, 0.05)...)
		out.gyro = append(out.gyro, noisy(rng, rate, 0.01)...)
	}
	return out
}

// minimumJerk is the way of a stroke from 0 to 1 (Flash and Hogan, Journal of
// Neuroscience 5 (1985) 1688).
func minimumJerk(s float64) float64 {
	s = min(max(s, 0), 1)
	return s * s * s * (10 - 15*s + 6*s*s)
}

func noisy(rng *rand.Rand, v r3.Vec, by float64) []float64 {
	return []float64{v.X + by*rng.NormFloat64(), v.Y + by*rng.NormFloat64(), v.Z + by*rng.NormFloat64()}
}

func randomUnit(rng *rand.Rand) r3.Vec {
	return r3.Unit(r3.Vec{X: rng.NormFloat64(), Y: rng.NormFloat64(), Z: rng.NormFloat64()})
}

func randomRotation(rng *rand.Rand) quat.Number {
	return body.Unit(quat.Number{Real: rng.NormFloat64(), Imag: rng.NormFloat64(), Jmag: rng.NormFloat64(), Kmag: rng.NormFloat64()})
}

func vecAt(v []float64, i int) r3.Vec { return r3.Vec{X: v[3*i], Y: v[3*i+1], Z: v[3*i+2]} }

// apart returns the angle in degrees between two vectors.
func apart(a, b r3.Vec) float64 {
	return math.Atan2(r3.Norm(r3.Cross(a, b)), r3.Dot(a, b)) / degree
}

// directionErrors returns the angles in degrees between two series of
// directions.
func directionErrors(a, b []float64) []float64 {
	out := make([]float64, len(a)/3)
	for i := range out {
		out[i] = apart(vecAt(a, i), vecAt(b, i))
	}
	return out
}

func rms(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x * x
	}
	return math.Sqrt(sum / float64(len(v)))
}

// TestSeparateGravity holds the estimate against generated truth. The bounds
// leave half as much again as the worst of 100 takes of other seeds needed.
func TestSeparateGravity(t *testing.T) {
	for _, c := range []struct {
		name      string
		rate      float64 // Hz
		strokes   int
		bias      float64 // rad/s
		worst     float64 // degrees, root mean square over a take
		worstEnds float64 // degrees, root mean square over first and last frame
	}{
		{"one stroke", 50, 1, 0.02, 0.6, 0.7},
		{"three strokes", 50, 3, 0.02, 1.4, 0.7},
		{"large bias", 50, 3, 0.05, 3, 1.5},
		{"eight strokes", 50, 8, 0.02, 2.7, 0.7},
		{"100 Hz", 100, 3, 0.02, 1.4, 0.7},
		{"10 Hz", 10, 3, 0.02, 1.6, 0.9},
	} {
		t.Run(c.name, func(t *testing.T) {
			for seed := range uint64(20) {
				s := worn(rand.New(rand.NewPCG(seed, 1)), c.rate, c.strokes, c.bias)
				g := body.SeparateGravity(s.time, s.accel, s.gyro)
				off := directionErrors(g.Direction, s.up)
				if got := rms(off); !(got <= c.worst) {
					t.Errorf("seed %d: direction is off by %.2f°", seed, got)
				}
				if got := rms([]float64{off[0], off[len(off)-1]}); !(got <= c.worstEnds) {
					t.Errorf("seed %d: direction at rest is off by %.2f°", seed, got)
				}
				if math.Abs(g.Magnitude-standardGravity) > 0.12 || g.Spread > 0.15 || !g.Plausible() {
					t.Errorf("seed %d: gravity is %.3f ± %.3f m/s²", seed, g.Magnitude, g.Spread)
				}
				checkSeparation(t, s, g)
			}
		})
	}
}

// checkSeparation checks what holds of every separation to the last digits: the
// parts make the whole, and the rate integrates to the directions.
func checkSeparation(t *testing.T, s sensor, g body.Gravity) {
	t.Helper()
	for i := range s.accel {
		if got := g.Magnitude*g.Direction[i] + g.Linear[i]; !(math.Abs(got-s.accel[i]) <= 1e-12) {
			t.Fatalf("value %d: parts make %v, not %v", i, got, s.accel[i])
		}
	}
	for i := range s.time {
		if n := r3.Norm(vecAt(g.Direction, i)); !(math.Abs(n-1) <= tolerance) {
			t.Fatalf("frame %d: direction is %v long", i, n)
		}
	}
	if g.Rate == nil {
		return
	}
	for i, v := range body.IntegrateDirection(nil, g.Direction[:3], g.Rate, s.time) {
		if !(math.Abs(v-g.Direction[i]) <= tolerance) {
			t.Fatalf("value %d: rate integrates to %v, not %v", i, v, g.Direction[i])
		}
	}
}

// TestSeparateGravityWithoutGyroscope checks the stand-in against the truth, and
// that its corner is better placed than the one usual for walking.
func TestSeparateGravityWithoutGyroscope(t *testing.T) {
	var here, usual []float64
	for seed := range uint64(20) {
		s := worn(rand.New(rand.NewPCG(seed, 2)), 50, 3, 0)
		g := body.SeparateGravity(s.time, s.accel, nil)
		if g.Rate != nil {
			t.Fatal("a rate without a gyroscope")
		}
		checkSeparation(t, s, g)
		off := directionErrors(g.Direction, s.up)
		here, usual = append(here, rms(off)), append(usual, rms(directionErrors(body.LowPass(s.time, s.accel, 3, 0.3), s.up)))
		if got := rms([]float64{off[0], off[len(off)-1]}); got > 6 {
			t.Errorf("seed %d: direction at rest is off by %.1f°", seed, got)
		}
	}
	t.Logf("off by %.1f° at 1 Hz, %.1f° at 0.3 Hz", rms(here), rms(usual))
	if rms(here) > 12 || rms(here) > rms(usual) {
		t.Errorf("off by %.1f° at 1 Hz, %.1f° at 0.3 Hz", rms(here), rms(usual))
	}
}

// TestSeparateGravitySmall covers takes too short or too empty to say much.
func TestSeparateGravitySmall(t *testing.T) {
	if g := body.SeparateGravity(nil, nil, nil); g.Direction != nil || g.Magnitude != 0 {
		t.Errorf("of nothing: %v", g)
	}
	for n := 1; n <= 6; n++ {
		s := sensor{}
		for i := range n {
			s.time = append(s.time, float64(i)/50)
			s.accel = append(s.accel, 0, 0, standardGravity)
			s.gyro = append(s.gyro, 0, 0, 1)
		}
		for _, gyro := range [][]float64{nil, s.gyro} {
			g := body.SeparateGravity(s.time, s.accel, gyro)
			checkSeparation(t, s, g)
			for i := range n {
				checkVec(t, vecAt(g.Direction, i), r3.Vec{Z: 1})
			}
		}
		nothing := body.SeparateGravity(s.time, make([]float64, 3*n), s.gyro)
		if nothing.Magnitude != 0 || nothing.Plausible() || r3.Norm(vecAt(nothing.Direction, n-1)) != 1 {
			t.Errorf("%d frames of zeros: %v", n, nothing)
		}
	}
}

// TestSeparateGravityOpenData separates gravity in recorded gestures of a
// wrist. Where up truly is, nobody knows; but the gyroscope as recorded,
// integrated over the whole gesture, must end near the direction found at the
// end, and far from it when its sense is turned round. Against these directions
// it measures what stands in for a gyroscope.
func TestSeparateGravityOpenData(t *testing.T) {
	var ends, turned, level, here, usual []float64
	for _, take := range opendata.Set(t, "UTD_MHAD_inertial") {
		s := sensor{}
		for i := range take.Time {
			s.time = append(s.time, float64(i)/50)
			for c, v := range take.Frame(i) {
				if c < 3 {
					s.accel = append(s.accel, v*standardGravity)
				} else {
					s.gyro = append(s.gyro, v*degree)
				}
			}
		}
		g := body.SeparateGravity(s.time, s.accel, s.gyro)
		checkSeparation(t, s, g)
		last := len(s.time) - 1
		end := func(rate []float64) float64 {
			return apart(vecAt(body.IntegrateDirection(nil, g.Direction[:3], rate, s.time), last), vecAt(g.Direction, last))
		}
		ends = append(ends, end(s.gyro))
		for i := range s.gyro {
			s.gyro[i] = -s.gyro[i]
		}
		turned = append(turned, end(s.gyro))
		level = append(level, g.Magnitude)
		here = append(here, rms(directionErrors(body.SeparateGravity(s.time, s.accel, nil).Direction, g.Direction)))
		usual = append(usual, rms(directionErrors(body.LowPass(s.time, s.accel, 3, 0.3), g.Direction)))
	}
	t.Logf("%d takes, medians: gravity %.2f m/s²; gyroscope ends off by %.1f°, turned round by %.1f°; without it off by %.1f°, at 0.3 Hz by %.1f°",
		len(ends), middle(level), middle(ends), middle(turned), middle(here), middle(usual))
	if m := middle(level); math.Abs(m-standardGravity) > 0.3 {
		t.Errorf("gravity is %.2f m/s²", m)
	}
	if middle(ends) > 4 || middle(turned) < 30 {
		t.Errorf("gyroscope ends off by %.1f°, turned round by %.1f°", middle(ends), middle(turned))
	}
	if middle(here) > middle(usual) {
		t.Errorf("without a gyroscope off by %.1f° at 1 Hz, %.1f° at 0.3 Hz", middle(here), middle(usual))
	}
}

// middle returns the median.
func middle(v []float64) float64 {
	v = slices.Sorted(slices.Values(v))
	return v[len(v)/2]
}

func TestIntegrateDirection(t *testing.T) {
	// Turned by a quarter about its x axis, a sensor whose z axis was up has up
	// along its y axis.
	time, rate := []float64{0, 0.25, 0.75, 1}, make([]float64, 12)
	for i := range time {
		rate[3*i] = math.Pi / 2
	}
	got := body.IntegrateDirection(nil, []float64{0, 0, 2}, rate, time)
	for i, at := range time {
		s, c := math.Sincos(at * math.Pi / 2)
		checkVec(t, vecAt(got, i), r3.Vec{Y: s, Z: c})
	}
	// The truth of a generated take, integrated from its exact rate.
	s := worn(rand.New(rand.NewPCG(3, 3)), 400, 2, 0)
	for i, off := range directionErrors(body.IntegrateDirection(nil, s.up[:3], s.gyro, s.time), s.up) {
		if off > 0.5 {
			t.Fatalf("frame %d is off by %.2f°", i, off)
		}
	}
}

// TestLowPass checks the gain at frequencies well inside a long series, and
// what passes unchanged.
func TestLowPass(t *testing.T) {
	const corner = 0.5
	for _, f := range []float64{0.1, 0.25, 0.5, 1, 2} {
		var time, wave []float64
		for at := 0.0; at < 60; at += 0.015 + 0.01*math.Abs(math.Sin(17*at)) { // an uneven clock
			time, wave = append(time, at), append(wave, math.Sin(2*math.Pi*f*at))
		}
		smooth := body.LowPass(time, wave, 1, corner)
		for i, at := range time {
			if want := wave[i] / (1 + math.Pow(f/corner, 4)); at > 20 && at < 40 && math.Abs(smooth[i]-want) > 2e-3 {
				t.Fatalf("%g Hz at %g s: %g, want %g", f, at, smooth[i], want)
			}
		}
	}
	for _, time := range [][]float64{{}, {1}, {1, 2}, {0, 0.001, 1, 1.5, 100}, {0, 0.01, 0.02, 0.03, 0.04, 0.05}} {
		var line []float64
		for _, at := range time {
			line = append(line, 3-2*at, 7)
		}
		for i, v := range body.LowPass(time, line, 2, 1) {
			if math.Abs(v-line[i]) > 1e-6*(1+math.Abs(line[i])) {
				t.Errorf("%v: value %d of a straight line becomes %g, not %g", time, i, v, line[i])
			}
		}
	}
	// Two frames nearly at once must not upset the rest.
	for i, v := range body.LowPass([]float64{0, 1, 1 + 1e-15, 2, 3}, []float64{4, 4, 4, 4, 4}, 1, 1) {
		if math.Abs(v-4) > 1e-6 {
			t.Errorf("value %d of a constant becomes %g", i, v)
		}
	}
}

// go test -run '^$' -bench 'Gravity' ./channels/body
func BenchmarkSeparateGravity(b *testing.B) {
	s := worn(rand.New(rand.NewPCG(1, 1)), 50, 3, 0.02)
	for _, c := range []struct {
		name string
		gyro []float64
	}{{"with gyroscope", s.gyro}, {"without", nil}} {
		b.Run(c.name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				body.SeparateGravity(s.time, s.accel, c.gyro)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(s.time)), "ns/frame")
		})
	}
}
