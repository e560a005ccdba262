package lognormal_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"
	"strandwise/augment/lognormal"
)

func TestPerturbationStaysInItsRanges(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		width := rapid.IntRange(1, 3).Draw(t, "width")
		m, clock := drawModel(width, rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "model"), 1)))
		size := rapid.Float64Range(0, 0.9)
		p := lognormal.Perturbation{D: size.Draw(t, "D"), T0: size.Draw(t, "T0"), Mu: size.Draw(t, "Mu"), Sigma: size.Draw(t, "Sigma"), Angle: size.Draw(t, "Angle")}
		seed := rapid.Uint64().Draw(t, "seed")
		got := p.Draw(m, rand.New(rand.NewPCG(seed, 2)))
		const slack = 1e-9
		for j, k := range got.Strokes {
			was := m.Strokes[j]
			if !(k.D > 0) || math.Abs(k.D/was.D-1) > p.D+slack || math.Abs(k.T0-was.T0) > p.T0+slack ||
				math.Abs(k.Mu-was.Mu) > p.Mu+slack || math.Abs(k.Sigma/was.Sigma-1) > p.Sigma+slack {
				t.Fatalf("stroke %d left its ranges: %+v from %+v", j, k, was)
			}
			if math.Abs(length(k.Mid)-1) > slack || math.Abs(length(k.Normal)-1) > slack || math.Abs(inner(k.Mid, k.Normal)) > slack {
				t.Fatalf("stroke %d: axes %v and %v are not at right angles", j, k.Mid, k.Normal)
			}
			if width == 2 {
				s0, e0 := was.Angles()
				s1, e1 := k.Angles()
				for _, off := range []float64{s1 - s0, e1 - e0} {
					if math.Abs(math.Remainder(off, 2*math.Pi)) > p.Angle+1e-6 {
						t.Fatalf("stroke %d: a direction moved by %v", j, off)
					}
				}
			}
			if width < 3 && (k.Mid[2] != 0 || k.Normal[2] != 0) {
				t.Fatalf("stroke %d left the plane", j)
			}
		}
		path := p.Synthesise(nil, m, clock, rand.New(rand.NewPCG(seed, 2)))
		if !slices.Equal(path, got.Path(nil, clock)) {
			t.Fatal("the same generator gives two paths")
		}
		for c := range width {
			if path[c] != m.Start[c] {
				t.Fatal("the path does not start where the source does")
			}
		}
	})
}

func TestNoPerturbationIsTheModel(t *testing.T) {
	for width := 1; width <= 3; width++ {
		m, clock := drawModel(width, rand.New(rand.NewPCG(3, uint64(width))))
		got := lognormal.Perturbation{}.Synthesise(nil, m, clock, rand.New(rand.NewPCG(1, 1)))
		if !slices.Equal(got, m.Path(nil, clock)) {
			t.Errorf("width %d: a perturbation of nothing moved the path", width)
		}
	}
}

// In space the directions move by no more than the angle in the plane of the
// arc and the tip of that plane together.
func TestPerturbedDirectionsInSpace(t *testing.T) {
	m, _ := drawModel(3, rand.New(rand.NewPCG(8, 8)))
	p := lognormal.Perturbation{Angle: 0.1}
	rng := rand.New(rand.NewPCG(9, 9))
	moved := 0.0
	for range 200 {
		for j, k := range p.Draw(m, rng).Strokes {
			off := angle(k.Mid, m.Strokes[j].Mid)
			if off > 0.2+1e-9 {
				t.Fatalf("direction half-way moved by %v rad", off)
			}
			moved = max(moved, off)
		}
	}
	if moved < 0.05 {
		t.Errorf("directions moved by %v rad at most", moved)
	}
}
