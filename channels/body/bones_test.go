package body_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels/body"
	"strandwise/ingest/bvh"
	"strandwise/ingest/c3d"
)

// dancer is a body of seven points: hips, neck, head, two elbows and two hands
// that hang from the neck, with all joints turning.
var dancer = &body.Skeleton{Joints: []body.Joint{
	{Name: "Hips", Parent: -1},
	{Name: "Neck", Parent: 0, Offset: r3.Vec{Y: 0.5}},
	{Name: "Head", Parent: 1, Offset: r3.Vec{Y: 0.2}},
	{Name: "LeftElbow", Parent: 1, Offset: r3.Vec{X: 0.35}},
	{Name: "LeftHand", Parent: 3, Offset: r3.Vec{X: 0.3}},
	{Name: "RightElbow", Parent: 1, Offset: r3.Vec{X: -0.35}},
	{Name: "RightHand", Parent: 5, Offset: r3.Vec{X: -0.3}},
}}

// dance is a take of the dancer's points, of so many times its size, with noise
// on every coordinate. Every joint swings about an axis of its own.
func dance(rng *rand.Rand, frames int, size, noise float64) []float64 {
	axes, pace := make([]r3.Vec, len(dancer.Joints)), make([]float64, len(dancer.Joints))
	for i := range axes {
		axes[i], pace[i] = randomUnit(rng), 0.5+rng.Float64()
	}
	k := body.NewKinematics(dancer)
	var out []float64
	for f := range frames {
		at := float64(f) / 10
		turns := make([]quat.Number, len(axes))
		for i := range turns {
			turns[i] = body.Exp(r3.Scale(math.Sin(pace[i]*at), axes[i]))
		}
		for _, p := range k.Forward(nil, turns, []r3.Vec{{X: 0.1 * at}}) {
			out = append(out, noisy(rng, r3.Scale(size, p), noise)...)
		}
	}
	return out
}

// TestFindBones finds the dancer's bones in takes of two people of different
// size, in which a hand is lost for a while.
func TestFindBones(t *testing.T) {
	for seed := range uint64(20) {
		rng := rand.New(rand.NewPCG(seed, 4))
		small, tall := dance(rng, 100, 1, 0.001), dance(rng, 150, 1.3, 0.001)
		for f := 20; f < 50; f++ {
			small[3*(7*f+4)] = math.NaN()
		}
		tree := body.FindBones([][]float64{small, tall}, 7, body.DefaultBoneSearch())
		const neck = 1
		for i, j := range dancer.Joints {
			want := map[int]int{0: neck, neck: -1}
			parent, ok := want[i]
			if !ok {
				parent = j.Parent
			}
			if tree.Parent[i] != parent {
				t.Log(tree)
				t.Fatalf("seed %d: parent of %s is %d, want %d", seed, j.Name, tree.Parent[i], parent)
			}
		}
		for take, size := range map[*[]float64]float64{&small: 1, &tall: 1.3} {
			lengths := tree.Lengths(nil, *take, 3)
			for i, want := range []float64{0.5, 0, 0.2, 0.35, 0.3, 0.35, 0.3} {
				if math.Abs(lengths[i]-want*size) > 0.001 || tree.Spread[i] > 0.01 {
					t.Errorf("seed %d: bone %d is %.4f long with spread %.4f, want %.4f", seed, i, lengths[i], tree.Spread[i], want*size)
				}
			}
		}
		if tree.Order[0] != neck || len(tree.Order) != 7 {
			t.Errorf("order %v", tree.Order)
		}
	}
}

// TestFindBonesNone covers points that no bone joins.
func TestFindBonesNone(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	still, apart := make([]float64, 100*3*3), make([]float64, 100*3*3)
	for i := range still {
		still[i] = float64(i%9) + 0.001*rng.NormFloat64()
		apart[i] = rng.NormFloat64()
	}
	for name, take := range map[string][]float64{"still": still, "apart": apart, "too short": dance(rng, 5, 1, 0)[:3*3*5], "none": nil} {
		tree := body.FindBones([][]float64{take}, 3, body.DefaultBoneSearch())
		if len(tree.Order) != 3 || tree.Parent[0] != -1 || tree.Parent[1] != -1 || tree.Parent[2] != -1 {
			t.Errorf("%s: %v", name, tree)
		}
	}
	if tree := body.FindBones(nil, 0, body.DefaultBoneSearch()); len(tree.Order) != 0 {
		t.Errorf("of no points: %v", tree)
	}
}

