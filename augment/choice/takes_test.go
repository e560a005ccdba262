package choice_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/augment/choice"
	"strandwise/channels"
)

// planar is the layout of one hand in the plane.
var planar = &channels.Layout{
	Channels: []channels.Channel{{Name: "hand.pos.x", Quantity: channels.Position}, {Name: "hand.pos.y", Quantity: channels.Position}},
	Groups:   []channels.Group{{Name: "hand.pos", Limb: "hand", Channels: []int{0, 1}}},
}

// stroke returns a take along a way through the plane.
func stroke(id string, frames int, at func(u float64) (x, y float64)) *channels.Take {
	t := &channels.Take{ID: id, Label: "sweep", Layout: planar}
	for i := range frames {
		x, y := at(float64(i) / float64(frames-1))
		t.Time, t.Data = append(t.Time, float64(i)/50), append(t.Data, x, y)
	}
	return t
}

func scalesOf(takes ...*channels.Take) *channels.Scales {
	s := new(channels.Scales)
	for _, t := range takes {
		s.Add(t)
	}
	return s
}

// TestTakesSeeDirections checks that a draw which differs from the others in
// its directions, and hardly in its values, is among the first. By values alone
// it would be among the last.
func TestTakesSeeDirections(t *testing.T) {
	source := stroke("sweep", 64, func(u float64) (float64, float64) { return u, 0 })
	var draws []*channels.Take
	for k := range 8 {
		rise := 0.2 * float64(k+1) / 8
		draws = append(draws, stroke(fmt.Sprint("rise", k), 64, func(u float64) (float64, float64) { return u, rise * u }))
	}
	zigzag := len(draws)
	draws = append(draws, stroke("zigzag", 64, func(u float64) (float64, float64) { return u, 0.03 * math.Sin(40*u) }))
	order := choice.Takes(draws, []*channels.Take{source}, scalesOf(source))
	if at := slices.Index(order, zigzag); at > 2 {
		t.Errorf("the zigzag comes at place %d of %v", at, order)
	}
}

// TestTakesOrder checks that every draw comes once, whatever the number of
// draws and their lengths, and that units do not count.
func TestTakesOrder(t *testing.T) {
	g := rand.New(rand.NewPCG(3, 1))
	wander := func(id string, frames int, unit float64) *channels.Take {
		x, y := 0.0, 0.0
		return stroke(id, frames, func(float64) (float64, float64) {
			x, y = x+g.NormFloat64(), y+g.NormFloat64()
			return unit * x, unit * y
		})
	}
	for _, n := range []int{0, 1, 2, 5, 20} {
		source := wander("source", 30, 1)
		var draws, millimetres []*channels.Take
		for k := range n {
			d := wander(fmt.Sprint("draw", k), 20+k, 1)
			m := d.Clone()
			for i := range m.Data {
				m.Data[i] *= 1024 // exact
			}
			draws, millimetres = append(draws, d), append(millimetres, m)
		}
		order := choice.Takes(draws, []*channels.Take{source}, scalesOf(source))
		if sorted := slices.Sorted(slices.Values(order)); len(sorted) != n || n > 0 && (sorted[0] != 0 || sorted[n-1] != n-1) || len(slices.Compact(sorted)) != n {
			t.Errorf("order of %d draws: %v", n, order)
		}
		scaled := source.Clone()
		for i := range scaled.Data {
			scaled.Data[i] *= 1024
		}
		if diff := cmp.Diff(order, choice.Takes(millimetres, []*channels.Take{scaled}, scalesOf(scaled))); diff != "" {
			t.Errorf("%d draws in another unit (-metres +other):\n%s", n, diff)
		}
	}
}

// TestTakesAtRest checks that takes that never move and are all alike are no
// trouble.
func TestTakesAtRest(t *testing.T) {
	rest := stroke("rest", 10, func(float64) (float64, float64) { return 1, 1 })
	if diff := cmp.Diff([]int{0, 1}, choice.Takes([]*channels.Take{rest, rest}, []*channels.Take{rest}, scalesOf(rest))); diff != "" {
		t.Errorf("order (-want +got):\n%s", diff)
	}
}

// Run with
//
//	go test -run '^$' -bench Takes ./augment/choice
func BenchmarkTakes(b *testing.B) {
	g := rand.New(rand.NewPCG(1, 2))
	l := &channels.Layout{Groups: []channels.Group{{Name: "a", Channels: []int{0, 1, 2}}, {Name: "b", Channels: []int{3, 4, 5}}}}
	l.Channels = make([]channels.Channel, 6)
	for _, n := range []int{32, 64, 256} {
		takes := make([]*channels.Take, n+1)
		for i := range takes {
			takes[i] = &channels.Take{Layout: l}
			for k := range 128 {
				takes[i].Time = append(takes[i].Time, float64(k))
				for range 6 {
					takes[i].Data = append(takes[i].Data, g.NormFloat64())
				}
			}
		}
		scales := scalesOf(takes...)
		b.Run(fmt.Sprintf("draws=%d/frames=128/channels=6", n), func(b *testing.B) {
			for b.Loop() {
				choice.Takes(takes[1:], takes[:1], scales)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*n), "ns/take")
		})
	}
}
