package realism_test

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"hash/fnv"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"strandwise/channels"
	"strandwise/classify/realism"
)

// bows returns recorded takes of planar hand paths: ellipses that the label
// shapes, of a size, start and tilt that vary from take to take.
func bows(labels, each int) []*channels.Take {
	l := &channels.Layout{
		Channels: []channels.Channel{
			{Name: "hand.pos.x", Quantity: channels.Position, Unit: "m"}, {Name: "hand.pos.y", Quantity: channels.Position, Unit: "m"},
		},
		Groups: []channels.Group{{Name: "hand", Limb: "hand", Channels: []int{0, 1}}},
	}
	g := rand.New(rand.NewPCG(8, 9))
	var takes []*channels.Take
	for k := range labels {
		for i := range each {
			takes = append(takes, bow(l, k, fmt.Sprintf("bow%d_%d", k, i), g))
		}
	}
	return takes
}

func bow(l *channels.Layout, label int, id string, g *rand.Rand) *channels.Take {
	t := &channels.Take{ID: id, Label: fmt.Sprintf("bow%d", label), Layout: l}
	size, start := 1+0.2*g.NormFloat64(), 0.3*g.NormFloat64()
	for i := range 50 {
		at := start + 2*math.Pi*float64(i)/40
		t.Time = append(t.Time, float64(i)/50)
		t.Data = append(t.Data, size*math.Cos(at), size*float64(label+1)*0.3*math.Sin(at))
	}
	return t
}

func scalesOf(takes []*channels.Take) *channels.Scales {
	s := new(channels.Scales)
	for _, t := range takes {
		s.Add(t)
	}
	return s
}

// maker makes takes with a function, from a generator keyed by the source.
type maker func(source *channels.Take, draw int, g *rand.Rand) *channels.Take

func (m maker) Make(source *channels.Take, n int) ([]*channels.Take, error) {
	h := fnv.New64a()
	h.Write([]byte(source.ID))
	out := make([]*channels.Take, n)
	for k := range out {
		out[k] = m(source, k, rand.New(rand.NewPCG(h.Sum64(), uint64(k))))
		out[k].Made = &channels.Making{Source: source.ID, Draw: k}
	}
	return out, nil
}

// ideal draws from what recorded takes are drawn from.
var ideal maker = func(s *channels.Take, draw int, g *rand.Rand) *channels.Take {
	var label int
	fmt.Sscanf(s.Label, "bow%d", &label)
	return bow(s.Layout, label, fmt.Sprint(s.ID, "/", draw), g)
}

// shaken adds noise of a size to the source.
func shaken(size float64) maker {
	return func(s *channels.Take, draw int, g *rand.Rand) *channels.Take {
		t := s.Clone()
		for i := range t.Data {
			t.Data[i] += size * g.NormFloat64()
		}
		return t
	}
}

