package classify_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"strandwise/channels"
	"strandwise/classify"
	"strandwise/classify/template"
)

// impostor makes takes of one label from those of another, so that growing
// hurts the other, and copies of everything else.
func impostor(takes []*channels.Take, from, as string) classify.Maker {
	var stolen []*channels.Take
	for _, t := range takes {
		if t.Label == as {
			stolen = append(stolen, t)
		}
	}
	return makerFunc(func(source *channels.Take, n int) ([]*channels.Take, error) {
		var out []*channels.Take
		for k := range n {
			t := *source
			if source.Label == from {
				t.Data = stolen[k%len(stolen)].Data
			}
			t.Made = &channels.Making{Source: source.ID, Draw: k}
			out = append(out, &t)
		}
		return out, nil
	})
}

func doNoHarm(t *testing.T, takes []*channels.Take, fit classify.Fit, v classify.Inner) *classify.Harm {
	t.Helper()
	h, err := classify.DoNoHarm(t.Context(), takes, fit, v, nil)
	if err != nil {
		t.Fatal(err)
	}
	return h
}

// TestHarmIsFound grows takes of one label into the midst of another.
func TestHarmIsFound(t *testing.T) {
	takes := theatre(4, 1, 10, 0.3)
	v := classify.Inner{Options: classify.Options{Distances: []template.Distance{template.EuclideanDependent}, PerTake: 12}}
	h := doNoHarm(t, takes, fitted(impostor(takes, "cue2", "cue1")), v)
	if h.LeftOut != "takes" || len(h.Labels) != 4 {
		t.Fatalf("left out %s, %d labels", h.LeftOut, len(h.Labels))
	}
	for _, l := range h.Labels {
		want := classify.NoDifference
		if l.Label == "cue1" {
			want = classify.Hurts
		}
		if l.Finding != want || l.Tested != 10 || l.Recorded != 0 || l.Learner != "euclidean-dependent" {
			t.Errorf("%+v, want %s", l, want)
		}
	}
	if o := h.Overall[0]; len(h.Overall) != 1 || o.Label != "" || o.Tested != 40 || o.Finding != classify.Hurts {
		t.Errorf("over all labels: %+v", h.Overall)
	}
	if got := h.Spare(); !slices.Equal(got, []string{"cue1"}) {
		t.Errorf("spare %v", got)
	}
}

// TestHarmIsScore checks that the errors are those of the score by the same
// splits: whole subjects.
func TestHarmIsScore(t *testing.T) {
	takes := theatre(4, 5, 2, 1.5)
	o := classify.Options{Protocol: classify.Subject, PerTake: 3, Seed: 4}
	r := mustScore(t, takes, fitted(jitter{0.7}), o)
	h := doNoHarm(t, takes, fitted(jitter{0.7}), classify.Inner{Options: o})
	if h.LeftOut != "subjects" {
		t.Fatalf("left out %s", h.LeftOut)
	}
	for i, x := range withResults(r, classify.FromSynthetic) {
		for j, want := range x.PerLabel {
			got := h.Labels[i*len(x.PerLabel)+j]
			if got.Label != want.Label || got.Tested != want.Tested || got.Recorded != want.Recorded || got.Synthetic != *want.Synthetic {
				t.Errorf("%s: %+v, score %+v", x.Distance, got, want)
			}
			gain := float64(got.Recorded-got.Synthetic) / float64(got.Tested)
			if got.Gain != gain || !(got.Low <= gain && gain <= got.High) || got.P <= 0 || got.P > 1 {
				t.Errorf("%+v: gain %g", got, gain)
			}
		}
	}
}

