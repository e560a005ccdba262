package variation

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"strandwise/channels"
)

func oneChannel() *channels.Layout {
	return &channels.Layout{Channels: []channels.Channel{{Name: "a"}}, Groups: []channels.Group{{Name: "a", Limb: "a", Channels: []int{0}}}}
}

func TestSubset(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 300).Draw(t, "n")
		k := rapid.IntRange(0, n).Draw(t, "k")
		got := subset(n, k, rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1)))
		if len(got) != k || !slices.IsSorted(got) || k > 0 && (got[0] < 0 || got[k-1] >= n) {
			t.Fatalf("%d of %d: %v", k, n, got)
		}
		if len(slices.Compact(slices.Clone(got))) != k {
			t.Fatalf("a number comes twice: %v", got)
		}
	})
}

// Pairs are of two takes, none comes twice, and bounds hold.
func TestChoose(t *testing.T) {
	var labels []label
	for _, n := range []int{1, 2, 5, 40} {
		labels = append(labels, label{takes: make([]*view, n)})
	}
	for _, c := range []struct {
		pairs, total int
		want         [4]int
	}{{400, 6000, [4]int{0, 2, 20, 400}}, {10, 6000, [4]int{0, 2, 10, 10}}, {400, 30, [4]int{0, 2, 10, 10}}, {400, 2, [4]int{0, 2, 2, 2}}} {
		o := Default()
		o.Pairs, o.Total = c.pairs, c.total
		var got [4]int
		seen := map[pair]bool{}
		for _, p := range choose(labels, o) {
			if p.a == p.b || seen[p] || max(p.a, p.b) >= len(labels[p.label].takes) {
				t.Fatalf("pair %+v", p)
			}
			seen[p] = true
			got[p.label]++
		}
		if got != c.want {
			t.Errorf("%+v: %v pairs", c, got)
		}
	}
}

func TestWeightedMedian(t *testing.T) {
	for _, c := range []struct {
		list []weighted
		want float64
	}{
		{[]weighted{{3, 1}, {1, 1}, {2, 1}}, 2},
		{[]weighted{{4, 1}, {1, 1}}, 2.5},
		{[]weighted{{1, 1}, {2, 5}, {3, 1}}, 2},
		{[]weighted{{1, 0.1}, {9, 5}}, 9},
		{[]weighted{{7, 2}}, 7},
	} {
		if got := weightedMedian(c.list); got != c.want {
			t.Errorf("%v: %v, want %v", c.list, got, c.want)
		}
	}
	if got := weightedMedian(nil); !math.IsNaN(got) {
		t.Errorf("of none: %v", got)
	}
}

func TestVectors(t *testing.T) {
	layout := func(names ...string) *channels.Layout {
		l := &channels.Layout{}
		for _, n := range names {
			c, _ := channels.ParseHeader(n)
			l.Channels = append(l.Channels, c)
		}
		return l
	}
	for _, c := range []struct {
		name string
		l    *channels.Layout
		list []int
		axes int
		want [][]int
	}{
		{"a sensor", layout("accel.x", "accel.y", "accel.z"), []int{0, 1, 2}, 3, [][]int{{0, 1, 2}}},
		{"in another order", layout("accel.z", "accel.x", "accel.y"), []int{0, 1, 2}, 3, [][]int{{1, 2, 0}}},
		{"two points", layout("hand.pos.x", "elbow.pos.x", "hand.pos.y", "elbow.pos.y", "hand.pos.z", "elbow.pos.z"), []int{0, 1, 2, 3, 4, 5}, 3, [][]int{{0, 2, 4}, {1, 3, 5}}},
		{"nothing known", layout("c0", "c1", "c2"), []int{0, 1, 2}, 3, [][]int{{0, 1, 2}}},
		{"nothing known of four", layout("c0", "c1", "c2", "c3"), []int{0, 1, 2, 3}, 3, nil},
		{"a quaternion", layout("quat_x", "quat_y", "quat_z", "quat_w"), []int{0, 1, 2, 3}, 3, nil},
		{"in the plane", layout("hand.pos.x", "hand.pos.y"), []int{0, 1}, 2, [][]int{{0, 1}}},
		{"in the plane, of three", layout("hand.pos.x", "hand.pos.y"), []int{0, 1}, 3, nil},
	} {
		if got := vectors(c.l, c.list, c.axes); !slices.EqualFunc(got, c.want, slices.Equal) {
			t.Errorf("%s: %v, want %v", c.name, got, c.want)
		}
	}
}
