package body_test

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"

	"strandwise/channels/body"
)

const (
	tolerance = 1e-12 // of quaternion parts, angles in radians and lengths
	degree    = math.Pi / 180
)

var zyx = []body.Axis{body.Z, body.Y, body.X}

// stored returns a quaternion in its order of storage.
func stored(q quat.Number) [4]float64 {
	var out [4]float64
	body.Store(out[:], q)
	return out
}

// checkStored compares a quaternion with its stored parts to 8 decimals, as
// the source states them.
func checkStored(t *testing.T, what string, q quat.Number, want [4]float64) {
	t.Helper()
	got := stored(q)
	for i := range got {
		if math.Abs(got[i]-want[i]) > 0.5e-8+tolerance {
			t.Errorf("%s: %.8f, want %.8f", what, got, want)
			return
		}
	}
}

// checkSame checks that two quaternions are the same rotation.
func checkSame(t rapid.TB, got, want quat.Number) {
	t.Helper()
	if a := body.Angle(got, want); !(a <= tolerance) {
		t.Fatalf("rotation %v is %g rad from %v", got, a, want)
	}
}

func checkVec(t rapid.TB, got, want r3.Vec) {
	t.Helper()
	if !(r3.Norm(r3.Sub(got, want)) <= tolerance*(1+r3.Norm(want))) {
		t.Fatalf("%v, want %v", got, want)
	}
}

// TestSciPy holds rotations against values of SciPy 1.10: spatial.transform
// Rotation.from_euler("ZYX", …, degrees=True).as_quat() and Slerp.
func TestSciPy(t *testing.T) {
	p := body.Intrinsic(zyx, []float64{10 * degree, 20 * degree, 30 * degree})
	q := body.Intrinsic(zyx, []float64{80 * degree, -10 * degree, 5 * degree})
	checkStored(t, "10°, 20°, 30°", p, [4]float64{0.23929834, 0.18930786, 0.03813458, 0.95154852})
	checkStored(t, "80°, -10°, 5°", q, [4]float64{0.08925655, -0.03877032, 0.64264440, 0.75995941})
	checkStored(t, "slerp at 0.25", body.Slerp(p, q, 0.25), [4]float64{0.21042711, 0.13687329, 0.20356259, 0.94633419})
	checkStored(t, "slerp to the twin", body.Slerp(p, quat.Scale(-1, q), 0.25), [4]float64{0.21042711, 0.13687329, 0.20356259, 0.94633419})
}

// TestQuarterTurns fixes the sense of turns: right-handed, x to y about z.
func TestQuarterTurns(t *testing.T) {
	x, y, z := r3.Vec{X: 1}, r3.Vec{Y: 1}, r3.Vec{Z: 1}
	for _, c := range []struct {
		about    body.Axis
		from, to r3.Vec
	}{{body.Z, x, y}, {body.X, y, z}, {body.Y, z, x}} {
		checkVec(t, body.Rotate(body.About(c.about, math.Pi/2), c.from), c.to)
	}
}

var parts = rapid.Float64Range(-1, 1)

// drawRotation draws a unit quaternion of any direction.
func drawRotation(t *rapid.T, label string) quat.Number {
	q := quat.Number{Real: parts.Draw(t, label+" w"), Imag: parts.Draw(t, label+" x"), Jmag: parts.Draw(t, label+" y"), Kmag: parts.Draw(t, label+" z")}
	if quat.Abs(q) < 1e-3 {
		return body.Identity()
	}
	return body.Unit(q)
}

func drawVec(t *rapid.T, label string) r3.Vec {
	return r3.Vec{X: parts.Draw(t, label+" x"), Y: parts.Draw(t, label+" y"), Z: parts.Draw(t, label+" z")}
}

// TestRotate holds the expanded product against the product itself.
func TestRotate(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q, v := drawRotation(t, "q"), drawVec(t, "v")
		checkVec(t, body.Rotate(q, v), r3.Rotation(q).Rotate(v))
	})
}

// TestTurn holds the sparse product against the full one.
func TestTurn(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q, angle := drawRotation(t, "q"), rapid.Float64Range(-10, 10).Draw(t, "angle")
		for axis, v := range []r3.Vec{{X: 1}, {Y: 1}, {Z: 1}} {
			turn := quat.Number(r3.NewRotation(angle, v))
			checkSame(t, body.About(body.Axis(axis), angle), turn)
			checkSame(t, body.Turn(q, body.Axis(axis), angle), quat.Mul(q, turn))
		}
	})
}

