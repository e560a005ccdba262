package augment

import (
	"slices"

	"strandwise/augment/gate"
	"strandwise/augment/variation"
	"strandwise/channels"
	"strandwise/channels/chart"
	"strandwise/channels/group"
)

// Training is what a maker knows of the takes that train. It is read-only once
// a maker has it.
type Training struct {
	Scales *channels.Scales // of every training take

	// Takes holds a bounded number of training takes of each label: those that
	// sources are mixed with. A source need not be among them.
	Takes []*channels.Take

	Chart chart.Options // bones and limits; whether feet are free is the variation's to say

	Measured *variation.Measured // how they differ; nil takes every size at its default
	Coupling *group.Coupling     // how limbs share their timing; nil takes them as one
	Gates    *gate.Gates         // what a draw must pass; nil lets everything pass
}

// ofLabel returns the takes of a label other than the given one.
func (t Training) ofLabel(label, not string) []*channels.Take {
	return slices.DeleteFunc(slices.Clone(t.Takes), func(take *channels.Take) bool {
		return take.Label != label || take.ID == not
	})
}

// scaled returns coordinates, frames × width, each part divided by the size of
// its group, so that parts of different units weigh alike. Angles are left in
// radians.
func (t Training) scaled(parts []chart.Part, values []float64, w int) []float64 {
	inverse := make([]float64, w)
	for _, part := range parts {
		size := 1.0
		if part.Scaled {
			size = t.Scales.RMS(part.Group)
		}
		for _, x := range part.Coordinates {
			inverse[x] = 1 / size
		}
	}
	out := make([]float64, len(values))
	for i, v := range values {
		out[i] = v * inverse[i%w]
	}
	return out
}
