package augment

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"strandwise/augment/path"
	"strandwise/channels"
	"strandwise/channels/group"
)

// coupling ties the draws of the limbs of one take: a Gaussian copula, in which
// the standard normal draws of two limbs correlate by their ρ.
type coupling struct {
	maker *Maker
	take  string
	limbs []string
	// Measured limbs have a row of root, a square root of their correlations.
	// Others follow the draws all limbs share with a correlation of rho.
	root     *mat.SymDense
	measured []string
	rho      float64
}

// untold is the coupling of limbs of which there are too few takes to tell:
// halfway between limbs that share one timing and limbs that keep their own,
// neither of which did better on all sets. The limbs of a skeleton are one body
// and are taken as fully coupled.
const untold = 0.5

func (m *Maker) coupling(t *channels.Take, limbs []string) (*coupling, error) {
	c := &coupling{maker: m, take: t.ID, limbs: limbs, rho: 1}
	if m.variation.Coupling != nil {
		c.rho = *m.variation.Coupling
		return c, nil
	}
	if m.training.Coupling == nil || len(limbs) < 2 {
		return c, nil
	}
	correlations := m.training.Coupling.Matrix(t.Label)
	if correlations == nil {
		if t.Skeleton == nil {
			c.rho = untold
		}
		return c, nil
	}
	root, err := group.SquareRoot(correlations)
	c.root, c.measured = root, m.training.Coupling.Limbs
	return c, err
}

// normals returns n standard normal draws for each limb, the first limb's
// first. The same draw of the same take gives the same.
func (c *coupling) normals(draw, n int) map[string][]float64 {
	generate := func(key string) []float64 {
		return path.Gaussians(make([]float64, n), Generator(c.maker.seed, c.take, draw, key))
	}
	out := make(map[string][]float64, len(c.limbs))
	shared := generate("")
	var own [][]float64
	for _, limb := range c.measured {
		own = append(own, generate(limb))
	}
	for _, limb := range c.limbs {
		e := make([]float64, n)
		if at := slices.Index(c.measured, limb); at >= 0 {
			for k, other := range own {
				for i, x := range other {
					e[i] += c.root.At(at, k) * x
				}
			}
		} else {
			a, b, single := math.Sqrt(c.rho), math.Sqrt(1-c.rho), generate(limb)
			for i := range e {
				e[i] = a*shared[i] + b*single[i]
			}
		}
		out[limb] = e
	}
	return out
}
