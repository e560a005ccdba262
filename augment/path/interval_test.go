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

// Normal draws that correlate by ρ give intervals that correlate by ρ on the
// normal scale, and by 6/π·asin(ρ/2) on their own (Pearson, 1907: rank
// correlation of the bivariate normal distribution).
func TestCopulaIntervalsCorrelation(t *testing.T) {
	const v = 0.25
	rng := rand.New(rand.NewPCG(2, 1))
	for _, rho := range []float64{0, 0.3, 0.6, 1} {
		left := path.Gaussians(make([]float64, manyDraws), rng)
		right := path.Gaussians(make([]float64, manyDraws), rng)
		for i := range right {
			right[i] = rho*left[i] + math.Sqrt(1-rho*rho)*right[i]
		}
		path.CopulaIntervals(left, v)
		path.CopulaIntervals(right, v)
		checkIntervals(t, left, v)
		checkIntervals(t, right, v)
		limit := 5 / math.Sqrt(manyDraws)
		if r := correlation(normalScale(left, v), normalScale(right, v)); math.Abs(r-rho) > limit {
			t.Errorf("ρ = %v: normal-scale correlation %v", rho, r)
		}
		if r, want := correlation(left, right), 6/math.Pi*math.Asin(rho/2); math.Abs(r-want) > limit {
			t.Errorf("ρ = %v: correlation of intervals %v, want %v", rho, r, want)
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
// path runs backwards.
func TestCopulaIntervalsStayPositive(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		v := rapid.Float64Range(0, math.Nextafter(path.MaxSpread, 0)).Draw(t, "v")
		for _, x := range path.CopulaIntervals(rapid.SliceOf(rapid.Float64Range(-50, 50)).Draw(t, "normal"), v) {
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
	panics(t, "no room for the end", func() { path.Fractions(three, three) })
}