func measure(t *testing.T, takes []*channels.Take, m maker, o realism.Options) *realism.Report {
	t.Helper()
	r, err := realism.Measure(t.Context(), takes, scalesOf(takes), m, o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// small is a witness that is quick to train.
var small = realism.Options{Kernels: 40, PerTake: 2}

// TestIdealMaker checks that takes drawn as the recorded ones are look real by
// every figure.
func TestIdealMaker(t *testing.T) {
	r := measure(t, bows(3, 20), ideal, small)
	if r.Recorded != 60 || r.Synthetic != 120 || r.LeftOut != 0 || r.Shortfall != 0 || len(r.Labels) != 3 {
		t.Errorf("counts %+v", r)
	}
	if w := r.Spread.Wasserstein; w > 0.35 {
		t.Errorf("Wasserstein-1 of the spread is %g", w)
	}
	if r.Witness.Low > 0.5 || r.Together.Low > 0.5 || r.Together.Sources != 60 || r.Together.Tests != 240 {
		t.Errorf("witness %+v, together %+v", r.Witness, r.Together)
	}
	if p := r.PowerLaw; p.Paths != 60 || math.Abs(p.Recorded+1.0/3) > 1e-6 || math.Abs(p.Synthetic+1.0/3) > 1e-6 {
		t.Errorf("power law %+v", p)
	}
	if b := r.Band; math.Abs(b.Growth) > 0.5 {
		t.Errorf("band %+v", b)
	}
	if _, err := json.Marshal(r); err != nil {
		t.Error(err)
	}
}

// TestPoorMakers checks that the figures that should show a fault do.
func TestPoorMakers(t *testing.T) {
	takes := bows(3, 20)
	noisy := measure(t, takes, shaken(0.05), small)
	if noisy.Together.Low < 0.8 || noisy.Band.Growth < 1 || noisy.PowerLaw.Mean == 0 {
		t.Errorf("noise: together %+v, band %+v, power law %+v", noisy.Together, noisy.Band, noisy.PowerLaw)
	}
	var point maker = func(s *channels.Take, draw int, g *rand.Rand) *channels.Take { return takes[0].Clone() }
	if r := measure(t, takes[:20], point, small); r.Spread.Wasserstein < 0.3 {
		t.Errorf("all takes alike: spread %+v", r.Spread)
	}
	if r := measure(t, takes[:20], shaken(3), small); r.Spread.Wasserstein < 1 {
		t.Errorf("scattered takes: spread %+v", r.Spread)
	}
}

// TestCopiesCannotBeTold checks that the witness, whose folds keep a source and
// what is made from it together, is never right about copies more than by
// chance.
func TestCopiesCannotBeTold(t *testing.T) {
	r := measure(t, bows(2, 12), shaken(0), small)
	if r.Together.Accuracy != 0.5 || r.Witness.Accuracy != 0.5 {
		t.Errorf("copies are told by %+v, together %+v", r.Witness, r.Together)
	}
}

// TestCompare finds the part that gives takes away.
func TestCompare(t *testing.T) {
	takes := bows(2, 16)
	all, err := realism.Compare(t.Context(), takes, scalesOf(takes), []realism.Variant{
		{"whole", shaken(0.05)}, {"without noise", shaken(0)}, {"without nothing", shaken(0.05)},
	}, small)
	if err != nil {
		t.Fatal(err)
	}
	if got := realism.GivesAway(all); got != "without noise" {
		t.Errorf("%q gives takes away, of %+v", got, all)
	}
	if c := all[1].Accuracy; c.Mean > -0.3 || c.Error <= 0 || c.Error > 0.1 {
		t.Errorf("without noise: %+v", c)
	}
	if c := all[2].Accuracy; c != (realism.Change{}) {
		t.Errorf("the same maker differs by %+v", c)
	}
	if got := realism.GivesAway(all[:1]); got != "" {
		t.Errorf("of one maker %q gives takes away", got)
	}
}

// TestBounds checks that no more takes are looked at than asked for, and that
// what is missing is counted.
func TestBounds(t *testing.T) {
	o := small
	o.MostPerLabel = 6
	var none maker = shaken(0.1)
	r := measure(t, bows(2, 9), none, o)
	if r.Recorded != 12 || r.LeftOut != 6 || r.Synthetic != 24 {
		t.Errorf("%d takes looked at, %d left out, %d made", r.Recorded, r.LeftOut, r.Synthetic)
	}
	few, err := realism.Measure(t.Context(), bows(2, 2), scalesOf(bows(2, 2)), empty{}, small)
	if err != nil {
		t.Fatal(err)
	}
	if few.Shortfall != 8 || few.Witness != nil || few.Together != nil || few.Spread != nil || few.Band != nil || few.PowerLaw != nil {
		t.Errorf("nothing made: %+v", few)
	}
}

type empty struct{}

func (empty) Make(*channels.Take, int) ([]*channels.Take, error) { return nil, nil }

type failing struct{}

func (failing) Make(*channels.Take, int) ([]*channels.Take, error) {
	return nil, errors.New("no strings")
}

func TestFaults(t *testing.T) {
	takes := bows(1, 4)
	ended, end := context.WithCancel(t.Context())
	end()
	for _, x := range []struct {
		name  string
		ctx   context.Context
		takes []*channels.Take
		o     realism.Options
		want  string
	}{
		{"options", t.Context(), takes, realism.Options{Folds: 1, PerTake: -1}, "folds"},
		{"no takes", t.Context(), nil, small, "no recorded takes"},
		{"maker", t.Context(), takes, small, "make takes from bow0_0: no strings"},
		{"context", ended, takes, small, "canceled"},
	} {
		_, err := realism.Compare(x.ctx, x.takes, scalesOf(takes), []realism.Variant{{"strings", failing{}}}, x.o)
		if err == nil || !strings.Contains(err.Error(), x.want) {
			t.Errorf("%s: error %v", x.name, err)
		}
	}
}
