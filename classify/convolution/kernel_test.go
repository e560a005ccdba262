package convolution

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/channels"
)

func layoutFor(width int) *channels.Layout {
	return &channels.Layout{Channels: make([]channels.Channel, width)}
}

// impulses is a take of one channel per argument, which is 1 at that frame
// and 0 elsewhere.
func impulses(frames int, at ...int) *channels.Take {
	t := &channels.Take{ID: "impulses", Layout: layoutFor(len(at)), Data: make([]float64, frames*len(at))}
	for i := range frames {
		t.Time = append(t.Time, float64(i))
	}
	for c, i := range at {
		t.Data[i*len(at)+c] = 1
	}
	return t
}

// TestHandWorked holds features against ones worked out by hand. The response
// to an impulse is the weights backwards, plus the bias of −0.5.
func TestHandWorked(t *testing.T) {
	slope := []float64{-3, -2, -1, 0, 1, 2, 3}
	for _, c := range []struct {
		name     string
		kernel   kernel
		take     *channels.Take
		largest  float64
		positive float64
	}{
		// Frames 0 … 10 around the impulse: 0 0 3 2 1 0 −1 −2 −3 0 0.
		{"padded", kernel{taps: 7, dilation: 1, padded: true, channels: []int{0}, weights: slope}, impulses(11, 5), 2.5, 3. / 11},
		// Starts 0 … 4 see the impulse under taps 5 … 1: 2 1 0 −1 −2.
		{"inside", kernel{taps: 7, dilation: 1, channels: []int{0}, weights: slope}, impulses(11, 5), 1.5, 2. / 5},
		// Every other frame sees it: 3 · 2 · 1 · 0 · −1 · −2 · −3.
		{"dilated", kernel{taps: 7, dilation: 2, padded: true, channels: []int{0}, weights: slope}, impulses(13, 6), 2.5, 3. / 13},
		// Frame 2 gives half less half, which is not above zero.
		{"zero", kernel{taps: 7, dilation: 1, padded: true, channels: []int{0}, weights: []float64{-0.5, 0, 0, 0, 0, 0, 0.5}}, impulses(11, 5), 0, 0},
		// One start, the impulse under the last tap.
		{"one response", kernel{taps: 7, dilation: 2, channels: []int{0}, weights: slope}, impulses(13, 12), 2.5, 1},
		// The first channel read adds 0 0 3 2 1 0 −1 −2 −3 0 0, the second 0 0 10 −10 0 0 10 −10 0 0 0:
		// above 0.5 are frames 2, 4 and 6.
		{"two channels", kernel{taps: 7, dilation: 1, padded: true, channels: []int{0, 2},
			weights: append(slices.Clone(slope), -10, 10, 0, 0, -10, 10, 0)}, impulses(11, 5, 5, 4), 12.5, 3. / 11},
	} {
		frames := c.take.Frames()
		c.kernel.bias = -0.5
		c.kernel.place(frames)
		k := &Kernels{options: Options{Length: frames, Normalise: AsIs}, width: c.take.Width(), kernels: []kernel{c.kernel}}
		got, err := k.Worker().Features(nil, c.take)
		if err != nil {
			t.Fatal(err)
		}
		if diff := cmp.Diff([]float64{c.largest, c.positive}, got); diff != "" {
			t.Errorf("%s: features (-want +got):\n%s", c.name, diff)
		}
	}
}

// responseTolerance is how far sums in another order, of values about 1, may
// be apart.
const responseTolerance = 1e-9

// TestFeaturesAgreeWithPlain holds features of drawn kernels and takes against
// their definition.
func TestFeaturesAgreeWithPlain(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		o := Options{
			Kernels:   rapid.IntRange(1, 12).Draw(t, "kernels"),
			Length:    rapid.IntRange(11, 80).Draw(t, "length"),
			Normalise: rapid.SampledFrom(Normalisations()).Draw(t, "normalise"),
		}
		width := rapid.IntRange(1, 14).Draw(t, "width")
		g := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		k, err := New(o, width, g)
		if err != nil {
			t.Fatal(err)
		}
		take := drawTake(t, width)
		w := k.Worker()
		if _, err := w.Features(nil, drawTake(t, width)); err != nil { // leaves its traces in the scratch
			t.Fatal(err)
		}
		got, err := w.Features(nil, take)
		if err != nil {
			t.Fatal(err)
		}
		x := plainTake(o, take)
		for i, kernel := range k.kernels {
			z := plainResponses(kernel, x)
			if want := slices.Max(z); math.Abs(got[2*i]-want) > responseTolerance {
				t.Fatalf("kernel %d: largest response %v, want %v", i, got[2*i], want)
			}
			surely, perhaps := 0.0, 0.0
			for _, v := range z {
				if v > responseTolerance {
					surely++
				}
				if v > -responseTolerance {
					perhaps++
				}
			}
			n := float64(len(z))
			if p := got[2*i+1]; p < surely/n || p > perhaps/n {
				t.Fatalf("kernel %d: share above zero %v, want %v to %v", i, p, surely/n, perhaps/n)
			}
		}
	})
}