// TestHarmCost checks the cost against what was done, and that it is bounded.
func TestHarmCost(t *testing.T) {
	takes := theatre(3, 1, 25, 1)
	v := classify.Inner{MostPerLabel: 8, Parts: 4, Options: classify.Options{PerTake: 5, Seed: 1}}
	want := classify.InnerCost{Takes: 24, Splits: 4, Made: 4 * 18 * 5, Pairs: 4 * 18 * 6 * 6}
	if got, err := v.Cost(takes); err != nil || got != want {
		t.Errorf("cost %+v, %v, want %+v", got, err, want)
	}
	fits, made, last := 0, 0, 0
	v.Options.Workers = 1
	h, err := classify.DoNoHarm(t.Context(), takes, func(training []*channels.Take) (classify.Maker, error) {
		fits++
		return makerFunc(func(source *channels.Take, n int) ([]*channels.Take, error) {
			made += n
			return jitter{0.1}.Make(source, n)
		}), nil
	}, v, func(done, total int) {
		if last++; done != last || total != 72 {
			t.Errorf("progress %d of %d at call %d", done, total, last)
		}
	})
	if err != nil {
		t.Fatal(err)
	}
	if h.Cost != want || fits != want.Splits || made != want.Made || last != 72 {
		t.Errorf("cost %+v, %d fits, %d made, %d steps", h.Cost, fits, made, last)
	}
}

// TestHarmOfSingleTakes checks that a label that cannot be left out is not
// tested, and that takes said to be test takes are looked at like others.
func TestHarmOfSingleTakes(t *testing.T) {
	takes := theatre(3, 1, 4, 0.2)
	takes = slices.DeleteFunc(takes, func(t *channels.Take) bool { return t.Label == "cue0" && t.ID != takes[0].ID })
	takes[0].Split = channels.Train
	h := doNoHarm(t, takes, fitted(jitter{0.1}), classify.Inner{})
	if l := h.Labels[0]; l.Label != "cue0" || l.Tested != 0 || l.Finding != classify.NoDifference || l.Low != -1 || l.High != 1 {
		t.Errorf("a label of one take: %+v", l)
	}
	if l := h.Labels[1]; l.Tested != 4 {
		t.Errorf("a label of four takes: %+v", l)
	}
	if takes[0].Split != channels.Train {
		t.Error("the split of a take was changed")
	}
	one := theatre(3, 1, 1, 1)
	if h := doNoHarm(t, one, fitted(jitter{0.1}), classify.Inner{}); len(h.Labels) != 0 || h.Spare() != nil || h.Cost.Splits != 0 {
		t.Errorf("one take per label: %+v", h)
	}
}

func TestHarmFaults(t *testing.T) {
	takes := theatre(2, 1, 4, 1)
	for _, x := range []struct {
		v     classify.Inner
		takes []*channels.Take
		want  string
	}{
		{classify.Inner{MostPerLabel: 1}, takes, "1 training takes per label"},
		{classify.Inner{Parts: 1}, takes, "1 parts"},
		{classify.Inner{Options: classify.Options{Band: 3}}, takes, "band"},
		{classify.Inner{}, nil, "no takes"},
		{classify.Inner{}, takes[:4], "every take is labelled"},
	} {
		if _, err := classify.DoNoHarm(t.Context(), x.takes, fitted(jitter{1}), x.v, nil); err == nil || !strings.Contains(err.Error(), x.want) {
			t.Errorf("%+v: error %v, want %q", x.v, err, x.want)
		}
	}
}

// TestPairedInterval checks that the interval of a paired difference holds the
// truth about as often as it says, at rates from rare to common and sizes from
// few to many, and has a width where nothing changes.
func TestPairedInterval(t *testing.T) {
	g := rand.New(rand.NewPCG(7, 7))
	const trials = 4000
	for _, n := range []int{5, 10, 40} {
		for _, rates := range [][3]float64{{0.1, 0.05, 0.05}, {0.3, 0.2, 0.05}, {0.05, 0.4, 0.1}, {0.2, 0.02, 0.3}} {
			held := 0
			for range trials {
				both, saved, caused := 0, 0, 0
				for range n {
					switch u := g.Float64(); {
					case u < rates[0]:
						both++
					case u < rates[0]+rates[1]:
						saved++
					case u < rates[0]+rates[1]+rates[2]:
						caused++
					}
				}
				low, high := classify.PairedInterval(n, both+saved, both+caused, both)
				if truth := rates[1] - rates[2]; low <= truth && truth <= high {
					held++
				}
			}
			if share := float64(held) / trials; share < 0.93 {
				t.Errorf("%d takes, rates %v: the interval holds the truth in %.1f %% of runs", n, rates, 100*share)
			}
		}
	}
	if low, high := classify.PairedInterval(10, 0, 0, 0); !(low < -0.1 && high > 0.1 && math.Abs(low+high) < 1e-12) {
		t.Errorf("nothing changed: %g to %g", low, high)
	}
}
