package job

import (
	"context"
	"fmt"
	"maps"
	"slices"
	"strings"

	"strandwise/augment"
	"strandwise/channels"
	"strandwise/classify"
	"strandwise/classify/realism"
	"strandwise/export"
)

// judge looks at what is made with training takes alone: whether it does harm
// to a label, and how much like recorded takes it is. It adds what it finds to
// the set, with the variation that was used. Recordings too few to look at are
// no fault: a notice says so.
func (g *growing) judge(ctx context.Context, w *export.Writer, s *survey, say func(string)) error {
	maker, err := augment.NewMaker(g.making.variation, g.known, g.plan.Seed)
	if err != nil {
		return err
	}
	var takes []*channels.Take
	for _, t := range s.sample.Takes() {
		if t.Split != channels.Test {
			takes = append(takes, t)
		}
	}
	if err := g.inner(ctx, takes, say); err != nil {
		return err
	}
	g.progress.Begin("judging", -1, "takes")
	report, err := realism.Measure(ctx, takes, &s.scales, maker, realism.Options{MostPerLabel: 12, Seed: g.plan.Seed})
	if err != nil {
		return fmt.Errorf("judge how real takes are: %w", err)
	}
	g.done.Realism = report
	addCoupling(g.known.Measured, g.known.Coupling)
	documents := map[string]any{"variation.json": g.known.Measured, "realism.json": report}
	if g.done.Harm != nil {
		documents["harm.json"] = g.done.Harm
	}
	for _, name := range slices.Sorted(maps.Keys(documents)) {
		if err := g.attach(w, name, documents[name]); err != nil {
			return err
		}
	}
	return g.page(ctx, w, s, maker)
}

// inner looks whether growing does harm, as far as there are takes to tell.
func (g *growing) inner(ctx context.Context, takes []*channels.Take, say func(string)) error {
	v := classify.Inner{Options: g.scoring}
	v.Options.PerTake = min(g.plan.PerTake, 16)
	cost, err := v.Cost(takes)
	if err != nil {
		say(fmt.Sprintf("not looked at whether growing does harm: %v", err))
		return nil
	}
	fit := g.making.method("").Fit
	g.progress.Begin(fmt.Sprintf("looking for harm in %d splits", cost.Splits), int64(cost.Takes*(cost.Splits-1)), "takes")
	begun := 0
	g.done.Harm, err = classify.DoNoHarm(ctx, takes, fit, v, func(done, total int) {
		g.progress.Step(int64(done - begun))
		begun = done
	})
	if err != nil {
		return fmt.Errorf("look whether growing does harm: %w", err)
	}
	if hurt := g.done.Harm.Spare(); len(hurt) > 0 {
		say(fmt.Sprintf("on training takes left out, growing hurts %s; leave a label as recorded with --spare %s", strings.Join(hurt, ", "), strings.Join(hurt, ",")))
	}
	return nil
}
