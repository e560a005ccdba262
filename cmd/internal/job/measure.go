package job

import (
	"context"
	"io"

	"strandwise/augment/variation"
	"strandwise/channels/group"
)

// Measure measures how the plan's recorded training takes differ.
func (p *Plan) Measure(ctx context.Context, in io.Reader, progress Progress, notice func(string)) (*variation.Measured, error) {
	m, err := p.making()
	if err != nil {
		return nil, err
	}
	s, err := p.trainingSurvey(ctx, in, progress, notice)
	if err != nil {
		return nil, err
	}
	defer progress.End()
	progress.Begin("measuring", -1, "takes")
	known, err := m.learn(ctx, s.training(), &s.scales, thorough)
	if err != nil {
		return nil, err
	}
	addCoupling(known.Measured, known.Coupling)
	return known.Measured, nil
}

// trainingSurvey reads the plan's recordings once.
func (p *Plan) trainingSurvey(ctx context.Context, in io.Reader, progress Progress, notice func(string)) (*survey, error) {
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
	defer progress.End()
	s, err := look(ctx, counted(held.apply(r.Takes()), progress), mostScoredGrown, p.Seed, p.NoGesture)
	if err != nil {
		return nil, p.asUsage(err)
	}
	for _, n := range r.Notices() {
		notice(n)
	}
	return s, nil
}

// addCoupling keeps the coupling of limbs with the measured variation.
func addCoupling(m *variation.Measured, c *group.Coupling) {
	if c == nil || !c.Pooled.OK {
		return
	}
	m.Coupling = nil
	for _, pair := range c.Pooled.Pairs {
		m.Coupling = append(m.Coupling, variation.Coupling{A: pair.A, B: pair.B, Rho: pair.Rho, Low: pair.Low, High: pair.High, P: pair.P})
	}
}