// drawTake draws a take on an uneven clock; values are thousandths.
func drawTake(t *rapid.T, width int) *channels.Take {
	frames := rapid.IntRange(2, 90).Draw(t, "frames")
	take := &channels.Take{ID: "drawn", Layout: layoutFor(width)}
	at := 0.0
	for range frames {
		at += float64(rapid.IntRange(1, 9).Draw(t, "interval"))
		take.Time = append(take.Time, at)
	}
	for range frames * width {
		take.Data = append(take.Data, float64(rapid.IntRange(-2000, 2000).Draw(t, "value"))/1000)
	}
	take.Data[0] = 3 // never constant
	return take
}

// TestKernelsStayInside draws kernels for every length of take.
func TestKernelsStayInside(t *testing.T) {
	g := rand.New(rand.NewPCG(1, 1))
	for frames := 11; frames <= 200; frames++ {
		for range 50 {
			k := draw(g, frames, 1+g.IntN(30))
			reach := (k.taps - 1) * k.dilation
			end := k.start + k.outputs - 1 + reach // place of the last tap of the last response
			if k.dilation < 1 || k.outputs < 1 || k.start < 0 || end >= frames+2*margin(frames) {
				t.Fatalf("%d frames: dilation %d, %d responses from %d to %d", frames, k.dilation, k.outputs, k.start, end)
			}
			if k.padded && k.outputs != frames || !k.padded && k.outputs != frames-reach {
				t.Fatalf("%d frames, padded %t: %d responses", frames, k.padded, k.outputs)
			}
			if n := len(k.channels); n < 1 || n > k.taps || len(k.weights) != n*k.taps {
				t.Fatalf("%d channels and %d weights of %d taps", n, len(k.weights), k.taps)
			}
			if !slices.IsSorted(k.channels) || len(slices.Compact(slices.Clone(k.channels))) != len(k.channels) {
				t.Fatalf("channels %v", k.channels)
			}
		}
	}
}

// TestDistributions checks what is drawn against the published distributions,
// each share and moment within five standard errors.
func TestDistributions(t *testing.T) {
	const n, frames, width = 20000, 64, 5
	g := rand.New(rand.NewPCG(1, 1))
	taps, dilations, counts, used := map[int]float64{}, map[int]float64{}, map[int]float64{}, map[int]float64{}
	var padded, bias, squareBias, weights, squares, several float64
	for range n {
		k := draw(g, frames, width)
		taps[k.taps]++
		counts[len(k.channels)]++
		for i, c := range k.channels {
			used[c]++
			sum := 0.0
			for _, w := range k.weights[i*k.taps : (i+1)*k.taps] {
				sum += w
				squares += w * w / (1 - 1/float64(k.taps)) // variance of a weight less the mean
				weights++
			}
			if math.Abs(sum) > 1e-12 {
				t.Fatalf("weights of channel %d add up to %g", c, sum)
			}
		}
		if k.padded {
			padded++
		}
		bias += k.bias
		squareBias += k.bias * k.bias
		if k.taps == 7 {
			dilations[k.dilation]++
			several++
		}
	}
	share := func(name string, got, of, want float64) {
		t.Helper()
		if se := math.Sqrt(want * (1 - want) / of); math.Abs(got/of-want) > 5*se {
			t.Errorf("share of %s is %.4f, want %.4f", name, got/of, want)
		}
	}
	for _, l := range lengths {
		share("a length", taps[l], n, 1./3)
	}
	share("padded", padded, n, 0.5)
	// ⌊2^u⌋ = m where log2 m ≤ u < log2(m + 1), of log2(63/6) and of log2(6).
	for _, m := range []float64{1, 2, 5, 9} {
		share("a dilation", dilations[int(m)], several, math.Log2((m+1)/m)/math.Log2(63./6))
	}
	for m := 1.; m <= 5; m++ {
		share("a number of channels", counts[int(m)], n, math.Log2((m+1)/m)/math.Log2(6))
	}
	for c := range used {
		if math.Abs(used[c]/used[0]-1) > 0.05 {
			t.Errorf("channel %d is used %g times, channel 0 %g times", c, used[c], used[0])
		}
	}
	moment := func(name string, got, want, se float64) {
		t.Helper()
		if math.Abs(got-want) > 5*se {
			t.Errorf("%s is %.4f, want %.4f", name, got, want)
		}
	}
	moment("mean bias", bias/n, 0, math.Sqrt(1./3/n))
	moment("mean squared bias", squareBias/n, 1./3, math.Sqrt(4./45/n))
	moment("variance of the weights", squares/weights, 1, math.Sqrt(2/weights)*1.2)
}
