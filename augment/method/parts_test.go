package method_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
	"strandwise/augment/method"
)

// The path keeps its mean, and without scale and shift the length of every
// step: parts are only turned.
func TestPartsKeepMeanAndSteps(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := anyTake(t)
		p := method.Parts{
			Count: rapid.IntRange(1, 6).Draw(t, "count"), Angle: rapid.Float64Range(0, 1).Draw(t, "angle"),
			AtBends: rapid.Bool().Draw(t, "bends"),
		}
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		got := p.Apply(nil, k.src, k.width, k.time, rng)
		for c := range k.width {
			off := 0.0
			for i := c; i < len(got); i += k.width {
				off += got[i] - k.src[i]
			}
			if math.Abs(off) > 1e-8 {
				t.Fatalf("channel %d: the mean moved by %v", c, off)
			}
		}
		for i := 1; i < len(k.time); i++ {
			a, b := step(k.src, k.width, i), step(got, k.width, i)
			if math.Abs(a-b) > 1e-9 {
				t.Fatalf("the step to frame %d went from %v to %v", i, a, b)
			}
		}
	})
}

func step(v []float64, width, i int) float64 {
	sum := 0.0
	for c := range width {
		d := v[i*width+c] - v[(i-1)*width+c]
		sum += d * d
	}
	return math.Sqrt(sum)
}

// A path of three straight legs is cut at its two corners: each leg stays
// straight, and all of a leg turns by one angle.
func TestPartsCutAtBends(t *testing.T) {
	k := take{width: 2}
	at := [2]float64{}
	for i := range 61 {
		k.time = append(k.time, float64(i)/50)
		k.src = append(k.src, at[0], at[1])
		switch {
		case i < 20:
			at[0] += 0.1
		case i < 40:
			at[1] += 0.1
		default:
			at[0] -= 0.1
		}
	}
	p := method.Parts{Count: 3, Angle: 0.3, AtBends: true}
	got := p.Apply(nil, k.src, 2, k.time, rand.New(rand.NewPCG(3, 4)))
	heading := func(i int) float64 {
		return math.Atan2(got[2*i+1]-got[2*i-1], got[2*i]-got[2*i-2])
	}
	for i := 2; i <= 60; i++ {
		straight := math.Abs(math.Remainder(heading(i)-heading(i-1), 2*math.Pi)) < 1e-9
		if corner := i == 21 || i == 41; straight == corner {
			t.Errorf("step %d: turns by %v", i, heading(i)-heading(i-1))
		}
	}
}
