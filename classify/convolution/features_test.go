package convolution_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"sync"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/channels"
	"strandwise/classify/convolution"
)

func newKernels(t testing.TB, o convolution.Options, width int, seed uint64) *convolution.Kernels {
	t.Helper()
	k, err := convolution.New(o, width, rand.New(rand.NewPCG(seed, 1)))
	if err != nil {
		t.Fatal(err)
	}
	return k
}

func features(t testing.TB, k *convolution.Kernels, x *channels.Take) []float64 {
	t.Helper()
	f, err := k.Worker().Features(nil, x)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func TestSeedDecides(t *testing.T) {
	x := walks(1, 50, 3)[0]
	few := features(t, newKernels(t, convolution.Options{Kernels: 20}, 3, 1), x)
	again := features(t, newKernels(t, convolution.Options{Kernels: 20}, 3, 1), x)
	if !slices.Equal(few, again) {
		t.Error("the same seed gave other features")
	}
	if other := features(t, newKernels(t, convolution.Options{Kernels: 20}, 3, 2), x); slices.Equal(few, other) {
		t.Error("another seed gave the same features")
	}
	if many := features(t, newKernels(t, convolution.Options{}, 3, 1), x); len(many) != 600 || !slices.Equal(few, many[:40]) {
		t.Error("the first of 300 kernels are not those of 20")
	}
}

func TestWorkersAgree(t *testing.T) {
	takes := walks(24, 40, 4)
	k := newKernels(t, convolution.Options{Kernels: 30}, 4, 1)
	want := make([][]float64, len(takes))
	for i, x := range takes {
		want[i] = features(t, k, x)
	}
	got := make([][]float64, len(takes))
	var g sync.WaitGroup
	for first := range 4 {
		g.Go(func() {
			w := k.Worker()
			for i := first; i < len(takes); i += 4 {
				got[i], _ = w.Features(nil, takes[i])
			}
		})
	}
	g.Wait()
	if diff := cmp.Diff(want, got); diff != "" {
		t.Errorf("features by several workers (-want +got):\n%s", diff)
	}
}

func TestFeaturesFillsDestination(t *testing.T) {
	x := walks(1, 40, 2)[0]
	k := newKernels(t, convolution.Options{Kernels: 10}, 2, 1)
	w, dst := k.Worker(), make([]float64, k.Width())
	got, err := w.Features(dst, x)
	if err != nil || &got[0] != &dst[0] {
		t.Errorf("the destination is not what came back, %v", err)
	}
	if n := testing.AllocsPerRun(5, func() { w.Features(dst, x) }); n > 0 {
		t.Errorf("%g allocations per take, want none", n)
	}
	mustPanic(t, "short destination", func() { w.Features(dst[1:], x) })
}

// similarTolerance is how far features of a take may be from those of the same
// motion told otherwise.
const similarTolerance = 1e-9

func checkSimilar(t *testing.T, name string, want, got []float64) {
	t.Helper()
	for i := range want {
		if math.Abs(want[i]-got[i]) > similarTolerance {
			t.Errorf("%s: feature %d is %v, want %v", name, i, got[i], want[i])
			return
		}
	}
}

// TestUnitsCancel changes the unit and the origin of every channel.
func TestUnitsCancel(t *testing.T) {
	x := walks(1, 60, 3)[0]
	y := x.Clone()
	for i := range y.Data {
		y.Data[i] = 9.80665*float64(1+i%3)*y.Data[i] + 100*float64(i%3)
	}
	k := newKernels(t, convolution.Options{Kernels: 60}, 3, 1)
	checkSimilar(t, "z", features(t, k, x), features(t, k, y))
	raw := newKernels(t, convolution.Options{Kernels: 60, Normalise: convolution.AsIs}, 3, 1)
	if a, b := features(t, raw, x), features(t, raw, y); math.Abs(a[0]-b[0]) < 1 {
		t.Error("as they are, values in another unit give the same features")
	}
}

// TestClockCounts tells one motion, straight between knots, on two clocks.
func TestClockCounts(t *testing.T) {
	l := layoutOf(1)
	even, uneven := &channels.Take{ID: "even", Layout: l}, &channels.Take{ID: "uneven", Layout: l}
	height := func(at float64) float64 { return min(at, 3-at/2) } // knot at 2 s
	for _, at := range []float64{0, 1, 2, 3, 4, 5, 6} {
		even.Time, even.Data = append(even.Time, at), append(even.Data, height(at))
	}
	for _, at := range []float64{0, 0.1, 0.2, 0.3, 2, 2.5, 2.6, 6} {
		uneven.Time, uneven.Data = append(uneven.Time, 50+at), append(uneven.Data, height(at))
	}
	k := newKernels(t, convolution.Options{Kernels: 40, Length: 31, Normalise: convolution.AsIs}, 1, 1)
	checkSimilar(t, "uneven clock", features(t, k, even), features(t, k, uneven))
}

// TestStillChannel has a channel that does not change, at a value that
// rounding would disturb: it counts as zeros.
func TestStillChannel(t *testing.T) {
	l := layoutOf(2)
	at, zero := make([]float64, 2*37), make([]float64, 2*37)
	g := rand.New(rand.NewPCG(1, 3))
	for i := range 37 {
		v := g.NormFloat64()
		at[2*i], at[2*i+1] = v, 9.80665
		zero[2*i] = v
	}
	k := newKernels(t, convolution.Options{Kernels: 40}, 2, 1)
	checkSimilar(t, "still channel", features(t, k, take("zero", l, zero)), features(t, k, take("at", l, at)))
}

func TestFeaturesRefuses(t *testing.T) {
	l := layoutOf(2)
	w := newKernels(t, convolution.Options{Kernels: 5}, 2, 1).Worker()
	for text, x := range map[string]*channels.Take{
		"3 channels where the kernels read 2": take("wide", layoutOf(3), []float64{0, 0, 0, 1, 1, 1}),
		"not a finite number":                 take("hole", l, []float64{0, 0, math.NaN(), 1}),
		"channel c1 is 1e+200, too large":     take("huge", l, []float64{0, 0, 1, 1e200}),
		"constant":                            take("still", l, []float64{1, 1, 1, 1}),
		"at least 2":                          take("short", l, []float64{1, 1}),
		"no layout":                           {ID: "bare"},
	} {
		x.Where = "evening.csv:7"
		_, err := w.Features(nil, x)
		if err == nil || !strings.Contains(err.Error(), text) || !strings.Contains(err.Error(), "evening.csv:7: take "+x.ID) {
			t.Errorf("take %s: error %v does not say %q", x.ID, err, text)
		}
	}
	if _, err := w.Features(nil, take("fine", l, []float64{0, 0, 1e99, -1e99})); err != nil {
		t.Errorf("a large take: %v", err)
	}
}

func TestOptions(t *testing.T) {
	for _, c := range []struct {
		options convolution.Options
		says    string // part of the message, empty for valid options
	}{
		{convolution.Options{}, ""},
		{convolution.Options{Kernels: 1, Length: 11, Normalise: convolution.AsIs}, ""},
		{convolution.Options{Kernels: -1}, "kernels: -1 is below 0"},
		{convolution.Options{Length: 10}, "legal lengths are 11 and more"},
		{convolution.Options{Length: -64}, "length: -64"},
		{convolution.Options{Normalise: "Z"}, `unknown normalisation "Z"; legal names are z, none`},
		{convolution.Options{Kernels: -1, Normalise: "Z"}, "\nunknown normalisation"},
	} {
		err := c.options.Validate()
		if (err == nil) != (c.says == "") || err != nil && !strings.Contains(err.Error(), c.says) {
			t.Errorf("%+v: error %v, want it to say %q", c.options, err, c.says)
		}
		if _, made := convolution.New(c.options, 1, rand.New(rand.NewPCG(1, 1))); fmt.Sprint(made) != fmt.Sprint(err) {
			t.Errorf("%+v: New says %v", c.options, made)
		}
	}
	for _, n := range convolution.Normalisations() {
		if got, err := convolution.ParseNormalise(string(n)); got != n || err != nil {
			t.Errorf("%q is read as %q, %v", n, got, err)
		}
	}
	mustPanic(t, "no channel", func() { convolution.New(convolution.Options{}, 0, rand.New(rand.NewPCG(1, 1))) })
}

func mustPanic(t *testing.T, name string, f func()) {
	t.Helper()
	defer func() {
		if r := recover(); r == nil || !strings.HasPrefix(fmt.Sprint(r), "convolution: ") {
			t.Errorf("%s: panic %v", name, r)
		}
	}()
	f()
}