// TestExtrinsic checks that turns about the world's axes are turns about the
// body's in the opposite order.
func TestExtrinsic(t *testing.T) {
	want := body.Intrinsic([]body.Axis{body.X, body.Y, body.Z}, []float64{0.3, 0.2, 0.1})
	checkSame(t, body.Extrinsic(zyx, []float64{0.1, 0.2, 0.3}), want)
	// The second turn, about the world's x axis, carries y to z.
	got := body.Rotate(body.Extrinsic([]body.Axis{body.Z, body.X}, []float64{math.Pi / 2, math.Pi / 2}), r3.Vec{X: 1})
	checkVec(t, got, r3.Vec{Z: 1})
}

func TestLogExp(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := drawRotation(t, "q")
		v := body.Log(q)
		if n := r3.Norm(v); n > math.Pi+tolerance {
			t.Fatalf("Log is %g rad long", n)
		}
		checkSame(t, body.Exp(v), q)
	})
	for _, v := range []r3.Vec{{}, {X: 1e-300}, {Y: -1e-9}, {X: 1e-5, Z: 2e-5}, {Z: 3.14159}, {X: -2, Y: 1, Z: 0.5}} {
		checkVec(t, body.Log(body.Exp(v)), v)
	}
}

func TestSlerp(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p, q, f := drawRotation(t, "p"), drawRotation(t, "q"), rapid.Float64Range(0, 1).Draw(t, "f")
		whole := body.Angle(p, q)
		checkSame(t, body.Slerp(p, q, 0), p)
		checkSame(t, body.Slerp(p, q, 1), q)
		m := body.Slerp(p, q, f)
		if a, b := body.Angle(p, m), body.Angle(m, q); math.Abs(a-f*whole) > tolerance || math.Abs(b-(1-f)*whole) > tolerance {
			t.Fatalf("%g rad and %g rad at %g of %g rad", a, b, f, whole)
		}
		// The other way to the same place: p exp(f log(p⁻¹ q)).
		checkSame(t, m, quat.Mul(p, body.Exp(r3.Scale(f, body.Log(quat.Mul(quat.Conj(p), q))))))
	})
	for _, angle := range []float64{0, 1e-12, 1e-8, 1e-4} {
		checkSame(t, body.Slerp(body.Identity(), body.About(body.X, angle), 0.5), body.About(body.X, angle/2))
	}
	checkSame(t, body.Slerp(body.Identity(), body.About(body.Y, 0.2), -1), body.About(body.Y, -0.2))
}

func TestAngle(t *testing.T) {
	for _, angle := range []float64{0, 1e-9, 0.5, math.Pi / 2, 3, math.Pi} {
		q := body.About(body.Y, angle)
		for _, q := range []quat.Number{q, quat.Scale(-1, q)} {
			if got := body.Angle(body.Identity(), q); math.Abs(got-angle) > tolerance {
				t.Errorf("%g, want %g", got, angle)
			}
		}
	}
}

func TestUnit(t *testing.T) {
	inf := math.Inf(1)
	for _, q := range []quat.Number{{}, {Real: inf}, {Imag: math.NaN()}, {Real: 5}} {
		if got := body.Unit(q); got != body.Identity() {
			t.Errorf("Unit(%v) = %v", q, got)
		}
	}
	if got := body.Unit(quat.Number{Jmag: -3, Real: 4}); quat.Abs(quat.Sub(got, quat.Number{Jmag: -0.6, Real: 0.8})) > tolerance {
		t.Errorf("%v", got)
	}
}

// TestUnwrap turns three times round, with signs at random: the parts of each
// of two interleaved series must become smooth, and the rotations stay.
func TestUnwrap(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		const n, step = 40, 6 * math.Pi / 40
		qs := make([]quat.Number, 2*n)
		for i := range qs {
			axis := []body.Axis{body.X, body.Z}[i%2]
			qs[i] = body.About(axis, step*float64(i/2))
			if rapid.Bool().Draw(t, "flip") {
				qs[i] = quat.Scale(-1, qs[i])
			}
		}
		before := append([]quat.Number(nil), qs...)
		body.Unwrap(qs, 2)
		body.Unwrap(qs[1:], 2)
		for i, q := range qs {
			checkSame(t, q, before[i])
			if i < 2 && q.Real < 0 {
				t.Fatalf("the first is %v", q)
			}
			if i >= 2 && quat.Abs(quat.Sub(q, qs[i-2])) > step/2+tolerance {
				t.Fatalf("%v follows %v", q, qs[i-2])
			}
		}
	})
}

func TestStorage(t *testing.T) {
	q := quat.Number{Real: 4, Imag: 1, Jmag: 2, Kmag: 3}
	if got := stored(q); got != [4]float64{1, 2, 3, 4} {
		t.Errorf("%v is not x, y, z, w", got)
	}
	if got := body.Load([]float64{1, 2, 3, 4, 5}); got != q {
		t.Errorf("%v", got)
	}
	if got := body.Components(); got != [4]string{"quat_x", "quat_y", "quat_z", "quat_w"} {
		t.Errorf("%v", got)
	}
}