// TestRestore pulls a dance out of shape and restores it.
func TestRestore(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 4))
	take := dance(rng, 100, 1, 0)
	tree := body.FindBones([][]float64{take}, 7, body.DefaultBoneSearch())
	for f := range 100 {
		frame := append([]float64(nil), take[21*f:21*(f+1)]...)
		tree.Restore(frame, tree.Length, 3)
		near(t, "a frame in shape", frame, take[21*f:21*(f+1)], 1e-9)
		for i := range frame {
			frame[i] += 0.02 * rng.NormFloat64()
		}
		pulled := append([]float64(nil), frame...)
		tree.Restore(frame, tree.Length, 3)
		for i, p := range tree.Parent {
			if p < 0 {
				near(t, "the root", frame[3*i:3*i+3], pulled[3*i:3*i+3], 0)
				continue
			}
			if got := r3.Norm(r3.Sub(vecAt(frame, i), vecAt(frame, p))); math.Abs(got-tree.Length[i]) > 1e-12 {
				t.Fatalf("bone %d is %v long, want %v", i, got, tree.Length[i])
			}
			if off := apart(r3.Sub(vecAt(frame, i), vecAt(frame, p)), r3.Sub(vecAt(pulled, i), vecAt(pulled, p))); off > 1e-5 {
				t.Fatalf("bone %d is turned by %g°", i, off)
			}
		}
	}
	lost := append([]float64(nil), take[:21]...)
	lost[3*3] = math.NaN() // the left elbow
	tree.Restore(lost, tree.Length, 3)
	near(t, "the hand of a lost elbow", lost[12:15], take[12:15], 0)
	near(t, "the other hand", lost[18:21], take[18:21], 1e-9)
}

func near(t *testing.T, what string, got, want []float64, within float64) {
	t.Helper()
	for i := range want {
		if !(math.Abs(got[i]-want[i]) <= within) {
			t.Fatalf("%s: value %d is %v, want %v", what, i, got[i], want[i])
		}
	}
}

// TestFindBonesOpenData finds the bones of recorded skeletons in the places of
// their joints alone. Where more pairs of points are rigid than the skeleton has
// bones (a stiff trunk), others may stand for them; each found must be rigid,
// and the limbs must be found as they are.
func TestFindBonesOpenData(t *testing.T) {
	for _, c := range []struct {
		file  string
		chain []string // joined one to the next
	}{
		{"20tab_test_mocapbank.bvh", []string{"LeftShoulder", "LeftElbow", "LeftWrist", "LeftWrist_end"}},
		{"bvhfilesjl_Example.bvh", []string{"J_L_Shoulder", "J_L_Elbow", "J_L_Hand"}},
		{"pybvh_bvh_example.bvh", []string{"LeftUpLeg", "LeftLeg", "LeftFoot"}},
		{"pybvh_cmu_12_01_walk.bvh", []string{"RightUpLeg", "RightLeg", "RightFoot"}},
	} {
		take := openTake(t, bvh.Format{LengthUnit: "cm"}, "bvh", c.file)
		names, places := placesOf(take)
		tree := body.FindBones([][]float64{places}, len(names), body.DefaultBoneSearch())
		roots, same, at := 0, 0, map[string]int{}
		for i, p := range tree.Parent {
			at[names[i]] = i
			if p < 0 {
				roots++
				continue
			}
			if tree.Spread[i] > 0.02 {
				t.Errorf("%s: bone %s–%s has spread %g", c.file, names[p], names[i], tree.Spread[i])
			}
			if take.Skeleton.Joints[i].Parent == p || take.Skeleton.Joints[p].Parent == i {
				same++
			}
		}
		t.Logf("%s: %d bones and %d roots in %d points, %d as in the skeleton", c.file, len(names)-roots, roots, len(names), same)
		if roots != 1 {
			t.Errorf("%s: %d roots", c.file, roots)
		}
		for i := 1; i < len(c.chain); i++ {
			a, b := at[c.chain[i-1]], at[c.chain[i]]
			if tree.Parent[b] != a {
				t.Errorf("%s: %s hangs from %d, not %s", c.file, c.chain[i], tree.Parent[b], c.chain[i-1])
			}
		}
	}
}

// TestFindBonesMarkers finds the plates of three markers that a recording of a
// person in a wheelchair has on forearm, arm, head and glove.
func TestFindBonesMarkers(t *testing.T) {
	names, places := placesOf(openTake(t, c3d.Format{}, "c3d", "ktk_sample_propulsion.c3d"))
	tree := body.FindBones([][]float64{places}, len(names), body.DefaultBoneSearch())
	joined := func(i int) string {
		for tree.Parent[i] >= 0 {
			i = tree.Parent[i]
		}
		return names[i]
	}
	roots := map[string][]string{}
	for i, n := range names {
		roots[n] = []string{joined(i)}
	}
	for _, plate := range []string{"ForearmL", "ForearmR", "ArmL", "ArmR", "Head", "GloveL", "GloveR"} {
		a, b, c := roots[plate+"1"], roots[plate+"2"], roots[plate+"3"]
		if a == nil || a[0] != b[0] || b[0] != c[0] {
			t.Errorf("%s is torn: %v %v %v", plate, a, b, c)
		}
	}
}

// go test -run '^$' -bench FindBones ./channels/body
func BenchmarkFindBones(b *testing.B) {
	const frames = 300
	take := dance(rand.New(rand.NewPCG(1, 1)), frames, 1, 0.001)
	b.ReportAllocs()
	for b.Loop() {
		body.FindBones([][]float64{take}, 7, body.DefaultBoneSearch())
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/frames/21, "ns/pair/frame")
}
