package body_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"

	"strandwise/channels/body"
)

// TestReach moves any chain towards any target: bones have their lengths and
// the root stays, whatever becomes of the target.
func TestReach(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		chain := []r3.Vec{drawVec(t, "root")}
		var lengths []float64
		for range rapid.IntRange(1, 6).Draw(t, "bones") {
			lengths = append(lengths, rapid.Float64Range(0.1, 1).Draw(t, "length"))
			chain = append(chain, drawVec(t, "joint"))
		}
		root, target := chain[0], r3.Scale(3, drawVec(t, "target"))
		off := body.Reach(chain, lengths, target, 1e-4, 20)
		if chain[0] != root {
			t.Fatalf("root moved from %v to %v", root, chain[0])
		}
		whole := 0.0
		for i, l := range lengths {
			whole += l
			if got := r3.Norm(r3.Sub(chain[i+1], chain[i])); math.Abs(got-l) > 1e-12 {
				t.Fatalf("bone %d is %v long, not %v", i, got, l)
			}
		}
		if got := r3.Norm(r3.Sub(target, chain[len(chain)-1])); got != off {
			t.Fatalf("off by %v, not %v", got, off)
		}
		// Beyond reach it is stretched: as near as it can be.
		if far := r3.Norm(r3.Sub(target, root)) - whole; far > 0 && off > far+1e-9 {
			t.Fatalf("off by %v where %v is possible", off, far)
		}
	})
}

// TestReachArrives moves limbs of three bones from one pose to another that a
// step of some centimetres away, as the repair of a limb asks for.
func TestReachArrives(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 5))
	worst := 0.0
	for range 500 {
		lengths := []float64{0.45, 0.43, 0.15}
		chain := []r3.Vec{{}}
		for _, l := range lengths {
			chain = append(chain, r3.Add(chain[len(chain)-1], r3.Scale(l, randomUnit(rng))))
		}
		target := r3.Add(chain[3], r3.Scale(0.05, randomUnit(rng)))
		if d := r3.Norm(target); d > 1.02 || d < 0.2 {
			continue // at the edge of what can be reached
		}
		worst = max(worst, body.Reach(chain, lengths, target, 1e-4, 50))
	}
	if worst > 1e-4 {
		t.Errorf("off by up to %g m", worst)
	}
}

// TestReachStraight asks a straight chain for a target on its own line, where
// the published method alone stays stuck.
func TestReachStraight(t *testing.T) {
	for _, target := range []r3.Vec{{X: 1}, {X: -1}, {X: 0.2}, {}} {
		chain := []r3.Vec{{}, {X: 1}, {X: 2}, {X: 3}}
		if off := body.Reach(chain, []float64{1, 1, 1}, target, 1e-3, 200); off > 1e-3 {
			t.Errorf("target %v: off by %g, chain %v", target, off, chain)
		}
	}
	chain := []r3.Vec{{}, {Y: 1}, {Y: 2}}
	if off := body.Reach(chain, []float64{1, 1}, r3.Vec{X: 5}, 1e-3, 10); off != 3 || chain[2] != (r3.Vec{X: 2}) {
		t.Errorf("out of reach: off by %g, chain %v", off, chain)
	}
	one := []r3.Vec{{X: 1}}
	if off := body.Reach(one, nil, r3.Vec{X: 1, Y: 2}, 1e-3, 10); off != 2 || one[0] != (r3.Vec{X: 1}) {
		t.Errorf("no bone: off by %g, chain %v", off, one)
	}
}

// go test -run '^$' -bench Reach ./channels/body
func BenchmarkReach(b *testing.B) {
	lengths, chain := []float64{0.45, 0.43, 0.15}, make([]r3.Vec, 4)
	b.ReportAllocs()
	for b.Loop() {
		copy(chain, []r3.Vec{{}, {Y: -0.45}, {Y: -0.87, Z: 0.1}, {Y: -0.9, Z: 0.25}})
		body.Reach(chain, lengths, r3.Vec{X: 0.03, Y: -0.85, Z: 0.2}, 1e-4, 50)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N), "ns/frame")
}
