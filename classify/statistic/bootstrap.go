package statistic

import (
	"iter"
	"math/rand/v2"
	"slices"
)

// Weights says how often one resample holds each split and each unit. A test
// of a unit in a split counts as often as the product says.
type Weights struct {
	Split, Unit []float64
}

// Resamples yields the weights of the given number of bootstrap resamples: the
// splits drawn with replacement from all splits, and independently of them the
// units (takes, say, or people) from all units. The weights are valid until the
// next step. A single split is always drawn once.
//
// Tests of the same unit in several splits, and of several units in the same
// split, are alike; resampling both sides keeps that. A. B. Owen, "The
// pigeonhole bootstrap", Annals of Applied Statistics 1 (2007) 386–411, shows
// that the variance then errs, if at all, on the wide side. With one split it is the
// plain bootstrap of B. Efron, "Bootstrap methods: another look at the
// jackknife", Annals of Statistics 7 (1979) 1–26.
func Resamples(g *rand.Rand, splits, units, times int) iter.Seq[Weights] {
	return func(yield func(Weights) bool) {
		w := Weights{make([]float64, splits), make([]float64, units)}
		for range times {
			draw(g, w.Split)
			draw(g, w.Unit)
			if !yield(w) {
				return
			}
		}
	}
}

// draw fills the counts of as many draws with replacement as there are things
// to draw.
func draw(g *rand.Rand, counts []float64) {
	clear(counts)
	for range counts {
		counts[g.IntN(len(counts))]++
	}
}

// Percentile returns the interval, at the given level between 0 and 1, of a
// statistic from its values in resamples, which it sorts: those with (n + 1)α
// values at and beyond them on either side, rounded down, at least one, where
// 2α is what the level leaves. A. C. Davison, D. V. Hinkley, Bootstrap Methods
// and their Application (1997) section 5.3. Infinite values are legal and NaN
// is not; without values it panics.
func Percentile(values []float64, level float64) (low, high float64) {
	if len(values) == 0 {
		panic("statistic: no values to take percentiles of")
	}
	slices.Sort(values)
	// The tiny addition keeps 2000 × 0.025 at 50.
	k := max(1, int(float64(len(values)+1)*(1-level)/2+1e-9))
	return values[k-1], values[len(values)-k]
}
