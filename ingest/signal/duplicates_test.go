package signal_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"testing"

	"pgregory.net/rapid"

	"strandwise/ingest/signal"
	"strandwise/testdata/opendata"
)

// same is the plain rule: as many values, none further apart than rounding to
// four decimals puts two copies.
func same(a, b []float64) bool {
	if len(a) != len(b) {
		return false
	}
	for i := range a {
		if math.Abs(a[i]-b[i]) > 1.0001e-4 {
			return false
		}
	}
	return true
}

// deviation is the standard deviation of values about the mean of their
// channel, over all of them.
func deviation(data []float64, width int) float64 {
	square, n := 0.0, float64(len(data)/width)
	for c := range width {
		mean := 0.0
		for i := c; i < len(data); i += width {
			mean += data[i] / n
		}
		for i := c; i < len(data); i += width {
			square += (data[i] - mean) * (data[i] - mean)
		}
	}
	return math.Sqrt(square / float64(len(data)))
}

// In every open set, each take that is met again is found, whether as it was
// or saved with four decimals, and no other take is: the pairs are exactly
// those of a comparison of all values with all.
func TestDuplicatesOpenSets(t *testing.T) {
	for name, again := range map[string]int{"BasicMotions": 0, "Epilepsy": 1, "Libras": 30, "NATOPS": 0, "UWaveGestureLibrary": 0, "UTD_MHAD_inertial": 0} {
		takes := opendata.Set(t, name)
		width := takes[0].Width()
		var d signal.Duplicates
		found := 0
		for i, x := range takes {
			ref, ok := d.Add(uint64(i), x.Data, width)
			want := -1
			for j := i - 1; j >= 0; j-- {
				if same(takes[j].Data, x.Data) {
					want = j
				}
			}
			if ok {
				found++
			}
			if ok != (want >= 0) || ok && int(ref) != want {
				t.Errorf("%s: take %s is found to be take %d: %v; it is %d", name, x.ID, ref, ok, want)
			}
		}
		flat := 0
		for i, x := range takes {
			if deviation(x.Data, width) < 30e-4 { // said to be too flat for this
				flat++
				continue
			}
			ref, ok := d.Add(math.MaxUint64, rounded(x.Data, 1e-4), width)
			if !ok || !same(takes[ref].Data, rounded(x.Data, 1e-4)) {
				t.Errorf("%s: the rounded copy of take %d is found to be take %d: %v", name, i, ref, ok)
			}
		}
		t.Logf("%s: %d of %d takes come again, %d are flat", name, found, len(takes), flat)
		if found != again || flat > 1 {
			t.Errorf("%s: %d takes come again, want %d; %d are flat", name, found, again, flat)
		}
	}
}

// walk is a smooth invented take.
func walk(random *rand.Rand, n, width int, size float64) []float64 {
	out := make([]float64, n*width)
	for c := range width {
		v := random.NormFloat64()
		for i := range n {
			v = 0.98*v + 0.2*random.NormFloat64()
			out[i*width+c] = size * v
		}
	}
	return out
}

// Every rounded copy is found, and nothing near it is taken for a copy: not a
// take a hundredth off, not one shifted by a frame.
func TestDuplicatesFindCopies(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		random := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		n, width := rapid.IntRange(60, 300).Draw(t, "frames"), rapid.IntRange(1, 8).Draw(t, "width")
		size := rapid.SampledFrom([]float64{1, 10, 1000}).Draw(t, "size")
		place := rapid.SampledFrom([]float64{1e-4, 9.80665e-4}).Draw(t, "last decimal")
		decimal := make([]float64, width)
		for c := range decimal {
			decimal[c] = place
		}
		d := signal.Duplicates{Decimal: decimal}
		takes := make([][]float64, 20)
		for i := range takes {
			takes[i] = walk(random, n, width, size)
			if ref, ok := d.Add(uint64(i), takes[i], width); ok {
				t.Fatalf("take %d is found to be take %d", i, ref)
			}
		}
		for i, x := range takes {
			if ref, ok := d.Add(99, rounded(x, place), width); !ok || ref != uint64(i) {
				t.Fatalf("the rounded copy of take %d is found to be take %d: %v", i, ref, ok)
			}
		}
		off := made(len(takes[0]), func(i float64) float64 { return takes[0][int(i)] * 1.01 })
		if _, ok := d.Add(99, off, width); ok {
			t.Fatal("a take one per cent larger is found to be the same")
		}
		shifted := append(append([]float64{}, takes[0][width:]...), takes[0][:width]...)
		if _, ok := d.Add(98, shifted, width); ok {
			t.Fatal("a take one frame later is found to be the same")
		}
	})
}

// A take that hardly moves is only found again when nothing changed.
func TestDuplicatesOfFlatTakes(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 1))
	var d signal.Duplicates
	for i := range 200 {
		x := walk(random, 50, 3, 1e-4)
		if ref, ok := d.Add(uint64(i), x, 3); ok {
			t.Errorf("take %d is found to be take %d", i, ref)
		}
		if ref, ok := d.Add(999, x, 3); !ok || ref != uint64(i) {
			t.Errorf("take %d is not found again", i)
		}
	}
}

// BenchmarkDuplicates also measures what is kept of a take.
//
//	go test -bench Duplicates -run '^$' ./ingest/signal
func BenchmarkDuplicates(b *testing.B) {
	random := rand.New(rand.NewPCG(1, 2))
	base := walk(random, 100, 6, 1)
	x := make([]float64, len(base))
	var before, after runtime.MemStats
	runtime.GC()
	runtime.ReadMemStats(&before)
	var d signal.Duplicates
	i := 0
	for b.Loop() {
		i++
		for k, v := range base {
			x[k] = v * (1 + float64(i)/1000)
		}
		if _, ok := d.Add(uint64(i), x, 6); ok {
			b.Fatal("found")
		}
	}
	runtime.GC()
	runtime.ReadMemStats(&after)
	b.ReportMetric(float64(after.HeapAlloc-before.HeapAlloc)/float64(i), "bytes/take")
	b.ReportMetric(600*float64(i)/b.Elapsed().Seconds()/1e6, "Mvalues/s")
	runtime.KeepAlive(&d)
}

func BenchmarkDetectors(b *testing.B) {
	x := walk(rand.New(rand.NewPCG(1, 2)), 100, 6, 1)
	groups := [][]int{{0, 1, 2}, {3, 4, 5}}
	c := signal.NewClipping(6, groups)
	for name, f := range map[string]func(){
		"clipping": func() { c.Add(x) },
		"missing":  func() { signal.Missing(x, 6) },
		"rest":     func() { signal.AtRest(x, 6, [3]int{0, 1, 2}, 12) },
		"spikes":   func() { signal.Spikes(x, 6) },
		"stuck":    func() { signal.Stuck(x, 6, groups) },
	} {
		b.Run(name, func(b *testing.B) {
			for b.Loop() {
				f()
			}
			b.ReportMetric(600*float64(b.N)/b.Elapsed().Seconds()/1e6, "Mvalues/s")
		})
	}
}

func ExampleDuplicates() {
	var d signal.Duplicates
	names := []string{"wave.csv", "bow.csv", "copy of wave.csv"}
	for i, data := range [][]float64{{0, 1.23456, 3, 0.98765}, {2, 1, 1, 5}, {0, 1.2346, 3, 0.9877}} {
		if earlier, found := d.Add(uint64(i), data, 1); found {
			fmt.Println(names[i], "is", names[earlier])
		}
	}
	// Output: copy of wave.csv is wave.csv
}
