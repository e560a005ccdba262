package job

import (
	"context"
	"io"
	"strings"

	"strandwise/augment"
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
	making, err := p.making()
	if err != nil {
		return nil, err
	}
	s, err := p.survey(ctx, in, mostScored, progress, notice)
	if err != nil {
		return nil, err
	}
	return score(ctx, s, p.methods(making), o, progress)
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
// compared, all other methods as published.
func (p *Plan) methods(m *making) []classify.Method {
	out := []classify.Method{m.method(strings.Join(p.Method, "+"))}
	blend := m.variation.Blend
	for _, name := range augment.Methods() {
		if p.Compare && name != augment.Mirror && !(len(blend) == 1 && blend[0].Method == name) {
			out = append(out, m.published(name).method(string(name)))
		}
	}
	return out
}
