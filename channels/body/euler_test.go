package body_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"strandwise/channels/body"
)

// orders lists the twelve orders of three turns of which no two neighbours are
// about one axis.
func orders() [][3]body.Axis {
	var out [][3]body.Axis
	for i := body.X; i <= body.Z; i++ {
		for j := body.X; j <= body.Z; j++ {
			for k := body.X; k <= body.Z; k++ {
				if i != j && j != k {
					out = append(out, [3]body.Axis{i, j, k})
				}
			}
		}
	}
	return out
}

func TestIntrinsicAngles(t *testing.T) {
	if n := len(orders()); n != 12 {
		t.Fatalf("%d orders", n)
	}
	for _, order := range orders() {
		t.Run(order[0].String()+order[1].String()+order[2].String(), func(t *testing.T) {
			rapid.Check(t, func(t *rapid.T) {
				q := drawRotation(t, "q")
				a := body.IntrinsicAngles(order, q)
				checkSame(t, body.Intrinsic(order[:], a[:]), q)
				low, high := -math.Pi/2, math.Pi/2
				if order[0] == order[2] {
					low, high = 0, math.Pi
				}
				if math.Abs(a[0]) > math.Pi || math.Abs(a[2]) > math.Pi || a[1] < low-tolerance || a[1] > high+tolerance {
					t.Fatalf("angles %v are out of range", a)
				}
			})
		})
	}
}

// TestAnglesBack finds the angles a rotation was made of, away from gimbal
// lock.
func TestAnglesBack(t *testing.T) {
	for _, order := range orders() {
		want := [3]float64{-2.5, 0.7, 1.9}
		got := body.IntrinsicAngles(order, body.Intrinsic(order[:], want[:]))
		for i := range got {
			if math.Abs(got[i]-want[i]) > tolerance {
				t.Errorf("%v: %v, want %v", order, got, want)
			}
		}
	}
}

// TestGimbalLock checks the rotation where the outer angles are not determined
// one by one, at and beside the lock.
func TestGimbalLock(t *testing.T) {
	for _, order := range orders() {
		for _, middle := range []float64{-math.Pi / 2, 0, math.Pi / 2, math.Pi} {
			for _, off := range []float64{0, 1e-15, 1e-9, -1e-6} {
				q := body.Intrinsic(order[:], []float64{0.4, middle + off, -1.1})
				a := body.IntrinsicAngles(order, q)
				checkSame(t, body.Intrinsic(order[:], a[:]), q)
			}
		}
	}
}

func TestEulerPanics(t *testing.T) {
	for name, f := range map[string]func(){
		"too few angles":       func() { body.Intrinsic(zyx, []float64{1}) },
		"too many angles":      func() { body.Extrinsic(zyx[:1], []float64{1, 2}) },
		"neighbours are equal": func() { body.IntrinsicAngles([3]body.Axis{body.X, body.X, body.Y}, body.Identity()) },
		"no stride":            func() { body.Unwrap(nil, 0) },
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if recover() == nil {
					t.Error("does not panic")
				}
			}()
			f()
		})
	}
}
