package body_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"

	"strandwise/channels/body"
)

// TestMean checks that the sum of rotation vectors from the mean, which is the
// slope of the sum of squares, is zero, whatever the signs of the quaternions.
func TestMean(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		middle := drawRotation(t, "middle")
		var qs []quat.Number
		var weights []float64
		for range rapid.IntRange(1, 8).Draw(t, "n") {
			q := body.After(middle, r3.Scale(0.8, drawVec(t, "off")))
			if rapid.Bool().Draw(t, "twin") {
				q = quat.Scale(-1, q)
			}
			qs, weights = append(qs, q), append(weights, rapid.Float64Range(0.1, 2).Draw(t, "weight"))
		}
		for _, w := range [][]float64{weights, nil} {
			m, sum := body.Mean(qs, w), r3.Vec{}
			for i, q := range qs {
				share := 1.0
				if w != nil {
					share = w[i]
				}
				sum = r3.Add(sum, r3.Scale(share, body.Between(m, q)))
			}
			if r3.Norm(sum) > 1e-9 {
				t.Fatalf("rotation vectors from the mean sum to %v", sum)
			}
		}
	})
	p, q := body.About(body.X, 0.2), body.About(body.X, 1)
	checkSame(t, body.Mean([]quat.Number{p, q}, nil), body.About(body.X, 0.6))
	checkSame(t, body.Mean([]quat.Number{p, q}, []float64{3, 1}), body.About(body.X, 0.4))
	checkSame(t, body.Mean(nil, nil), body.Identity())
	checkSame(t, body.Mean([]quat.Number{p}, []float64{0}), body.Identity())
}

// TestUnwrapVectors turns three times round and back, about an axis that
// wavers, in two series at once.
func TestUnwrapVectors(t *testing.T) {
	const frames = 400
	vs, want := make([]r3.Vec, 2*frames), make([]r3.Vec, 2*frames)
	for i := range frames {
		angle := 6 * math.Pi * math.Sin(math.Pi*float64(i)/frames)
		axis := r3.Unit(r3.Vec{X: 0.1 * math.Sin(float64(i)/30), Y: 1, Z: 0.1 * math.Cos(float64(i)/40)})
		want[2*i] = r3.Scale(angle, axis)
		want[2*i+1] = r3.Scale(-angle/2, axis)
	}
	for i := range vs {
		vs[i] = body.Log(body.Exp(want[i]))
	}
	body.UnwrapVectors(vs, 2)
	body.UnwrapVectors(vs[1:], 2)
	for i := range vs {
		if r3.Norm(r3.Sub(vs[i], want[i])) > 1e-9 {
			t.Fatalf("vector %d is %v, want %v", i, vs[i], want[i])
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		var vs []r3.Vec
		for range rapid.IntRange(1, 20).Draw(t, "n") {
			vs = append(vs, r3.Scale(math.Pi, drawVec(t, "v")))
		}
		got := append([]r3.Vec(nil), vs...)
		body.UnwrapVectors(got, 1)
		for i := range got {
			if a := body.Angle(body.Exp(got[i]), body.Exp(vs[i])); a > 1e-9 {
				t.Fatalf("rotation %d is turned by %g", i, a)
			}
		}
	})
}

// kabschSlow is the method as published, by singular values.
func kabschSlow(a, b []float64) *mat.Dense {
	n := len(a) / 3
	var h, r mat.Dense
	h.Mul(mat.NewDense(n, 3, a).T(), mat.NewDense(n, 3, b))
	var svd mat.SVD
	svd.Factorize(&h, mat.SVDFull)
	var u, v mat.Dense
	svd.UTo(&u)
	svd.VTo(&v)
	r.Mul(&v, u.T())
	if mat.Det(&r) < 0 {
		r.Mul(&v, mat.NewDiagDense(3, []float64{1, 1, -1}))
		r.Mul(&r, u.T())
	}
	return &r
}

func TestKabsch(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 6))
	for range 200 {
		q := quat.Number(randomRotation(rng))
		var a, b, noisyB, mirrored []float64
		for range 3 + rng.IntN(10) {
			v := r3.Vec{X: rng.NormFloat64(), Y: rng.NormFloat64(), Z: rng.NormFloat64()}
			w := body.Rotate(q, v)
			a, b = append(a, v.X, v.Y, v.Z), append(b, w.X, w.Y, w.Z)
			noisyB = append(noisyB, noisy(rng, w, 0.2)...)
			mirrored = append(mirrored, -w.X, w.Y, w.Z)
		}
		if off := body.Angle(body.Kabsch(a, b), q); off > 1e-7 {
			t.Fatalf("off by %g rad", off)
		}
		for _, b := range [][]float64{noisyB, mirrored} {
			got, want := r3.Rotation(body.Kabsch(a, b)).Mat(), kabschSlow(a, b)
			for i := range 9 {
				if math.Abs(got.At(i/3, i%3)-want.At(i/3, i%3)) > 1e-7 {
					t.Fatalf("%v, want %v", mat.Formatted(got), mat.Formatted(want))
				}
			}
		}
	}
	for _, none := range [][]float64{nil, make([]float64, 6), {math.NaN(), 0, 0}} {
		if q := body.Kabsch(none, none); body.Angle(q, body.Identity()) > tolerance {
			t.Errorf("of %v: %v", none, q)
		}
	}
}

func TestKabsch2(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		angle := rapid.Float64Range(-3, 3).Draw(t, "angle")
		a, s, c := []float64{1, 0}, math.Sin(angle), math.Cos(angle)
		for range rapid.IntRange(0, 5).Draw(t, "more") {
			a = append(a, parts.Draw(t, "x"), parts.Draw(t, "y"))
		}
		b := make([]float64, len(a))
		for i := 0; i < len(a); i += 2 {
			b[i], b[i+1] = c*a[i]-s*a[i+1], s*a[i]+c*a[i+1]
		}
		if got := body.Kabsch2(a, b); math.Abs(got-angle) > 1e-12 {
			t.Fatalf("%v, want %v", got, angle)
		}
	})
	if body.Kabsch2(nil, nil) != 0 {
		t.Error("no points are turned")
	}
}
