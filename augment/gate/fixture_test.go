package gate_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"strandwise/augment/gate"
	"strandwise/channels"
	"strandwise/testdata/opendata"
)

// layout is that of points, each a group of three channels of a quantity.
func layout(q channels.Quantity, points int) *channels.Layout {
	l := &channels.Layout{}
	for p := range points {
		g := channels.Group{Name: fmt.Sprintf("point%d", p), Limb: "puppet"}
		for _, axis := range []string{"x", "y", "z"} {
			g.Channels = append(g.Channels, len(l.Channels))
			l.Channels = append(l.Channels, channels.Channel{
				Name: fmt.Sprintf("point%d.%s.%s", p, q.Word(), axis), Quantity: q, Component: axis, Unit: q.SI(),
			})
		}
		l.Groups = append(l.Groups, g)
	}
	return l
}

// waves returns a take of slow waves: each channel has a phase of its own that
// the label decides, and a size near 1.
func waves(l *channels.Layout, label int, id string, frames int, g *rand.Rand) *channels.Take {
	t := &channels.Take{ID: id, Label: fmt.Sprintf("cue%d", label), Layout: l}
	size := 1 + 0.1*g.NormFloat64()
	for i := range frames {
		t.Time = append(t.Time, float64(i)/50)
		for c := range l.Channels {
			angle := 2*math.Pi*float64(i)/float64(frames) + float64(1+label*(c+2))
			t.Data = append(t.Data, size*math.Sin(angle)+0.001*g.NormFloat64())
		}
	}
	return t
}

// theatre returns takes of several labels and their scales.
func theatre(l *channels.Layout, labels, each, frames int) ([]*channels.Take, *channels.Scales) {
	g := rand.New(rand.NewPCG(5, 6))
	var takes []*channels.Take
	for k := range labels {
		for i := range each {
			takes = append(takes, waves(l, k, fmt.Sprintf("cue%d_%d", k, i), frames, g))
		}
	}
	return takes, scalesOf(takes)
}

func scalesOf(takes []*channels.Take) *channels.Scales {
	s := new(channels.Scales)
	for _, t := range takes {
		s.Add(t)
	}
	return s
}

func fit(t testing.TB, takes []*channels.Take, o gate.Options) *gate.Gates {
	t.Helper()
	g, err := gate.Fit(takes, scalesOf(takes), o)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

// openSet is an open set with the quantities, groups and rate of SOURCES.md;
// where no rate is known it is one that leaves the cut at half of the band.
type openSet struct {
	name     string
	rate     float64 // Hz
	quantity []channels.Quantity
	size     int // channels of a group
}

var openSets = []openSet{
	{"BasicMotions", 10, []channels.Quantity{channels.Acceleration, channels.AngularRate}, 3},
	{"Epilepsy", 16, []channels.Quantity{channels.Acceleration}, 3},
	{"Libras", 20, []channels.Quantity{channels.Position}, 2},
	{"NATOPS", 20, slices.Repeat([]channels.Quantity{channels.Position}, 8), 3},
	{"UTD_MHAD_inertial", 50, []channels.Quantity{channels.Acceleration, channels.AngularRate}, 3},
	{"UWaveGestureLibrary", 20, []channels.Quantity{channels.Acceleration}, 3},
}

// read reads the set and lays its groups over it.
func (s openSet) read(t testing.TB) []*channels.Take {
	takes := opendata.Set(t, s.name)
	l := takes[0].Layout
	for i, q := range s.quantity {
		g := channels.Group{Name: fmt.Sprint("group", i), Limb: "limb"}
		for c := i * s.size; c < (i+1)*s.size; c++ {
			g.Channels = append(g.Channels, c)
			l.Channels[c].Quantity = q
		}
		l.Groups = append(l.Groups, g)
	}
	for n, take := range takes {
		take.ID = fmt.Sprint(n)
		for i := range take.Time {
			take.Time[i] = float64(i) / s.rate
		}
	}
	return takes
}

// drawn deals the takes into k training takes of each label and at most rest
// others.
func drawn(takes []*channels.Take, k, rest int, seed uint64) (training, held []*channels.Take) {
	g := rand.New(rand.NewPCG(seed, 1))
	taken := make(map[string]int)
	for _, i := range g.Perm(len(takes)) {
		t := takes[i]
		switch {
		case taken[t.Label] < k:
			taken[t.Label]++
			training = append(training, t)
		case len(held) < rest:
			held = append(held, t)
		}
	}
	return training, held
}
