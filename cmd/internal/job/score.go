package job

import (
	"context"
	"errors"
	"io"

	"strandwise/augment"
	"strandwise/channels"
	"strandwise/classify"
	"strandwise/classify/template"
)

// Bounds of a score: how many takes of each label and split are held, by the
// score command and by grow, and how many value-by-value comparisons grow
// spends on it before it makes do with fewer takes.
const (
	mostScored      = 2000
	mostScoredGrown = 64
	mostCompared    = 2.5e11
)

// Score scores the plan's recordings: recorded templates alone against
// recorded and synthetic ones, on takes kept out of both.
func (p *Plan) Score(ctx context.Context, in io.Reader, progress Progress, notice func(string)) (*classify.Report, error) {
	o, err := p.scoring()
	if err != nil {
		return nil, err
	}
	fit, err := p.fit()
	if err != nil {
		return nil, err
	}
	r, err := p.open(in)
	if err != nil {
		return nil, err
	}
	defer r.Close()
	held, err := p.holdOut(r.Takes())
	if err != nil {
		return nil, p.asUsage(err)
	}
	progress.Begin("reading", -1, "takes")
	s, err := look(ctx, counted(held.apply(r.Takes()), progress), mostScored, p.Seed)
	if err != nil {
		return nil, p.asUsage(err)
	}
	for _, n := range r.Notices() {
		notice(n)
	}
	return score(ctx, s, fit, o, progress)
}

// score scores the sample of a survey. What the protocol cannot do with these
// recordings is wrong usage.
func score(ctx context.Context, s *survey, fit classify.Fit, o classify.Options, progress Progress) (*classify.Report, error) {
	begun := 0
	defer progress.End()
	return s.sample.Score(ctx, fit, o, func(done, total int) {
		if begun == 0 {
			progress.Begin("scoring", int64(total), "templates")
		}
		progress.Step(int64(done - begun))
		begun = done
	})
}

// scoring reads the keys that say how to score.
func (p *Plan) scoring() (classify.Options, error) {
	o := classify.Options{
		Band: p.Band, PerTake: p.PerTake, Method: p.Method,
		TakesPerLabel: p.TakesPerLabel, Seed: p.Seed, Workers: p.Workers,
	}
	if p.given["repeats"] {
		o.Repeats = p.Repeats
	}
	var err error
	if o.Protocol, err = classify.ParseProtocol(p.Protocol); err != nil {
		return o, p.fault("protocol", "%v", err)
	}
	if o.Normalise, err = template.ParseNormalise(p.Normalise); err != nil {
		return o, p.fault("normalise", "%v", err)
	}
	for _, name := range p.Distance {
		d, err := template.ParseDistance(name)
		if err != nil {
			return o, p.fault("distance", "%v", err)
		}
		o.Distances = append(o.Distances, d)
	}
	if len(o.Distances) == 0 {
		return o, p.fault("distance", "no distance is named")
	}
	if !(p.Band > 0 && p.Band <= 1) {
		return o, p.fault("band", "%g is not a fraction of the length; legal bands are above 0 and up to 1, the full window", p.Band)
	}
	return o, p.counts()
}

// counts checks the keys that are numbers of things.
func (p *Plan) counts() error {
	for _, k := range []struct {
		key         string
		value, from int
	}{
		{"per_take", p.PerTake, 0}, {"repeats", p.Repeats, 1}, {"takes_per_label", p.TakesPerLabel, 0}, {"workers", p.Workers, 1},
	} {
		if k.value < k.from {
			return p.fault(k.key, "%d is impossible; it must be %d or more", k.value, k.from)
		}
	}
	return nil
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

// fit returns how the variation of a set of training takes becomes a maker.
func (p *Plan) fit() (classify.Fit, error) {
	v, err := p.variation()
	if err != nil {
		return nil, err
	}
	return func(training []*channels.Take) (classify.Maker, error) {
		scales := new(augment.Scales)
		for _, t := range training {
			scales.Add(t)
		}
		return augment.NewMaker(v, scales, p.Seed)
	}, nil
}
