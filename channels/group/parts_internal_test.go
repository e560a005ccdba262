package group

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/channels"
)

func TestAgglomerate(t *testing.T) {
	// 0 and 2 go together, 1 and 3 a little less, the pairs hardly.
	table := [][]float64{{1, 0.1, 0.99, 0.3}, {0.1, 1, 0.2, 0.96}, {0.99, 0.2, 1, 0.2}, {0.3, 0.96, 0.2, 1}}
	similarity := func(i, j int) float64 { return table[i][j] }
	merges, clusters := agglomerate(4, similarity, 0.95)
	if d := cmp.Diff([]cluster{{0, 2}, {1, 3}}, clusters); d != "" {
		t.Error(d)
	}
	want := []merge{{cluster{0, 2}, 0.99}, {cluster{1, 3}, 0.96}, {cluster{0, 1, 2, 3}, 0.2}}
	for i, m := range merges {
		if !slices.Equal(m.members, want[i].members) || math.Abs(m.similarity-want[i].similarity) > 1e-12 {
			t.Errorf("merge %d: %v", i, m)
		}
	}
	if _, all := agglomerate(4, similarity, -1); len(all) != 1 {
		t.Errorf("%v", all)
	}
	if _, none := agglomerate(0, similarity, 0); len(none) != 0 {
		t.Errorf("%v", none)
	}
}

// Whatever the similarities: clusters part the units, and merges grow less
// alike.
func TestAgglomerateProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 8).Draw(t, "n")
		values := rapid.SliceOfN(rapid.Float64Range(-1, 1), n*n, n*n).Draw(t, "similarity")
		threshold := rapid.Float64Range(-1, 1).Draw(t, "threshold")
		merges, clusters := agglomerate(n, func(i, j int) float64 { return values[min(i, j)*n+max(i, j)] }, threshold)
		var all []int
		for _, c := range clusters {
			all = append(all, c...)
		}
		if slices.Sort(all); !slices.Equal(all, sequence(0, n)) {
			t.Fatalf("%v are not the units", clusters)
		}
		done := 0
		for i, m := range merges {
			if i > 0 && m.similarity > merges[i-1].similarity+1e-12 {
				t.Fatalf("merge %d is of more alike clusters than the one before: %v", i, merges)
			}
			if m.similarity >= threshold {
				done++
			}
		}
		if len(merges) != n-1 || len(clusters) < n-done {
			t.Fatalf("%d merges, %d clusters of %d units", len(merges), len(clusters), n)
		}
	})
}

func TestLimbsOfATree(t *testing.T) {
	for _, c := range []struct {
		name         string
		parent, want []int
	}{
		{"none", []int{}, []int{}},
		{"one", []int{-1}, []int{0}},
		{"two trees", []int{-1, 0, -1, 2}, []int{0, 0, 2, 2}},
		{"an arm and a hand", []int{-1, 0, 1, 1}, []int{0, 0, 0, 0}},
		// 0 hips; 1-3 left leg, 4-6 right leg; 7 spine; 8-10 left arm, 11-13
		// right arm, 14 neck, 15 head.
		{
			"a body",
			[]int{-1, 0, 1, 2, 0, 4, 5, 0, 7, 8, 9, 7, 11, 12, 7, 14},
			[]int{0, 1, 1, 1, 4, 4, 4, 0, 8, 8, 8, 11, 11, 11, 14, 14},
		},
	} {
		if d := cmp.Diff(c.want, limbsOf(c.parent)); d != "" {
			t.Errorf("%s: %s", c.name, d)
		}
	}
}

// A take that counts twice is as good as two takes: the sums of the bootstrap
// against those of copied takes.
func TestMomentsOfRepeatedTakes(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	draw := func(n int) []float64 {
		out := make([]float64, n*waves)
		for i := range out {
			out[i] = rng.NormFloat64()
		}
		return out
	}
	const takes = 7
	r := &readings{units: make([]unit, 3), labels: []string{"a", "b"}, blocks: 3}
	for range r.units {
		r.parts = append(r.parts, part{draw(takes), [2][]float64{draw(takes), draw(takes)}, draw(takes)})
	}
	r.parts[2].halves = [2][]float64{}
	for i, block := range []int{0, 0, 1, 1, 2, 2, 2} {
		r.rows = append(r.rows, row{label: i / 4, block: block})
	}
	times := []float64{2, 0, 1, 1, 0, 1, 2}

	copied := &readings{units: r.units, labels: r.labels, blocks: r.blocks, parts: make([]part, len(r.parts))}
	for i, n := range times {
		for range int(n) {
			copied.rows = append(copied.rows, r.rows[i])
			for u := range r.parts {
				from, to := &r.parts[u], &copied.parts[u]
				for _, x := range []struct{ dst, src *[]float64 }{
					{&to.timing, &from.timing}, {&to.shape, &from.shape}, {&to.halves[0], &from.halves[0]}, {&to.halves[1], &from.halves[1]},
				} {
					if *x.src != nil {
						*x.dst = append(*x.dst, (*x.src)[i*waves:(i+1)*waves]...)
					}
				}
			}
		}
	}
	for u := range copied.parts {
		p := &copied.parts[u]
		for _, x := range [][]float64{p.timing, p.shape, p.halves[0], p.halves[1]} {
			copied.centre(x)
		}
	}
	near := cmp.Comparer(func(a, b float64) bool { return math.Abs(a-b) < 1e-9 })
	got, want := r.moments(times), copied.moments(nil)
	if d := cmp.Diff(want, got, near, cmp.AllowUnexported(moments{}, unitMoments{})); d != "" {
		t.Error(d)
	}
}

