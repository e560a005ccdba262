package augment_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"strandwise/augment"
	"strandwise/channels"
)

// sensorLayout is a layout of n three-axis sensors, turn by turn an
// accelerometer and a gyroscope, two to a limb.
func sensorLayout(t testing.TB, n int) *channels.Layout {
	t.Helper()
	l := new(channels.Layout)
	var groups []channels.Group
	for i := range n {
		limb, kind := fmt.Sprint("limb", i/2), "accel"
		if i%2 == 1 {
			kind = "gyro"
		}
		g := channels.Group{Name: limb + "." + kind, Limb: limb}
		for _, axis := range []string{"x", "y", "z"} {
			c, _ := channels.ParseHeader(g.Name + "." + axis)
			g.Channels = append(g.Channels, len(l.Channels))
			l.Channels = append(l.Channels, c)
		}
		groups = append(groups, g)
	}
	return grouped(t, l, groups...)
}

func grouped(t testing.TB, l *channels.Layout, groups ...channels.Group) *channels.Layout {
	t.Helper()
	out, err := l.WithGroups(groups)
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// wander is a take at 50 Hz whose channels are sums of three slow sines of
// their own, so that it is smooth and never rests.
func wander(l *channels.Layout, id string, frames int, seed uint64) *channels.Take {
	rng := rand.New(rand.NewPCG(seed, 99))
	w := len(l.Channels)
	t := &channels.Take{
		ID: id, Label: "wave", Subject: "p1", Session: "s1", Layout: l,
		Time: make([]float64, frames), Data: make([]float64, frames*w),
	}
	for i := range t.Time {
		t.Time[i] = float64(i) / 50
	}
	for c := range w {
		for k := 1; k <= 3; k++ {
			size, phase := rng.Float64()/float64(k), 2*math.Pi*rng.Float64()
			for i := range frames {
				t.Data[i*w+c] += size * math.Sin(phase+float64(2*k)*math.Pi*float64(i)/float64(frames))
			}
		}
	}
	return t
}

// training is what can be known of these takes without measuring them.
func training(takes ...*channels.Take) augment.Training {
	t := augment.Training{Scales: new(channels.Scales), Takes: takes}
	for _, take := range takes {
		t.Scales.Add(take)
	}
	return t
}

// maker returns a maker that knows the takes.
func maker(t testing.TB, v augment.Variation, seed uint64, takes ...*channels.Take) *augment.Maker {
	t.Helper()
	m, err := augment.NewMaker(v, training(takes...), seed)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// source makes the first of the takes ready, with a maker that knows them all.
func source(t testing.TB, v augment.Variation, seed uint64, takes ...*channels.Take) *augment.Source {
	t.Helper()
	s, err := maker(t, v, seed, takes...).Source(takes[0])
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// stream yields copies of the takes, as a reader hands over takes of its own.
func stream(takes ...*channels.Take) channels.Stream {
	return func(yield func(*channels.Take, error) bool) {
		for _, t := range takes {
			if !yield(t.Clone(), nil) {
				return
			}
		}
	}
}
