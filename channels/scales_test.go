package channels_test

import (
	"math"
	"testing"

	"strandwise/channels"
)

// twoGroups is a layout of a two-channel group and a one-channel group.
func twoGroups(t *testing.T) *channels.Layout {
	l := &channels.Layout{Channels: []channels.Channel{{Name: "a"}, {Name: "b"}, {Name: "c"}}}
	l, err := l.WithGroups([]channels.Group{{Name: "ab", Channels: []int{0, 1}}, {Name: "c", Channels: []int{2}}})
	if err != nil {
		t.Fatal(err)
	}
	return l
}

func values(l *channels.Layout, data ...float64) *channels.Take {
	t := &channels.Take{ID: "values", Layout: l, Data: data, Time: make([]float64, len(data)/len(l.Channels))}
	for i := range t.Time {
		t.Time[i] = float64(i)
	}
	return t
}

func TestScalesKnownValues(t *testing.T) {
	l := twoGroups(t)
	// About their means 1 and 0 the channels a and b deviate by ±1 and ±2; c by
	// ±3 about 1000 in one take, ±1 about −5 in the other.
	one := values(l, 2, 2, 1003, 0, -2, 997)
	two := values(l, 2, 2, -4, 0, -2, -6)
	for _, c := range []struct {
		name  string
		takes []*channels.Take
		want  [2]float64
	}{
		{"no take", nil, [2]float64{1, 1}},
		{"one take", []*channels.Take{one}, [2]float64{math.Sqrt(2.5), 3}},
		{"pooled", []*channels.Take{one, two}, [2]float64{math.Sqrt(2.5), math.Sqrt(5)}},
		{"never moved", []*channels.Take{values(l, 0, 0, 0, 1, 0, 0)}, [2]float64{0.5 / math.Sqrt2, 1}},
		// The mean of ten times 0.1 is not 0.1 in binary.
		{"constant off zero", []*channels.Take{constant(l, 10, 0.1)}, [2]float64{1, 1}},
		{"too small to square", []*channels.Take{values(l, 0, 0, 0, 1e-170, 0, 1e-162)}, [2]float64{1, 1}},
	} {
		s := new(channels.Scales)
		for _, take := range c.takes {
			s.Add(take)
		}
		for g, want := range c.want {
			if got := s.RMS(g); math.Abs(got-want) > 1e-12 {
				t.Errorf("%s: group %d has size %v, want %v", c.name, g, got, want)
			}
		}
	}
}

func constant(l *channels.Layout, frames int, value float64) *channels.Take {
	data := make([]float64, frames*len(l.Channels))
	for i := range data {
		data[i] = value
	}
	return values(l, data...)
}
