package body_test

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"

	"strandwise/channels/body"
)

// drawSkeleton draws a tree of joints, some of which move.
func drawSkeleton(t *rapid.T) *body.Skeleton {
	s := &body.Skeleton{}
	for i := range rapid.IntRange(1, 12).Draw(t, "joints") {
		j := body.Joint{Name: string(rune('A' + i)), Parent: rapid.IntRange(-1, i-1).Draw(t, "parent"), Offset: drawVec(t, "offset")}
		if rapid.Bool().Draw(t, "moves") {
			j.Freedoms = []body.Freedom{body.MoveX, body.TurnY}
		}
		s.Joints = append(s.Joints, j)
	}
	return s
}

// drawPose draws the turns of the joints and the places of those that move.
func drawPose(t *rapid.T, s *body.Skeleton) (turns []quat.Number, moves []r3.Vec) {
	for range s.Joints {
		turns = append(turns, drawRotation(t, "turn"))
	}
	for range s.Moving() {
		moves = append(moves, drawVec(t, "move"))
	}
	return turns, moves
}

// forwardSlow is forward kinematics by products of 4 × 4 matrices from the root
// to every joint.
func forwardSlow(s *body.Skeleton, turns []quat.Number, moves []r3.Vec) []r3.Vec {
	at := make([]r3.Vec, len(s.Joints))
	for i, j := range s.Joints {
		at[i] = j.Offset
	}
	for n, i := range s.Moving() {
		at[i] = moves[n]
	}
	out := make([]r3.Vec, len(s.Joints))
	for i := range s.Joints {
		world := mat.NewDense(4, 4, []float64{1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1})
		for k := i; k >= 0; k = s.Joints[k].Parent {
			var product mat.Dense
			r := r3.Rotation(turns[k]).Mat()
			local := mat.NewDense(4, 4, []float64{
				r.At(0, 0), r.At(0, 1), r.At(0, 2), at[k].X,
				r.At(1, 0), r.At(1, 1), r.At(1, 2), at[k].Y,
				r.At(2, 0), r.At(2, 1), r.At(2, 2), at[k].Z,
				0, 0, 0, 1,
			})
			product.Mul(local, world)
			world = &product
		}
		out[i] = r3.Vec{X: world.At(0, 3), Y: world.At(1, 3), Z: world.At(2, 3)}
	}
	return out
}

func TestForward(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := drawSkeleton(t)
		turns, moves := drawPose(t, s)
		got := body.NewKinematics(s).Forward(nil, turns, moves)
		for i, want := range forwardSlow(s, turns, moves) {
			checkVec(t, got[i], want)
		}
	})
}

// TestBonesKeepLength checks what forward kinematics is for.
func TestBonesKeepLength(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := drawSkeleton(t)
		turns, moves := drawPose(t, s)
		at := body.NewKinematics(s).Forward(nil, turns, moves)
		for _, b := range s.Bones() {
			if got := r3.Norm(r3.Sub(at[b.Joint], at[b.Parent])); math.Abs(got-b.Length) > tolerance {
				t.Fatalf("bone of %g m is %g m long", b.Length, got)
			}
		}
	})
}

// TestMoves goes from places back to moves. One Kinematics serves frame after
// frame.
func TestMoves(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := drawSkeleton(t)
		k := body.NewKinematics(s)
		for range 2 {
			turns, moves := drawPose(t, s)
			got := k.Moves(nil, turns, k.Forward(nil, turns, moves))
			for i := range got {
				checkVec(t, got[i], moves[i])
			}
		}
	})
}

// TestPuppet stands the puppet at (1, 0, 0), leans it forward by a quarter turn
// and raises its arm by another.
func TestPuppet(t *testing.T) {
	turns := []quat.Number{body.About(body.X, math.Pi/2), body.Identity(), {}, body.About(body.Z, math.Pi/2), {}, body.Identity()}
	moves := []r3.Vec{{X: 1}, {X: 0.3, Y: 0.4, Z: 0.1}}
	got := body.NewKinematics(puppet()).Forward(nil, turns, moves)
	for i, want := range []r3.Vec{{X: 1}, {X: 1, Z: 0.5}, {X: 1, Z: 0.75}, {X: 1.3, Y: -0.1, Z: 0.4}, {X: 1.3, Y: -0.1, Z: 1}, {X: 1, Y: 0.2}} {
		checkVec(t, got[i], want)
	}
}

func TestKinematicsPanics(t *testing.T) {
	s := puppet()
	k := body.NewKinematics(s)
	turns, moves, at := make([]quat.Number, 6), make([]r3.Vec, 2), make([]r3.Vec, 6)
	for name, f := range map[string]func(){
		"turns":  func() { k.Forward(nil, turns[:5], moves) },
		"moves":  func() { k.Forward(nil, turns, moves[:1]) },
		"places": func() { k.Forward(at[:5], turns, moves) },
		"back":   func() { k.Moves(nil, turns, at[:5]) },
		"order":  func() { body.NewKinematics(&body.Skeleton{Joints: []body.Joint{{Name: "A", Parent: 0}}}) },
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

// go test -bench Forward ./channels/body
func BenchmarkForward(b *testing.B) {
	s := &body.Skeleton{Joints: []body.Joint{{Name: "A", Parent: -1}}}
	for i := 1; i < 50; i++ {
		s.Joints = append(s.Joints, body.Joint{Name: string(rune('A' + i)), Parent: (i - 1) / 2, Offset: r3.Vec{X: 0.1}})
	}
	k := body.NewKinematics(s)
	turns, moves, at := make([]quat.Number, 50), make([]r3.Vec, len(s.Moving())), make([]r3.Vec, 50)
	for i := range turns {
		turns[i] = body.About(body.Axis(i%3), float64(i))
	}
	b.ReportAllocs()
	for b.Loop() {
		k.Forward(at, turns, moves)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/50, "ns/joint")
}
