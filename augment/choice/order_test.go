package choice_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/augment/choice"
)

func line(at ...float64) [][]float64 {
	var out [][]float64
	for _, v := range at {
		out = append(out, []float64{v})
	}
	return out
}

func TestOrders(t *testing.T) {
	for _, x := range []struct {
		name            string
		draws, recorded [][]float64
		order, farthest []int
	}{
		{"nothing", nil, line(0), []int{}, []int{}},
		{"one draw", line(3), line(0), []int{0}, []int{0}},
		{"a crowd and one far off", line(4, 5, 6, 9), line(0), []int{1, 3, 0, 2}, []int{3, 0, 2, 1}},
		{"several recorded takes", line(1, 4, 9, 16), line(0, 17), []int{2, 1, 0, 3}, []int{2, 1, 0, 3}},
		{"the first of equals", line(5, -5, 5, -5), line(0), []int{0, 1, 2, 3}, []int{0, 1, 2, 3}},
		{"no recorded take", line(2, 0, 10), nil, []int{0, 2, 1}, []int{0, 2, 1}},
		{"what is no number comes last", line(math.NaN(), 1, 2), line(0), []int{1, 2, 0}, []int{2, 1, 0}},
	} {
		if diff := cmp.Diff(x.order, choice.Order(x.draws, x.recorded)); diff != "" {
			t.Errorf("%s, by cover (-want +got):\n%s", x.name, diff)
		}
		if diff := cmp.Diff(x.farthest, choice.Farthest(x.draws, x.recorded)); diff != "" {
			t.Errorf("%s, the farthest first (-want +got):\n%s", x.name, diff)
		}
	}
}

// points draws points of whole numbers, so that distances are exact and ties
// happen.
func points(t *rapid.T, name string, least, most, width int) [][]float64 {
	value := rapid.Map(rapid.IntRange(-6, 6), func(i int) float64 { return float64(i) })
	return rapid.SliceOfN(rapid.SliceOfN(value, width, width), least, most).Draw(t, name)
}

// TestAgainstPlain holds both orders against ones that measure every distance
// and gain anew.
func TestAgainstPlain(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		draws, recorded := points(t, "draws", 0, 12, 3), points(t, "recorded", 1, 4, 3)
		if diff := cmp.Diff(plain(draws, recorded, spare), choice.Order(draws, recorded)); diff != "" {
			t.Errorf("by cover (-plain +order):\n%s", diff)
		}
		away := func(draws, chosen [][]float64, next []float64) float64 { return radius([][]float64{next}, chosen) }
		if diff := cmp.Diff(plain(draws, recorded, away), choice.Farthest(draws, recorded)); diff != "" {
			t.Errorf("the farthest first (-plain +order):\n%s", diff)
		}
	})
}

// plain orders draws by the worth of each next one.
func plain(draws, recorded [][]float64, worth func(draws, chosen [][]float64, next []float64) float64) []int {
	order, chosen := []int{}, slices.Clone(recorded)
	for range draws {
		best, most := -1, math.Inf(-1)
		for i, d := range draws {
			if slices.Contains(order, i) {
				continue
			}
			if w := worth(draws, chosen, d); w > most {
				best, most = i, w
			}
		}
		order, chosen = append(order, best), append(chosen, draws[best])
	}
	return order
}

// spare returns by how much the sum of distances is lowered by one more.
func spare(draws, chosen [][]float64, next []float64) float64 {
	sum := 0.0
	for _, d := range draws {
		if to := radius([][]float64{d}, [][]float64{next}); to < radius([][]float64{d}, chosen) {
			sum += radius([][]float64{d}, chosen) - to
		}
	}
	return sum
}

// radius returns the largest distance of a draw to the nearest centre.
func radius(draws, centres [][]float64) float64 {
	worst := 0.0
	for _, d := range draws {
		least := math.Inf(1)
		for _, c := range centres {
			sum := 0.0
			for k, v := range d {
				sum += (v - c[k]) * (v - c[k])
			}
			least = min(least, math.Sqrt(sum))
		}
		worst = max(worst, least)
	}
	return worst
}

// TestGonzalezBound checks the bound of the paper for every beginning of the
// order: no more than twice the least radius of as many draws as centres, which
// is found by trying them all.
func TestGonzalezBound(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		draws, recorded := points(t, "draws", 1, 8, 2), points(t, "recorded", 1, 2, 2)
		order := choice.Farthest(draws, recorded)
		best := make([]float64, len(draws)+1) // by number chosen
		for k := range best {
			best[k] = math.Inf(1)
		}
		for subset := range 1 << len(draws) {
			centres := slices.Clone(recorded)
			for i, d := range draws {
				if subset>>i&1 == 1 {
					centres = append(centres, d)
				}
			}
			k := len(centres) - len(recorded)
			best[k] = min(best[k], radius(draws, centres))
		}
		centres := slices.Clone(recorded)
		for k := 0; k <= len(order); k++ {
			if got := radius(draws, centres); got > 2*best[k]+1e-9 {
				t.Errorf("%d chosen leave a draw %g away; %g can be reached", k, got, best[k])
			}
			if k < len(order) {
				centres = append(centres, draws[order[k]])
			}
		}
	})
}

// Run with
//
//	go test -run '^$' -bench Order ./augment/choice
func BenchmarkOrder(b *testing.B) {
	g := rand.New(rand.NewPCG(1, 2))
	for _, n := range []int{32, 64, 256} {
		draws := make([][]float64, n)
		for i := range draws {
			draws[i] = make([]float64, 32*6)
			for k := range draws[i] {
				draws[i][k] = g.NormFloat64()
			}
		}
		b.Run(fmt.Sprintf("draws=%d/values=192", n), func(b *testing.B) {
			for b.Loop() {
				choice.Order(draws[1:], draws[:1])
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*n), "ns/take")
		})
	}
}

func ExampleOrder() {
	source := []float64{0, 0}
	draws := [][]float64{{1, 0}, {0, 2}, {1.1, 0}, {-3, 0}}
	fmt.Println(choice.Order(draws, [][]float64{source}), choice.Farthest(draws, [][]float64{source}))
	// Output: [3 0 1 2] [3 1 2 0]
}
