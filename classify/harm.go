package classify

import (
	"cmp"
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"strandwise/channels"
	"strandwise/classify/statistic"
)

// Inner says how to look, with recorded training takes alone, whether growing
// does harm. Its zero value is the default.
type Inner struct {
	MostPerLabel int // training takes looked at per label; 0 is 10
	Parts        int // parts the takes are dealt into, each left out once; 0 is 5

	// Options of the score behind it: learners, distances, normalisation, band,
	// weights, synthetic takes per recorded one (0 is 16), seed and workers.
	// What it says of protocols and splits does not count.
	Options Options
}

// Defaults of an inner validation.
const (
	defaultInnerTakes   = 10
	defaultInnerParts   = 5
	defaultInnerPerTake = 16
)

func (v Inner) withDefaults() Inner {
	v.MostPerLabel = cmp.Or(v.MostPerLabel, defaultInnerTakes)
	v.Parts = cmp.Or(v.Parts, defaultInnerParts)
	v.Options.PerTake = cmp.Or(v.Options.PerTake, defaultInnerPerTake)
	o := &v.Options
	o.Protocol, o.TakesPerLabel, o.Repeats, o.TestShare, o.Reject, o.Rest, o.Curve = Auto, nil, 0, 0, false, nil, nil
	*o = o.withDefaults()
	return v
}

// Validate reports every fault.
func (v Inner) Validate() error {
	if v.MostPerLabel < 0 || v.MostPerLabel == 1 {
		return fmt.Errorf("inner validation: %d training takes per label; legal are 2 and more, or 0 for %d", v.MostPerLabel, defaultInnerTakes)
	}
	if v.Parts < 0 || v.Parts == 1 {
		return fmt.Errorf("inner validation: %d parts; legal are 2 and more, or 0 for %d", v.Parts, defaultInnerParts)
	}
	return v.Options.Validate()
}

// InnerCost is what an inner validation would cost.
type InnerCost struct {
	Takes  int `json:"takes"`  // training takes looked at
	Splits int `json:"splits"` // fits of the method
	Made   int `json:"made"`   // synthetic takes made
	Pairs  int `json:"pairs"`  // pairs of takes held against each other, per distance
}

// Harm is what an inner validation found.
type Harm struct {
	LeftOut string      `json:"left_out"` // what one part leaves out: "subjects" or "takes"
	PerTake int         `json:"per_take"` // synthetic takes per recorded one
	Cost    InnerCost   `json:"cost"`
	Overall []LabelHarm `json:"overall"` // by learner, over all labels
	Labels  []LabelHarm `json:"labels"`  // by learner, then label
}

// LabelHarm is what growing does to one label for one learner, on training
// takes that were left out.
type LabelHarm struct {
	Learner   string  `json:"learner"`   // a distance, or the name of another learner
	Label     string  `json:"label"`     // empty for all labels
	Tested    int     `json:"tested"`    // takes; 0 when the label has only one, or one subject
	Recorded  int     `json:"recorded"`  // errors with recorded takes alone
	Synthetic int     `json:"synthetic"` // errors with synthetic ones added
	Gain      float64 `json:"gain"`      // errors saved, as a share of the takes tested
	Error     float64 `json:"error"`     // standard error of the gain
	Low       float64 `json:"low"`       // 95 % interval of the gain
	High      float64 `json:"high"`
	P         float64 `json:"p"` // McNemar, exact
	// Finding says helps or hurts when the interval lies on one side of 0. It is
	// not corrected for the number of labels: of forty that growing does
	// nothing to, about one is to be expected on either side.
	Finding Finding `json:"finding"`
}

// Spare lists the labels that growing hurts for the first learner: those to
// leave as recorded.
func (h *Harm) Spare() []string {
	var out []string
	for _, l := range h.Labels {
		if l.Learner == h.Labels[0].Learner && l.Finding == Hurts {
			out = append(out, l.Label)
		}
	}
	return out
}

// Cost returns what [DoNoHarm] would cost on these takes, or why it cannot be
// done.
func (v Inner) Cost(training []*channels.Take) (InnerCost, error) {
	_, folds, _, err := v.lay(training)
	return v.withDefaults().cost(folds), err
}

func (v Inner) cost(folds []fold) InnerCost {
	c := InnerCost{Splits: len(folds)}
	for _, f := range folds {
		c.Takes += len(f.test)
		c.Made += len(f.training) * v.Options.PerTake
		c.Pairs += len(f.training) * (1 + v.Options.PerTake) * len(f.test)
	}
	return c
}

// DoNoHarm looks, with recorded training takes alone, what growing does to each
// label. It deals the takes into parts, whole subjects where every take names
// one and there are three or more, else takes of each label; leaves each part
// out in turn; and tests it with the rest, as recorded and grown. At most
// MostPerLabel takes of a label are looked at, the same ones for the same seed.
// Takes of a label of which the rest has none are not tested.
//
// It is [Score] with other splits: fit is called once per split, and progress
// with the number of training takes dealt with. It chooses nothing; least of
// all should it choose how far synthetic takes reach, which on open recordings
// did slightly worse than a fixed reach.
func DoNoHarm(ctx context.Context, training []*channels.Take, fit Fit, v Inner, progress func(done, total int)) (*Harm, error) {
	takes, folds, by, err := v.lay(training)
	if err != nil {
		return nil, err
	}
	v = v.withDefaults()
	h := &Harm{LeftOut: by, PerTake: v.Options.PerTake, Cost: v.cost(folds)}
	if len(folds) == 0 {
		return h, nil
	}
	r := newRun(takes, []Method{{v.Options.Method, fit}}, v.Options, folds, progress)
	if err := r.work(ctx); err != nil {
		return nil, err
	}
	for l := range r.learners {
		h.Overall = append(h.Overall, r.harm(l, ""))
		for _, name := range r.names {
			h.Labels = append(h.Labels, r.harm(l, name))
		}
	}
	return h, nil
}

