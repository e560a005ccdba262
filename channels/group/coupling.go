package group

import (
	"gonum.org/v1/gonum/mat"

	"strandwise/channels"
)

// Coupling says how far the limbs of a layout share their timing, measured
// from recorded takes.
//
// Every take is aligned to the medoid of its label, each limb by itself
// (package align); where persons are known and have several takes each, to the
// medoid of the label and person. What a limb's timing map has beyond the mean
// of these takes, in the recording's own time, is its timing residual. ρ of two
// limbs is the correlation of their timing residuals over takes and along the
// clock.
// It is no property of the gesture: two hands that do one gesture in one way
// have alike signals and yet, if each keeps its own time about it, ρ = 0.
type Coupling struct {
	Limbs  []string   `json:"limbs"`
	Pooled Estimate   `json:"pooled"` // over all labels
	Labels []Estimate `json:"labels"` // one each, in alphabetical order
}

// Estimate is what was measured on the takes of one label, or of all.
type Estimate struct {
	Label string `json:"label"` // empty for all labels together
	Takes int    `json:"takes"` // read: at most 40 of a label

	// People says that takes were compared within one person only, so that a
	// person's habits, which all limbs share, do not count as coupling. Where
	// the recordings do not tell people apart, they do count.
	People bool `json:"people"`

	Pairs []Pair `json:"pairs"` // every pair of limbs, by first and then second
	Need  Need   `json:"need"`
	OK    bool   `json:"ok"` // enough takes to tell, for every pair
}

// Pair says how far two limbs move together.
type Pair struct {
	A string `json:"a"`
	B string `json:"b"`

	// Rho is the correlation of the two's timing residuals, corrected for the
	// noise of alignment: divided by the square root of both reliabilities. Low
	// and High are its 95 % interval, by a percentile bootstrap over takes.
	Rho  float64 `json:"rho"`
	Low  float64 `json:"low"`
	High float64 `json:"high"`

	// Shape is the correlation of how much larger or smaller than usual the
	// two's movements are, after alignment and without any correction.
	Shape float64 `json:"shape"`

	// P is the permutation p-value of the hypothesis that the two are
	// independent, by the larger of the evidence of timing and of shape;
	// PTiming and PShape are those of either alone.
	P       float64 `json:"p"`
	PTiming float64 `json:"p_timing"`
	PShape  float64 `json:"p_shape"`

	// Reliability is the share of the variance of timing residuals that is no
	// noise of alignment, of A and of B, by comparing halves of the channels;
	// 1 for a limb of one channel, where it cannot be told.
	Reliability [2]float64 `json:"reliability"`

	OK bool `json:"ok"` // enough takes to tell
}

// MeasureCoupling measures how far the limbs of the takes' layout share their
// timing. The takes must share one layout; s scales its groups. The seed
// chooses the takes of labels that have more than 40, and the permutations and
// bootstrap samples: the same takes in the same order and the same seed give
// the same numbers.
//
// It never fails: where there are too few takes to tell, OK is false and Need
// says how many would do.
func MeasureCoupling(takes []*channels.Take, s *channels.Scales, seed uint64) *Coupling {
	if len(takes) == 0 {
		return &Coupling{Limbs: []string{}, Pooled: Estimate{Pairs: []Pair{}}, Labels: []Estimate{}}
	}
	return coupling(takes, limbUnits(takes[0].Layout), s, seed)
}

// coupling is [MeasureCoupling] for any units.
func coupling(takes []*channels.Take, units []unit, s *channels.Scales, seed uint64) *Coupling {
	r := read(takes, units, s, seed)
	r.weigh()
	c := &Coupling{Limbs: []string{}, Labels: []Estimate{}}
	for _, u := range units {
		c.Limbs = append(c.Limbs, u.name)
	}
	observed := r.moments(nil)
	tests := r.permute(seed)
	spread := r.bootstrap(seed)
	for k := range len(r.labels) + 1 { // the last is all labels
		e := r.estimate(k, observed, tests, spread)
		if k < len(r.labels) {
			e.Label = r.labels[k]
			c.Labels = append(c.Labels, e)
		} else {
			c.Pooled = e
		}
	}
	return c
}

// Matrix returns the correlations by which limbs share their timing, in the
// order of Limbs, for a Gaussian copula: those measured on the label where it
// has takes enough to tell, else on all labels. Limbs that run against each
// other count as independent. The pairs were measured one by one; the matrix
// is the [NearestCorrelation] of them. It is nil when there are too few takes
// to tell.
func (c *Coupling) Matrix(label string) *mat.SymDense {
	e := &c.Pooled
	for i := range c.Labels {
		if c.Labels[i].Label == label && c.Labels[i].OK {
			e = &c.Labels[i]
		}
	}
	if !e.OK {
		return nil
	}
	n := len(c.Limbs)
	a := mat.NewSymDense(n, nil)
	for i, k := 0, 0; i < n; i++ {
		a.SetSym(i, i, 1)
		for j := i + 1; j < n; j++ {
			a.SetSym(i, j, max(e.Pairs[k].Rho, 0))
			k++
		}
	}
	out, err := NearestCorrelation(a)
	if err != nil {
		panic("group: " + err.Error()) // the correlations measured are finite
	}
	return out
}
