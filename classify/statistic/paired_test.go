package statistic_test

import (
	"fmt"
	"math"
	"math/big"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"

	"strandwise/classify/statistic"
)

func TestMcNemar(t *testing.T) {
	const relative = 1e-3 // the first value has four figures
	for _, c := range []struct {
		b, c int
		p    float64
	}{
		// Agresti, Categorical Data Analysis, approval ratings table (memory),
		// recomputed with scipy.stats.binomtest.
		{86, 150, 3.716e-5},
		{150, 86, 3.716e-5},
		// Binomial, exact: 2·(1 + 10)/2¹⁰.
		{1, 9, 0.021484375},
		{0, 0, 1},
		{4, 4, 1},
		{0, 1, 1},
	} {
		if p := statistic.McNemar(c.b, c.c); math.Abs(p/c.p-1) > relative {
			t.Errorf("McNemar(%d, %d) = %g, want %g", c.b, c.c, p, c.p)
		}
	}
	if p := statistic.McNemar(1, 9); math.Abs(p-0.021484375) > 1e-15 {
		t.Errorf("McNemar(1, 9) = %v, want 0.021484375", p)
	}
}

func TestMcNemarChiSquare(t *testing.T) {
	const half = 0.5e-3 // of the last figure printed
	for _, c := range []struct {
		b, c int
		want float64
	}{
		{86, 150, 17.356}, // Agresti, as above
		{150, 86, 17.356},
		{0, 0, 0},
		{3, 3, 0},
		{0, 4, 4}, // by the formula
	} {
		if got := statistic.McNemarChiSquare(c.b, c.c); math.Abs(got-c.want) > half {
			t.Errorf("chi-square of %d and %d is %g, want %g", c.b, c.c, got, c.want)
		}
	}
}

// exactMcNemar adds up binomial coefficients in whole numbers.
func exactMcNemar(b, c int) float64 {
	n, sum := int64(b+c), new(big.Int)
	for k := range int64(min(b, c)) + 1 {
		sum.Add(sum, new(big.Int).Binomial(n, k))
	}
	p, _ := new(big.Rat).SetFrac(sum, new(big.Int).Lsh(big.NewInt(1), uint(n))).Float64()
	return min(1, 2*p)
}

func TestMcNemarAgainstWholeNumbers(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		b, c := rapid.IntRange(0, 300).Draw(t, "b"), rapid.IntRange(0, 300).Draw(t, "c")
		if got, want := statistic.McNemar(b, c), exactMcNemar(b, c); math.Abs(got-want) > 1e-10*want {
			t.Fatalf("McNemar(%d, %d) = %g, exactly %g", b, c, got, want)
		}
	})
}

// TestSignFlipOfDarwin holds the test against its first use: the heights of 15
// pairs of maize plants, crossed and self-fertilised, in eighths of an inch.
// R. A. Fisher, The Design of Experiments (1935) section 21: 863 of the 2¹⁵ sums are at
// least as large as the one seen, 314 (memory); two-sided p is twice that.
func TestSignFlipOfDarwin(t *testing.T) {
	pairs := []int{49, -67, 8, 16, 6, 23, 28, 41, 14, 29, 56, 24, 75, 60, -48}
	if p, want := statistic.SignFlip(pairs), 2*863.0/32768; p != want {
		t.Errorf("p of Darwin's maize is %v, want %v", p, want)
	}
}

// plainSignFlip tries every combination of signs.
func plainSignFlip(differences []int) float64 {
	observed, extreme := 0, 0
	for _, d := range differences {
		observed += d
	}
	n := 1 << len(differences)
	for signs := range n {
		sum := 0
		for i, d := range differences {
			if signs>>i&1 == 1 {
				d = -d
			}
			sum += d
		}
		if max(sum, -sum) >= max(observed, -observed) {
			extreme++
		}
	}
	return float64(extreme) / float64(n)
}

func TestSignFlipAgainstEveryCombination(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		factor := rapid.IntRange(1, 4).Draw(t, "factor")
		differences := rapid.SliceOfN(rapid.IntRange(-9, 9), 0, 12).Draw(t, "differences")
		for i := range differences {
			differences[i] *= factor
		}
		if got, want := statistic.SignFlip(differences), plainSignFlip(differences); got != want {
			t.Fatalf("p of %v is %v, plainly %v", differences, got, want)
		}
	})
}

// TestSignFlipOfOnes has differences of 1 and −1, which is McNemar's test.
func TestSignFlipOfOnes(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		b, c := rapid.IntRange(0, 200).Draw(t, "b"), rapid.IntRange(0, 200).Draw(t, "c")
		var differences []int
		for range b {
			differences = append(differences, 1, 0)
		}
		for range c {
			differences = append(differences, -1)
		}
		if got, want := statistic.SignFlip(differences), exactMcNemar(b, c); math.Abs(got-want) > 1e-10*want {
			t.Fatalf("sign flip of %d and %d ones gives %g, McNemar %g", b, c, got, want)
		}
	})
}

func TestHolm(t *testing.T) {
	// By hand from the definition: 0.005·4, 0.01·3, 0.03·2, and 0.04·1, which
	// may not be below the one before.
	got := statistic.Holm([]float64{0.01, 0.04, 0.03, 0.005})
	if diff := cmp.Diff([]float64{0.03, 0.06, 0.06, 0.02}, got, cmpopts.EquateApprox(0, 1e-15)); diff != "" {
		t.Errorf("corrected p (-want +got):\n%s", diff)
	}
	if got := statistic.Holm([]float64{0.7, 0.2, 1}); !cmp.Equal(got, []float64{1, 0.6000000000000001, 1}) {
		t.Errorf("p above 1 after correction: %v", got)
	}
	if got := statistic.Holm(nil); len(got) != 0 {
		t.Errorf("no tests correct to %v", got)
	}
}

// TestHolmKeepsItsPlace checks what any such correction must do: raise no order
// of evidence, lower no p, and change nothing for a single test.
func TestHolmKeepsItsPlace(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := rapid.SliceOfN(rapid.Float64Range(0, 1), 1, 20).Draw(t, "p")
		got := statistic.Holm(p)
		for i := range p {
			if got[i] < p[i] || got[i] > 1 || len(p) == 1 && got[i] != p[i] {
				t.Fatalf("p %g becomes %g", p[i], got[i])
			}
			for j := range p {
				if p[i] < p[j] && got[i] > got[j] {
					t.Fatalf("p %g and %g become %g and %g", p[i], p[j], got[i], got[j])
				}
			}
		}
	})
}

func ExampleMcNemar() {
	// Synthetic takes mended 9 of the errors and caused 1 new one.
	fmt.Printf("p = %.4f\n", statistic.McNemar(9, 1))
	// Output: p = 0.0215
}

func ExampleSignFlip() {
	// In six random splits synthetic takes saved 4, 2, 5, 1, 3 and 2 errors.
	fmt.Printf("p = %.4f\n", statistic.SignFlip([]int{4, 2, 5, 1, 3, 2}))
	// Output: p = 0.0312
}

func BenchmarkSignFlip(b *testing.B) {
	differences := make([]int, 2000)
	for i := range differences {
		differences[i] = i%7 - 3
	}
	for b.Loop() {
		statistic.SignFlip(differences)
	}
	b.ReportMetric(float64(b.Elapsed().Microseconds())/float64(b.N), "µs/test")
}