// lay returns the takes looked at, the splits, and what a split leaves out.
func (v Inner) lay(training []*channels.Take) (takes []*channels.Take, folds []fold, by string, err error) {
	if err := v.Validate(); err != nil {
		return nil, nil, "", err
	}
	if err := checkTakes(training); err != nil {
		return nil, nil, "", err
	}
	if err := checkLayouts(training); err != nil {
		return nil, nil, "", err
	}
	v = v.withDefaults()
	kept := NewSample(v.MostPerLabel, v.Options.Seed)
	for _, t := range training {
		unsplit := *t
		unsplit.Split = channels.None
		kept.Add(&unsplit)
	}
	takes = kept.Takes()
	part, by := v.deal(takes)
	for p := range v.Parts {
		var f fold
		for i := range takes {
			if part[i] == p {
				f.test = append(f.test, i)
			} else {
				f.training = append(f.training, i)
			}
		}
		f.test = known(takes, f)
		if len(f.test) > 0 {
			f.split, f.repeat = p, 0
			folds = append(folds, f)
		}
	}
	return takes, folds, by, nil
}

// known returns the takes tested whose label is trained.
func known(takes []*channels.Take, f fold) []int {
	trained := make(map[string]bool)
	for _, i := range f.training {
		trained[takes[i].Label] = true
	}
	return slices.DeleteFunc(slices.Clone(f.test), func(i int) bool { return !trained[takes[i].Label] })
}

// innerStream keeps the dealing of parts apart from other draws.
const innerStream = 1 << 35

// deal gives every take a part: that of its subject, or, where there are fewer
// than three subjects or takes that name none, one dealt among the takes of its
// label.
func (v Inner) deal(takes []*channels.Take) (part []int, by string) {
	g := rand.New(rand.NewPCG(v.Options.Seed, innerStream))
	part = make([]int, len(takes))
	if people := distinct(takes, subjectOf); len(people) >= 3 && people[0] != "" {
		of := make(map[string]int)
		for i, p := range g.Perm(len(people)) {
			of[people[i]] = p % v.Parts
		}
		for i, t := range takes {
			part[i] = of[t.Subject]
		}
		return part, "subjects"
	}
	for _, pool := range byLabel(takes, nil) {
		for i, p := range g.Perm(len(pool)) {
			part[pool[i]] = p % v.Parts
		}
	}
	return part, "takes"
}

// harm sums up one label, or all for an empty one, for one learner.
func (r *run) harm(learner int, label string) LabelHarm {
	t := r.tally(element{learner, []int{0}, len(r.variants) - 1}, func(place int) bool {
		return label == "" || r.takes[place].Label == label
	})
	distance, name := r.title(learner)
	out := LabelHarm{
		Learner: cmp.Or(name, string(distance)), Label: label, Finding: NoDifference,
		Tested: t.sum.tested, Recorded: t.sum.before, Synthetic: t.sum.after, P: 1, Low: -1, High: 1,
	}
	if t.sum.tested == 0 {
		return out
	}
	n := float64(t.sum.tested)
	saved, caused := float64(t.sum.before-t.sum.both)/n, float64(t.sum.after-t.sum.both)/n
	out.Gain, out.P = float64(t.sum.before-t.sum.after)/n, statistic.McNemar(t.helped, t.hurt)
	out.Error = math.Sqrt(max(0, saved+caused-out.Gain*out.Gain) / n)
	out.Low, out.High = difference(t.sum)
	switch {
	case out.Low > 0:
		out.Finding = Helps
	case out.High < 0:
		out.Finding = Hurts
	}
	return out
}

// difference returns an interval at [Level] of the share of errors before less
// that after, tested on the same takes: method 10 of R. G. Newcombe, "Improved
// confidence intervals for the difference between binomial proportions based on
// paired data", Statistics in Medicine 17 (1998) 2635–2650, which joins the
// Wilson intervals of the two shares by their correlation. Unlike the standard
// error it has a width where no take changes.
func difference(c errorCount) (low, high float64) {
	n := float64(c.tested)
	p, q := float64(c.before)/n, float64(c.after)/n
	pLow, pHigh := statistic.Wilson(p, c.tested, Level)
	qLow, qHigh := statistic.Wilson(q, c.tested, Level)
	phi := correlation(c)
	side := func(a, b float64) float64 { return math.Sqrt(max(0, a*a-2*phi*a*b+b*b)) }
	return p - q - side(p-pLow, qHigh-q), p - q + side(pHigh-p, q-qLow)
}

// correlation is that of errors before and after, towards 0 where it is
// positive by the continuity correction of Newcombe's method 10; 0 where either
// is always or never wrong.
func correlation(c errorCount) float64 {
	n := float64(c.tested)
	both, before, after := float64(c.both), float64(c.before), float64(c.after)
	product := both*(n-before-after+both) - (before-both)*(after-both)
	if product > 0 {
		product = max(0, product-n/2)
	}
	if spread := before * (n - before) * after * (n - after); spread > 0 {
		return product / math.Sqrt(spread)
	}
	return 0
}
