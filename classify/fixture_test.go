package classify_test

import (
	"fmt"
	"hash/fnv"
	"math/rand/v2"
	"testing"

	"strandwise/channels"
	"strandwise/classify"
)

// theatre returns invented takes of hand-height gestures: of each label one
// prototype path, of each subject one scale, and noise that grows with spread.
func theatre(labels, subjects, takesEach int, spread float64) []*channels.Take {
	const frames = 12
	g := rand.New(rand.NewPCG(3, 4))
	layout := &channels.Layout{Channels: []channels.Channel{
		{Name: "left_wrist.pos.z", Quantity: channels.Position, Unit: "m"},
		{Name: "right_wrist.pos.z", Quantity: channels.Position, Unit: "m"},
	}}
	paths := make([][]float64, labels)
	for l := range paths {
		paths[l] = make([]float64, frames*2)
		for i := range paths[l] {
			paths[l][i] = g.NormFloat64()
		}
	}
	var takes []*channels.Take
	for s := range subjects {
		scale := 1 + 0.3*g.NormFloat64()
		for l := range labels {
			for k := range takesEach {
				t := &channels.Take{
					ID: fmt.Sprintf("cue%d_puppeteer%d_%d", l, s, k), Label: fmt.Sprintf("cue%d", l),
					Subject: fmt.Sprintf("puppeteer%d", s), Session: fmt.Sprintf("evening%d", k%3), Layout: layout,
				}
				for i := range frames {
					t.Time = append(t.Time, float64(i)/50)
					for c := range 2 {
						t.Data = append(t.Data, scale*paths[l][2*i+c]+spread*g.NormFloat64())
					}
				}
				takes = append(takes, t)
			}
		}
	}
	return takes
}

// jitter makes takes by adding noise drawn from a generator keyed by the
// source's id.
type jitter struct{ size float64 }

func (j jitter) Make(source *channels.Take, n int) ([]*channels.Take, error) {
	h := fnv.New64a()
	h.Write([]byte(source.ID))
	g := rand.New(rand.NewPCG(h.Sum64(), 1))
	out := make([]*channels.Take, n)
	for d := range out {
		t := *source
		t.ID, t.Made = fmt.Sprintf("%s/%d", source.ID, d), &channels.Making{Source: source.ID, Draw: d}
		t.Data = append([]float64(nil), source.Data...)
		for i := range t.Data {
			t.Data[i] += j.size * g.NormFloat64()
		}
		out[d] = &t
	}
	return out, nil
}

// fitted returns a fit that always gives m.
func fitted(m classify.Maker) classify.Fit {
	return func([]*channels.Take) (classify.Maker, error) { return m, nil }
}

// makerFunc is a function as a maker.
type makerFunc func(source *channels.Take, n int) ([]*channels.Take, error)

func (f makerFunc) Make(source *channels.Take, n int) ([]*channels.Take, error) { return f(source, n) }

func mustScore(t *testing.T, takes []*channels.Take, fit classify.Fit, o classify.Options) *classify.Report {
	t.Helper()
	r, err := classify.Score(t.Context(), takes, fit, o, nil)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// withResults returns the results of one origin.
func withResults(r *classify.Report, origin string) []classify.Result {
	var out []classify.Result
	for _, x := range r.Results {
		if x.Origin == origin {
			out = append(out, x)
		}
	}
	return out
}
