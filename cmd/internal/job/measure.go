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
	s, err := p.survey(ctx, in, mostScoredGrown, progress, notice)
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
