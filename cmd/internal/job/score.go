package job

import (
	"context"
	"errors"
	"io"

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

// variation is the method's default with the keys that were given.
func (p *Plan) variation() (augment.Variation, error) {
	method, err := augment.ParseMethod(p.Method)
	if err != nil {
		return augment.Variation{}, p.fault("method", "%v", err)
	}
	v := augment.Default(method)
	for key, set := range map[string]func(){
		"knots":      func() { v.Knots = p.Knots },
		"spread":     func() { v.Spread = p.Spread },
		"time_share": func() { v.TimeShare = p.TimeShare },
		"straighten": func() { v.Straighten = p.Straighten },
		"trim":       func() { v.Trim = p.Trim },
		"coupling":   func() { v.Coupling = p.Coupling },
	} {
		if p.given[key] {
			set()
		}
	}
	var outside *augment.RangeError
	if errors.As(v.Validate(), &outside) {
		return v, p.fault(outside.Field, "%s", outside.Problem)
	}
	return v, nil
}

// methods returns the plan's method of making takes, and when they are to be
// compared, all others at their defaults.
func (p *Plan) methods() ([]classify.Method, error) {
	v, err := p.variation()
	if err != nil {
		return nil, err
	}
	out := []classify.Method{p.method(v)}
	for _, m := range augment.Methods() {
		if p.Compare && m != v.Method {
			out = append(out, p.method(augment.Default(m)))
		}
	}
	return out, nil
}

// method is a variation under the name of its method. It fits a maker to a set
// of training takes.
func (p *Plan) method(v augment.Variation) classify.Method {
	return classify.Method{Name: string(v.Method), Fit: func(training []*channels.Take) (classify.Maker, error) {
		scales := new(channels.Scales)
		for _, t := range training {
			scales.Add(t)
		}
		return augment.NewMaker(v, scales, p.Seed)
	}}
}
