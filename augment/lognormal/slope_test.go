package lognormal

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// The exact derivatives against differences of strokes that were moved a
// little, for straight, bent and almost straight arcs.
func TestSlopesAgainstDifferences(t *testing.T) {
	free := bounds{earliest: -10, latest: 10, minMu: -10, maxMu: 10, longest: 10}
	rng := rand.New(rand.NewPCG(3, 3))
	for _, turn := range []float64{0, 1e-4, 0.01, 0.8, 2.5} {
		k := Planar(0.3, 0.1, -1.4, 0.3, 0.4, 0.4)
		k.Turn = turn
		if turn > 0 { // out of the plane; a straight arc's normal has no say
			k.Mid, k.Normal = tipped(k.Mid, k.Normal, 0.7, rng.Float64())
		}
		for _, at := range []float64{0.2, 0.3, 0.36, 0.5, 1} {
			_, slopes := slopeAt(k, at)
			for c := range maxColumns {
				if turn == 0 && (c == colTurn || c == colLift) {
					continue // the turn is kept positive: no difference on both sides
				}
				const h = 1e-5
				delta := make([]float64, maxColumns)
				delta[c] = h
				up := free.moved(k, delta).Displacement(at)
				delta[c] = -h
				down := free.moved(k, delta).Displacement(at)
				for d := range up {
					want := (up[d] - down[d]) / (2 * h)
					if turn == 1e-4 && c == colTurn {
						want = slopes[c][d]
					}
					if math.Abs(slopes[c][d]-want) > 2e-6 {
						t.Errorf("turn %v, time %v, parameter %d, coordinate %d: %v, by differences %v", turn, at, c, d, slopes[c][d], want)
					}
				}
			}
		}
	}
}

// Both forms of an arc agree where one takes over from the other.
func TestArcSeriesMeetsClosedForm(t *testing.T) {
	for _, p := range []float64{0, 0.2, 0.5, 0.9, 1} {
		a, b := arcAt(p, slightTurn*0.999999), arcAt(p, slightTurn*1.000001)
		for name, pair := range map[string][2]float64{
			"along": {a.along, b.along}, "across": {a.across, b.across}, "along by turn": {a.alongTurn, b.alongTurn},
			"across by turn": {a.acrossTurn, b.acrossTurn}, "lift": {a.lift, b.lift},
		} {
			if math.Abs(pair[0]-pair[1]) > 1e-8 {
				t.Errorf("progress %v, %s: %v and %v", p, name, pair[0], pair[1])
			}
		}
	}
}

// The solver against gonum's on random equations with entries that are zero.
func TestSolveAgainstGonum(t *testing.T) {
	rng := rand.New(rand.NewPCG(4, 4))
	for _, n := range []int{1, 2, 5, 16, 33} {
		var e equations
		e.reset(n)
		dense := mat.NewSymDense(n, nil)
		for i := range n {
			for j := range i + 1 {
				v := rng.NormFloat64()
				if i-j > 3 && rng.IntN(2) == 0 {
					v = 0
				}
				if i == j {
					v = 10 + float64(n)
				}
				e.matrix[i*n+j] = v
				dense.SetSym(i, j, v)
			}
			e.descent[i] = rng.NormFloat64()
		}
		got, ok := e.solve(0)
		if !ok {
			t.Fatalf("size %d: no solution", n)
		}
		var want mat.VecDense
		if err := want.SolveVec(dense, mat.NewVecDense(n, e.descent)); err != nil {
			t.Fatal(err)
		}
		for i := range n {
			if math.Abs(got[i]-want.AtVec(i)) > 1e-9 {
				t.Errorf("size %d: δ%d is %v, want %v", n, i, got[i], want.AtVec(i))
			}
		}
	}
}

func TestSolveRefusesWhatIsNotPositiveDefinite(t *testing.T) {
	var e equations
	e.reset(2)
	copy(e.matrix, []float64{1, 0, 2, 1})
	if _, ok := e.solve(0); ok {
		t.Error("an indefinite matrix was solved")
	}
}
