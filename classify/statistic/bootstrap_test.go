package statistic_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/google/go-cmp/cmp"
	"gonum.org/v1/gonum/stat"

	"strandwise/classify/statistic"
)

func generator() *rand.Rand { return rand.New(rand.NewPCG(1, 2)) }

// values returns a statistic of every resample.
func values(splits, units, times int, f func(statistic.Weights) float64) []float64 {
	var out []float64
	for w := range statistic.Resamples(generator(), splits, units, times) {
		out = append(out, f(w))
	}
	return out
}

func sum(x []float64) float64 {
	s := 0.0
	for _, v := range x {
		s += v
	}
	return s
}

func TestResamplesDrawAsManyAsThereAre(t *testing.T) {
	n := 0
	for w := range statistic.Resamples(generator(), 3, 7, 50) {
		n++
		if len(w.Split) != 3 || len(w.Unit) != 7 || sum(w.Split) != 3 || sum(w.Unit) != 7 {
			t.Fatalf("resample %d draws %v and %v", n, w.Split, w.Unit)
		}
	}
	if n != 50 {
		t.Errorf("%d resamples, want 50", n)
	}
	for w := range statistic.Resamples(generator(), 1, 4, 20) {
		if w.Split[0] != 1 {
			t.Fatalf("the only split counts %g times", w.Split[0])
		}
	}
}

// TestBootstrapOfAMean checks the variance of a resampled mean against the
// exact one: the population variance over n, with Efron's plain bootstrap.
func TestBootstrapOfAMean(t *testing.T) {
	const n, times = 40, 20000
	g := generator()
	x := make([]float64, n)
	for i := range x {
		x[i] = g.ExpFloat64()
	}
	means := values(1, n, times, func(w statistic.Weights) float64 { return stat.Mean(x, w.Unit) })
	_, variance := stat.PopMeanVariance(x, nil)
	mean, got := stat.MeanVariance(means, nil)
	// A variance estimated from N normal values has a relative standard
	// deviation of √(2/N), 1 % here; means err by their own over √N.
	if want := variance / n; math.Abs(got/want-1) > 0.05 {
		t.Errorf("variance of the resampled mean is %g, want %g", got, want)
	}
	if want := stat.Mean(x, nil); math.Abs(mean-want) > 4*math.Sqrt(variance/n/times) {
		t.Errorf("resampled means average %g, want %g", mean, want)
	}
}

// TestPigeonholeVariance checks the variance of a resampled mean of an additive
// table x(s, u) = a(s) + b(u) against the exact one, the sum of the two plain
// bootstrap variances.
func TestPigeonholeVariance(t *testing.T) {
	const splits, units, times = 15, 25, 20000
	g := generator()
	a, b := make([]float64, splits), make([]float64, units)
	for i := range a {
		a[i] = g.NormFloat64()
	}
	for i := range b {
		b[i] = 2 * g.NormFloat64()
	}
	means := values(splits, units, times, func(w statistic.Weights) float64 {
		total := 0.0
		for s, ws := range w.Split {
			for u, wu := range w.Unit {
				total += ws * wu * (a[s] + b[u])
			}
		}
		return total / (splits * units)
	})
	_, va := stat.PopMeanVariance(a, nil)
	_, vb := stat.PopMeanVariance(b, nil)
	got := stat.Variance(means, nil)
	if want := va/splits + vb/units; math.Abs(got/want-1) > 0.05 {
		t.Errorf("variance of the resampled mean is %g, want %g", got, want)
	}
}

func TestResamplesRepeat(t *testing.T) {
	draw := func() []float64 {
		return values(4, 9, 30, func(w statistic.Weights) float64 { return w.Split[0] + 10*w.Unit[8] })
	}
	if a, b := draw(), draw(); !cmp.Equal(a, b) {
		t.Errorf("one seed draws %v and %v", a, b)
	}
	n := 0
	for range statistic.Resamples(generator(), 2, 2, 100) {
		if n++; n == 3 {
			break
		}
	}
}

func TestPercentile(t *testing.T) {
	count := func(n int) []float64 {
		out := make([]float64, n)
		for i := range out {
			out[i] = float64(n - i) // n … 1, to be sorted
		}
		return out
	}
	// (1999 + 1)·0.025 = 50: the 50th value from either end; Davison and
	// Hinkley (1997) section 5.3.
	for _, c := range []struct {
		n         int
		low, high float64
	}{{1999, 50, 1950}, {999, 25, 975}, {39, 1, 39}, {1, 1, 1}, {2, 1, 2}} {
		if low, high := statistic.Percentile(count(c.n), 0.95); low != c.low || high != c.high {
			t.Errorf("interval of 1 … %d is %g to %g, want %g to %g", c.n, low, high, c.low, c.high)
		}
	}
	mixed := append(count(98), math.Inf(-1), math.Inf(-1))
	if low, high := statistic.Percentile(mixed, 0.98); !math.IsInf(low, -1) || high != 98 {
		t.Errorf("interval with infinite values is %g to %g", low, high)
	}
}

func TestPercentileOfNothing(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("percentiles of no values did not panic")
		}
	}()
	statistic.Percentile(nil, 0.95)
}

func ExampleResamples() {
	// Errors on ten takes: how sure is the mean?
	errors := []float64{1, 0, 0, 1, 1, 0, 0, 0, 1, 0}
	var means []float64
	for w := range statistic.Resamples(rand.New(rand.NewPCG(1, 1)), 1, len(errors), 1999) {
		means = append(means, stat.Mean(errors, w.Unit))
	}
	low, high := statistic.Percentile(means, 0.95)
	fmt.Printf("error 0.4, 95 %% interval %.1f to %.1f\n", low, high)
	// Output: error 0.4, 95 % interval 0.1 to 0.7
}
