package chart_test

import (
	"math"
	"slices"
	"testing"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/channels/chart"
)

const quaternion = "a.ornt.quat_x a.ornt.quat_y a.ornt.quat_z a.ornt.quat_w"

// turning makes a take of a point that turns, its quaternions scaled and with
// signs as given.
func turning(t testing.TB, headers string, qs []quat.Number) *channels.Take {
	t.Helper()
	data := make([]float64, 4*len(qs))
	for i, q := range qs {
		body.Store(data[4*i:], q)
	}
	return named(t, headers, data)
}

// spun turns about one axis at one rate.
func spun(frames int, step float64, axis r3.Vec) []quat.Number {
	out := make([]quat.Number, frames)
	for f := range out {
		out[f] = quat.Mul(body.About(body.Z, 0.4), body.Exp(r3.Scale(step*float64(f), axis)))
	}
	return out
}

// Three whole turns are a straight line in the coordinates, and come back.
func TestTurnsGoBeyondHalf(t *testing.T) {
	const frames, step = 120, 2 * math.Pi * 3 / 119
	axis := r3.Unit(r3.Vec{X: 1, Y: 2, Z: -1})
	take := turning(t, quaternion, spun(frames, step, axis))
	c := newChart(t, take, chart.Options{})
	p := c.Plot(take)
	for f := 1; f < frames; f++ {
		d := r3.Sub(vec(p.Values[3*f:]), vec(p.Values[3*f-3:]))
		if e := r3.Norm(r3.Sub(d, r3.Scale(step, axis))); !(e <= 1e-9) {
			t.Fatalf("frame %d is off the line by %g", f, e)
		}
	}
	if d := farthest(t, take.Data, unchanged(c, take)); !(d <= 1e-9) {
		t.Errorf("round trip is off by %g", d)
	}
}

// Twice the amplitude about the mean turns twice as far, with length one and
// smooth signs.
func TestTurnsAmplified(t *testing.T) {
	axis := r3.Vec{X: 1}
	take := turning(t, quaternion, spun(41, 0.1, axis))
	v := vary(newChart(t, take, chart.Options{}), take, change{gain: 2, tempo: 1})
	before := body.Load(v.Data)
	for f := 1; f < v.Frames(); f++ {
		q := body.Load(v.Frame(f))
		if d := quat.Abs(q) - 1; !(math.Abs(d) <= 1e-12) {
			t.Errorf("frame %d has length 1%+g", f, d)
		}
		if a := body.Angle(before, q); !(math.Abs(a-0.2) <= 1e-9) || body.Nearest(before, q) != q {
			t.Errorf("frame %d turns by %g rad from the last, want 0.2", f, a)
		}
		before = q
	}
	middle := body.Load(take.Frame(20))
	if a := body.Angle(middle, body.Load(v.Frame(20))); !(a <= 1e-9) {
		t.Errorf("the mean turned by %g rad", a)
	}
}

// Numbers of another length and with jumping signs are the same rotations.
func TestTurnsAreMended(t *testing.T) {
	qs := spun(20, 0.1, r3.Vec{Y: 1})
	want := turning(t, quaternion, qs)
	for i := range qs {
		qs[i] = quat.Scale([]float64{2, -0.5}[i%2], qs[i])
	}
	take := turning(t, quaternion, qs)
	if d := farthest(t, want.Data, unchanged(newChart(t, take, chart.Options{}), take)); !(d <= 1e-12) {
		t.Errorf("off by %g", d)
	}
}

// Takes laid out like one another can be mixed, whatever their signs: half way
// between two that turn about one axis is half way.
func TestTurnsMixed(t *testing.T) {
	a := turning(t, quaternion, spun(20, 0.1, r3.Vec{Y: 1}))
	qs := spun(20, 0.2, r3.Vec{Y: 1})
	for i := range qs {
		qs[i] = quat.Scale(-1, qs[i])
	}
	b := turning(t, quaternion, qs)
	c := newChart(t, a, chart.Options{})
	p := c.Plot(a)
	q := c.PlotLike(b, p)
	values := slices.Clone(p.Values)
	for i := range values {
		values[i] = (values[i] + q.Values[i]) / 2
	}
	got := c.Take(p, a.Time, values)
	for f, want := range spun(20, 0.15, r3.Vec{Y: 1}) {
		if d := body.Angle(want, body.Load(got[4*f:])); !(d <= 1e-9) {
			t.Errorf("frame %d is off by %g rad", f, d)
		}
	}
}

// A turned sensor sees gravity turned, and its orientation says so: carried into
// the world, the acceleration is what it was.
func TestSensorAndOrientationTurnTogether(t *testing.T) {
	qs := spun(30, 0.05, r3.Unit(r3.Vec{X: 1, Z: 1}))
	var data []float64
	for f, q := range qs {
		a := body.Rotate(quat.Conj(q), r3.Vec{X: math.Sin(float64(f)), Z: channels.StandardGravity})
		data = append(data, q.Imag, q.Jmag, q.Kmag, q.Real, a.X, a.Y, a.Z)
	}
	take := named(t, quaternion+" a.accel.x a.accel.y a.accel.z", data)
	v := vary(newChart(t, take, chart.Options{}), take, change{gain: 1, tempo: 1, turn: r3.Vec{X: 0.3, Y: -0.4}})
	for f := range take.Time {
		world := func(row []float64) r3.Vec { return body.Rotate(body.Load(row), vec(row[4:])) }
		if d := r3.Norm(r3.Sub(world(v.Frame(f)), world(take.Frame(f)))); !(d <= 1e-9) {
			t.Fatalf("frame %d: acceleration in the world is off by %g m/s²", f, d)
		}
	}
	if d := farthest(t, take.Data, v.Data); d < 0.1 {
		t.Errorf("nothing turned: %g", d)
	}
}
