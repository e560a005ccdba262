package job

import (
	"context"
	"io"
	"strings"

	"strandwise/augment"
	"strandwise/channels"
	"strandwise/classify"
)

// Bounds of a score: how many takes of each label and split are held, by the
// score command and by grow, and how many value-by-value comparisons grow
// spends on it before it makes do with fewer takes.
const (
	mostScored      = 2000
	mostScoredGrown = 64
	mostCompared    = 2.5e11
)

// Score scores the plan's recordings: recorded takes alone against recorded
// and synthetic ones, on takes kept out of both. When ctx ends, a report of
// what was done by then comes with the error.
func (p *Plan) Score(ctx context.Context, in io.Reader, progress Progress, notice func(string)) (*classify.Report, error) {
	o, err := p.scoring()
	if err != nil {
		return nil, err
	}
	methods, err := p.methods()
	if err != nil {
		return nil, err
	}
	r, err := p.open(in, strict)
	if err != nil {
		return nil, err
	}
	defer r.Close()
	held, err := p.holdOut(r.Takes())
	if err != nil {
		return nil, p.asUsage(err)
	}
	progress.Begin("reading", -1, "takes")
	s, err := look(ctx, counted(held.apply(r.Takes()), progress), mostScored, p.Seed, p.NoGesture)
	if err != nil {
		return nil, p.asUsage(err)
	}
	for _, n := range r.Notices() {
		notice(n)
	}
	return score(ctx, s, methods, o, progress)
}

// score scores the sample of a survey. What the protocol cannot do with these
// recordings is wrong usage.
func score(ctx context.Context, s *survey, methods []classify.Method, o classify.Options, progress Progress) (*classify.Report, error) {
	begun := 0
	defer progress.End()
	o.Rest = s.rest.Takes()
	return s.sample.Compare(ctx, methods, o, func(done, total int) {
		if begun == 0 {
			progress.Begin("scoring", int64(total), "templates")
		}
		progress.Step(int64(done - begun))
		begun = done
	})
}

// methods returns the plan's way of making takes, and when they are to be
// compared, all other methods at their published settings.
func (p *Plan) methods() ([]classify.Method, error) {
	v, err := p.variation()
	if err != nil {
		return nil, err
	}
	out := []classify.Method{p.method(strings.Join(p.Method, "+"), v)}
	for _, m := range augment.Methods() {
		if p.Compare && !(len(v.Blend) == 1 && v.Blend[0].Method == m) {
			out = append(out, p.method(string(m), augment.Published(m)))
		}
	}
	return out, nil
}

// method is a variation under a name. It fits a maker to a set of training
// takes.
func (p *Plan) method(name string, v augment.Variation) classify.Method {
	return classify.Method{Name: name, Fit: func(training []*channels.Take) (classify.Maker, error) {
		return augment.NewMaker(v, learn(training), p.Seed)
	}}
}

// learn returns what a maker is to know of these training takes, all of them.
func learn(takes []*channels.Take) augment.Training {
	t := augment.Training{Scales: new(channels.Scales), Takes: takes}
	for _, take := range takes {
		t.Scales.Add(take)
	}
	return t
}
