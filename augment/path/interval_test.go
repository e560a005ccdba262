package path_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"strandwise/augment/path"
)

// manyDraws is enough for the moments of a draw to be known to a thousandth.
const manyDraws = 1_000_000

// checkIntervals holds draws against U(1−√(3v), 1+√(3v)): its mean is 1 and its
// variance v by definition of the uniform distribution. A mean of N draws
// deviates by √(v/N), their variance by v·√(0.8/N) (the uniform distribution's
// kurtosis is 1.8) and their distribution function by 1.95/√N once in a
// thousand (Kolmogorov); five deviations are allowed for the moments.
func checkIntervals(t *testing.T, draws []float64, v float64) {
	t.Helper()
	n, half := float64(len(draws)), math.Sqrt(3*v)
	mean := sum(draws) / n
	variance := 0.0
	for _, x := range draws {
		variance += (x - mean) * (x - mean) / n
	}
	if limit := 5 * math.Sqrt(v/n); math.Abs(mean-1) > limit {
		t.Errorf("v = %v: mean %v, want 1 within %.2g", v, mean, limit)
	}
	if limit := 5 * v * math.Sqrt(0.8/n); math.Abs(variance-v) > limit {
		t.Errorf("v = %v: variance %v, want it within %.2g", v, variance, limit)
	}
	sorted := slices.Sorted(slices.Values(draws))
	if sorted[0] <= 0 || sorted[0] < 1-half || sorted[len(sorted)-1] > 1+half {
		t.Errorf("v = %v: draws from %v to %v, outside 1 ± %v", v, sorted[0], sorted[len(sorted)-1], half)
	}
	apart := 0.0
	for i, x := range sorted {
		apart = max(apart, math.Abs(float64(i)/n-(x-1+half)/(2*half)))
	}
	if limit := 1.95 / math.Sqrt(n); apart > limit {
		t.Errorf("v = %v: distribution %v away from the uniform one, want less than %.2g", v, apart, limit)
	}
}

func TestIntervalsDistribution(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	for _, v := range []float64{0.01, 0.25, 0.33} {
		checkIntervals(t, path.Intervals(make([]float64, manyDraws), v, rng), v)
	}
	if got := path.Intervals(make([]float64, 3), 0, rng); !slices.Equal(got, []float64{1, 1, 1}) {
		t.Errorf("v = 0 gives %v, want ones", got)
	}
}

func TestGaussiansMoments(t *testing.T) {
	draws := path.Gaussians(make([]float64, manyDraws), rand.New(rand.NewPCG(1, 1)))
	if mean := sum(draws) / manyDraws; math.Abs(mean) > 5/math.Sqrt(manyDraws) {
		t.Errorf("mean %v, want 0", mean)
	}
	if r := correlation(draws, draws); r != 1 {
		t.Errorf("correlation of draws with themselves is %v", r)
	}
	squares := 0.0
	for _, x := range draws {
		squares += x * x
	}
	if variance := squares / manyDraws; math.Abs(variance-1) > 5*math.Sqrt(2.0/manyDraws) {
		t.Errorf("variance %v, want 1", variance)
	}
}

// Two groups with the same shared draws correlate by ρ on the normal scale,
// and by 6/π·asin(ρ/2) on the scale of the uniform intervals (Pearson, 1907:
// rank correlation of the bivariate normal distribution).
func TestCoupledIntervalsCorrelation(t *testing.T) {
	const v = 0.25
	rng := rand.New(rand.NewPCG(2, 1))
	gaussians := func() []float64 { return path.Gaussians(make([]float64, manyDraws), rng) }
	for _, rho := range []float64{0, 0.3, 0.6, 1} {
		shared := gaussians()
		left := path.CoupledIntervals(make([]float64, manyDraws), v, rho, shared, gaussians())
		right := path.CoupledIntervals(make([]float64, manyDraws), v, rho, shared, gaussians())
		checkIntervals(t, left, v)
		checkIntervals(t, right, v)
		limit := 5 / math.Sqrt(manyDraws)
		if r := correlation(normalScale(left, v), normalScale(right, v)); math.Abs(r-rho) > limit {
			t.Errorf("ρ = %v: normal-scale correlation %v", rho, r)
		}
		if r, want := correlation(left, right), 6/math.Pi*math.Asin(rho/2); math.Abs(r-want) > limit {
			t.Errorf("ρ = %v: correlation of intervals %v, want %v", rho, r, want)
		}
		if rho == 1 && !slices.Equal(left, right) {
			t.Error("ρ = 1: the groups' intervals differ")
		}
	}
}

// normalScale undoes the copula: it returns the normal draw behind an interval.
func normalScale(intervals []float64, v float64) []float64 {
	out := make([]float64, len(intervals))
	for i, x := range intervals {
		out[i] = math.Sqrt2 * math.Erfinv((x-1)/math.Sqrt(3*v))
	}
	return out
}

func correlation(x, y []float64) float64 {
	mx, my := sum(x)/float64(len(x)), sum(y)/float64(len(y))
	var xx, yy, xy float64
	for i := range x {
		xx += (x[i] - mx) * (x[i] - mx)
		yy += (y[i] - my) * (y[i] - my)
		xy += (x[i] - mx) * (y[i] - my)
	}
	return xy / math.Sqrt(xx*yy)
}

// However far out the normal draws lie, an interval stays positive, so that no
// path runs backwards. dst may be the own draws.
func TestCoupledIntervalsStayPositive(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		v := rapid.Float64Range(0, math.Nextafter(path.MaxSpread, 0)).Draw(t, "v")
		rho := rapid.Float64Range(0, 1).Draw(t, "rho")
		n := rapid.IntRange(1, 20).Draw(t, "n")
		normal := rapid.SliceOfN(rapid.Float64Range(-50, 50), n, n)
		shared, own := normal.Draw(t, "shared"), normal.Draw(t, "own")
		apart := path.CoupledIntervals(make([]float64, n), v, rho, shared, own)
		inPlace := path.CoupledIntervals(own, v, rho, shared, own)
		near(t, "in place", inPlace, apart, 0)
		for _, x := range apart {
			if !(x > 0 && x <= 2) {
				t.Fatalf("interval %v", x)
			}
		}
	})
}

func TestFractionsRiseFromZeroToOne(t *testing.T) {
	near(t, "by hand", path.Fractions(make([]float64, 4), []float64{1, 2, 1}), []float64{0, 0.25, 0.75, 1}, 0)
	rapid.Check(t, func(t *rapid.T) {
		intervals := rapid.SliceOfN(rapid.Float64Range(1e-6, 2), 1, 300).Draw(t, "intervals")
		got := path.Fractions(make([]float64, len(intervals)+1), intervals)
		if got[0] != 0 || got[len(got)-1] != 1 {
			t.Fatalf("fractions run from %v to %v", got[0], got[len(got)-1])
		}
		for k := 1; k < len(got); k++ {
			if got[k] <= got[k-1] {
				t.Fatalf("fraction %d, %v, does not rise above %v", k, got[k], got[k-1])
			}
		}
	})
}

func TestIntervalMisuse(t *testing.T) {
	three := make([]float64, 3)
	panics(t, "too few shared draws", func() { path.CoupledIntervals(three, 0.1, 0, three[:2], three) })
	panics(t, "too few own draws", func() { path.CoupledIntervals(three, 0.1, 0, three, three[:2]) })
	panics(t, "no room for the end", func() { path.Fractions(three, three) })
}
