package variation_test

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"strandwise/augment/variation"
	"strandwise/channels"
	"strandwise/testdata/opendata"
)

// quick is options for tests that do not look at the figures closely.
func quick() variation.Options {
	o := variation.Default()
	o.Draws, o.Weights, o.Frames = 40, 20, 32
	return o
}

// layoutOf is a layout of one group per list of channel names.
func layoutOf(t testing.TB, groups ...[]string) *channels.Layout {
	l := &channels.Layout{}
	var list []channels.Group
	for g, names := range groups {
		group := channels.Group{Name: fmt.Sprint("group", g)}
		for _, name := range names {
			c, _ := channels.ParseHeader(name)
			group.Channels = append(group.Channels, len(l.Channels))
			l.Channels = append(l.Channels, c)
		}
		list = append(list, group)
	}
	l, err := l.WithGroups(list)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

// takeOf makes a take at 50 Hz whose channel c is value(c, u) at fraction u.
func takeOf(l *channels.Layout, label string, n, frames int, value func(c int, u float64) float64) *channels.Take {
	t := &channels.Take{ID: fmt.Sprint(label, "/", n), Label: label, Layout: l}
	for i := range frames {
		t.Time = append(t.Time, float64(i)/50)
		for c := range l.Channels {
			t.Data = append(t.Data, value(c, float64(i)/float64(frames-1)))
		}
	}
	return t
}

// measure measures takes by their own scales.
func measure(t testing.TB, o variation.Options, takes ...*channels.Take) *variation.Measured {
	t.Helper()
	scales := &channels.Scales{}
	for _, k := range takes {
		scales.Add(k)
	}
	m, err := variation.Measure(context.Background(), takes, scales, o)
	if err != nil {
		t.Fatal(err)
	}
	if err := m.Validate(); err != nil {
		t.Fatal(err)
	}
	return m
}

// waves are takes of two labels that differ in rate, size and noise.
func waves(t testing.TB) []*channels.Take {
	r := rand.New(rand.NewPCG(4, 4))
	l := layoutOf(t, []string{"left.accel.x", "left.accel.y", "left.accel.z"}, []string{"right.accel.x", "right.accel.y", "right.accel.z"})
	var takes []*channels.Take
	for k := range 8 {
		label := []string{"wave", "circle"}[k%2]
		size, bend := 1+0.2*r.NormFloat64(), 0.05*r.NormFloat64()
		takes = append(takes, takeOf(l, label, k, 60+r.IntN(30), func(c int, u float64) float64 {
			u += bend * math.Sin(math.Pi*u)
			return size*math.Sin(float64(1+c+k%2)*(2*u+float64(c))) + 0.02*r.NormFloat64()
		}))
	}
	return takes
}

// openSet returns the training takes of an open set with their channels grouped.
func openSet(t testing.TB, name string) []*channels.Take {
	var takes []*channels.Take
	var layout *channels.Layout
	for _, k := range opendata.Set(t, name) {
		if k.Split != channels.Train || k.Validate() != nil {
			continue
		}
		if layout == nil {
			var err error
			if layout, err = k.Layout.WithGroups(openGroups(name, len(k.Layout.Channels))); err != nil {
				t.Fatal(err)
			}
		}
		k.Layout = layout
		takes = append(takes, k)
	}
	return takes
}

func openGroups(name string, width int) []channels.Group {
	switch name {
	case "NATOPS": // joint positions of both sides
		return []channels.Group{
			{Name: "left", Channels: []int{0, 1, 2, 6, 7, 8, 12, 13, 14, 18, 19, 20}},
			{Name: "right", Channels: []int{3, 4, 5, 9, 10, 11, 15, 16, 17, 21, 22, 23}},
		}
	case "BasicMotions", "UTD_MHAD_inertial":
		return []channels.Group{{Name: "accel", Limb: "wrist", Channels: []int{0, 1, 2}}, {Name: "gyro", Limb: "wrist", Channels: []int{3, 4, 5}}}
	}
	g := channels.Group{Name: "all"}
	for c := range width {
		g.Channels = append(g.Channels, c)
	}
	return []channels.Group{g}
}