// The mean over a step of the new clock, against a sum over many instants.
func TestOnClockIsTheMeanOfStraightPieces(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	take := &channels.Take{Layout: &channels.Layout{Channels: make([]channels.Channel, 2)}}
	at := 5.0
	for range 23 {
		at += 0.01 + rng.Float64()
		take.Time = append(take.Time, at)
		take.Data = append(take.Data, rng.NormFloat64(), 7)
	}
	for _, frames := range []int{5, 64} {
		got := onClock(take, take.Data, frames)
		step := take.Duration() / float64(frames-1)
		for i := range frames {
			const parts = 4000
			sum, n := 0.0, 0
			for k := range parts {
				x := take.Time[0] + step*(float64(i)-0.5+(float64(k)+0.5)/parts)
				if x >= take.Time[0] && x <= at {
					sum += slowRead(take, x)
					n++
				}
			}
			if d := math.Abs(got[2*i] - sum/float64(n)); d > 1e-3 {
				t.Errorf("%d frames: frame %d is off by %g", frames, i, d)
			}
			if d := math.Abs(got[2*i+1] - 7); d > 1e-12 {
				t.Errorf("%d frames: frame %d of a standing channel is off by %g", frames, i, d)
			}
		}
	}
}

func slowRead(t *channels.Take, x float64) float64 {
	for i := 1; i < t.Frames(); i++ {
		if x <= t.Time[i] {
			f := (x - t.Time[i-1]) / (t.Time[i] - t.Time[i-1])
			return t.Data[2*(i-1)] + f*(t.Data[2*i]-t.Data[2*(i-1)])
		}
	}
	return t.Data[len(t.Data)-2]
}

// The waves of a map that is a wave of delays are that wave, where all moves.
func TestWavesAreReadBack(t *testing.T) {
	v := make([]float64, clockFrames)
	for f := range v {
		v[f] = float64(f) // moves all along
	}
	u := make([]float64, clockFrames)
	for f := range u {
		u[f] = float64(f) / (clockFrames - 1)
	}
	r := newWaveReader(v, 1, u)
	for k := range waves {
		at := make([]float64, clockFrames)
		for f := range at {
			at[f] = float64(f) + 0.01*float64(clockFrames-1)*wave(k, u[f])
		}
		got := r.append(nil, at, 1, 1)
		for j, x := range got {
			// The preference for small waves takes a share of each.
			low, high := -2e-4, 2e-4
			if j == k {
				low, high = 0.004, 0.01
			}
			if x < low || x > high {
				t.Errorf("wave %d: %v", k, got)
			}
		}
	}
}

func TestHalvesSayAboutEquallyMuch(t *testing.T) {
	u := unit{channels: []int{0, 1, 2, 3, 4}}
	u.deal([]float64{1, 5, 3, 4, 2})
	if d := cmp.Diff([2][]int{{1, 4, 0}, {3, 2}}, u.halves); d != "" {
		t.Error(d)
	}
	one := unit{channels: []int{0}}
	if one.deal([]float64{1}); one.halves[0] != nil {
		t.Error("a single channel has halves")
	}
}

func TestSpearmanBrown(t *testing.T) {
	for _, c := range []struct{ both, one, other, want float64 }{
		{0.5, 1, 1, 2.0 / 3}, {1, 1, 1, 1}, {2, 1, 1, 1}, {-1, 1, 1, 0}, {1, 0, 1, 0}, {0.3, 0.25, 4, 0.46153846},
	} {
		if got := spearmanBrown(c.both, c.one, c.other); math.Abs(got-c.want) > 1e-8 {
			t.Errorf("%+v: %g", c, got)
		}
	}
}

func TestNeed(t *testing.T) {
	for _, c := range []struct {
		name   string
		blocks []int
		labels int
		half   float64
		takes  int
		p      float64
	}{
		{"nothing", nil, 0, 0, 11, 1},
		{"three takes", []int{3}, 1, 0, 11, 1.0 / 2},
		{"pairs of takes", []int{2, 2, 2}, 3, 0, 13, 1},
		{"enough", []int{30, 30}, 2, 0.2, 60, 0.001},
		{"a wide interval", []int{10, 10}, 2, 0.8, 74, 0.001},
	} {
		got := need(c.blocks, c.labels, c.half)
		if got.Takes != c.takes || math.Abs(got.SmallestP-c.p) > 1e-9 {
			t.Errorf("%s: %+v", c.name, got)
		}
	}
}
