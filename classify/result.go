package classify

import (
	"cmp"
	"math"
	"slices"

	"strandwise/classify/statistic"
	"strandwise/classify/template"
)

// report sums up the folds that are done, at least one.
func (r *run) report() *Report {
	o := r.options
	out := &Report{
		Protocol: o.Protocol, TestShare: o.TestShare, Normalise: o.Normalise, Band: o.Band, Weights: o.Weights, Seed: o.Seed, PerTake: o.PerTake,
		Labels: len(r.names), LabelNames: r.names, Takes: len(r.takes), Resampled: r.resampled(),
		Overall: []Overall{}, Unfinished: len(r.finished()) < len(r.folds), Notes: r.notes(),
	}
	for l := range r.learners {
		for _, k := range r.numbers() {
			out.Results = append(out.Results, r.results(l, k)...)
		}
		for _, v := range r.wholes()[1:] {
			out.Overall = append(out.Overall, r.overall(l, v))
		}
	}
	out.Verdict = r.verdict(out)
	return out
}

// numbers returns the places among the takes per label that folds were done
// for.
func (r *run) numbers() []int {
	var out []int
	for _, f := range r.finished() {
		out = append(out, f.k)
	}
	slices.Sort(out)
	return slices.Compact(out)
}

// wholes returns the variants that are no points of a curve: recorded takes,
// and all synthetic takes of each method.
func (r *run) wholes() []int {
	var out []int
	for v := range r.variants {
		if r.whole(v) {
			out = append(out, v)
		}
	}
	return out
}

func (r *run) whole(v int) bool {
	return r.variants[v].method < 0 || r.variants[v].perTake == r.options.PerTake
}

// results returns those of one learner and number of takes per label.
func (r *run) results(learner, k int) []Result {
	var out []Result
	for _, v := range r.wholes() {
		out = append(out, r.result(element{learner, []int{k}, v}))
	}
	slices.SortStableFunc(out[1:], func(a, b Result) int { return cmp.Compare(a.Errors, b.Errors) })
	return out
}

// result sums up one element.
func (r *run) result(e element) Result {
	t := r.tally(e, nil)
	out := Result{
		Origin: FromRecorded, Method: "none", TakesPerLabel: r.takesPerLabel(e.ks[0]), Repeats: r.repeated(e.ks[0]),
		Takes: t.takes, Tested: t.sum.tested, Errors: t.sum.after, PerLabel: r.perLabel(e), Confusion: r.confusion(e),
		Rejection: r.rejection(e),
	}
	out.Distance, out.Learner = r.title(e.learner)
	out.Comparisons, out.Cells = r.cost(e)
	var reduction bounds
	out.Error, out.Low, out.High, reduction = t.error(r.options.Seed)
	out.Accuracy = decimals(1 - float64(t.sum.after)/float64(t.sum.tested))
	if v := r.variants[e.variant]; v.method >= 0 {
		out.Origin, out.Method = FromSynthetic, r.methods[v.method].Name
		out.Comparison = t.comparison(reduction)
		out.Curve = r.curve(e)
	}
	return out
}

// title returns the distance of a nearest-template learner, or the name of any
// other.
func (r *run) title(learner int) (template.Distance, string) {
	if n, ok := r.learners[learner].(nearest); ok {
		return n.metric.Distance, ""
	}
	return "", r.learners[learner].Name()
}

// takesPerLabel returns the number at a place in the options, nil when it is
// not set.
func (r *run) takesPerLabel(k int) *int {
	if list := r.options.TakesPerLabel; k < len(list) && list[k] > 0 {
		return &list[k]
	}
	return nil
}

// repeated returns how often splits were drawn for a number of takes per label.
func (r *run) repeated(k int) int {
	seen := make(map[int]bool)
	for _, f := range r.finished() {
		if f.k == k {
			seen[f.repeat] = true
		}
	}
	return len(seen)
}

// error returns the error after with its interval, and the interval of the
// reduction.
func (t *tally) error(seed uint64) (share, low, high float64, reduction bounds) {
	b, reduction := t.intervals(seed)
	return decimals(float64(t.sum.after) / float64(t.sum.tested)), decimals(b.low), decimals(b.high), reduction
}

// comparison returns how the errors after compare with those before.
func (t *tally) comparison(reduction bounds) Comparison {
	p := figures(t.p(), 4)
	c := Comparison{Helped: &t.helped, Hurt: &t.hurt, P: &p}
	c.Reduction, c.ReductionLow, c.ReductionHigh = t.reduction(reduction)
	c.Finding = find(p, t.sum.before-t.sum.after, reduction)
	return c
}

// reduction returns the relative reduction and its interval, nil where there is
// none.
func (t *tally) reduction(b bounds) (value, low, high *float64) {
	if t.sum.before == 0 {
		return nil, nil, nil
	}
	finite := func(v float64) *float64 {
		if math.IsInf(v, 0) {
			return nil
		}
		v = decimals(v)
		return &v
	}
	return finite(saved(float64(t.sum.before), float64(t.sum.after))), finite(b.low), finite(b.high)
}

// perLabel counts the errors by label, in order of the label's name; labels
// never tested are left out.
func (r *run) perLabel(e element) []LabelResult {
	out, ps, gains := []LabelResult{}, []float64(nil), []int(nil)
	for _, name := range r.names {
		t := r.tally(e, func(place int) bool { return r.takes[place].Label == name })
		if t.sum.tested == 0 {
			continue
		}
		l := LabelResult{Label: name, Tested: t.sum.tested, Recorded: t.sum.before}
		if r.variants[e.variant].method >= 0 {
			l.Synthetic = &t.sum.after
		}
		out, ps, gains = append(out, l), append(ps, t.p()), append(gains, t.sum.before-t.sum.after)
	}
	if r.variants[e.variant].method < 0 {
		return out
	}
	for i, p := range statistic.Holm(ps) {
		p = figures(p, 4)
		out[i].P, out[i].Finding = &p, findLabel(p, gains[i])
	}
	return out
}

// confusion counts tests by label performed and label recognised.
func (r *run) confusion(e element) [][]int {
	out := make([][]int, len(r.names))
	for i := range out {
		out[i] = make([]int, len(r.names))
	}
	r.tests(e, func(f *fold, a *answers, q int) {
		out[r.place[r.takes[f.test[q]].Label]][a.label[e.variant][q]]++
	})
	return out
}

// cost adds up what a plain program computes.
func (r *run) cost(e element) (comparisons, cells int64) {
	for i, f := range r.folds {
		if r.answers[i] != nil && slices.Contains(e.ks, f.k) {
			w := r.answers[i][e.learner].work[e.variant]
			comparisons += w.Comparisons
			cells += w.Cells
		}
	}
	return comparisons, cells
}

// curve returns the results with the smaller numbers of synthetic takes asked
// for, of the method of the element.
func (r *run) curve(e element) []CurvePoint {
	var out []CurvePoint
	point := func(v, perTake int) {
		t := r.tally(element{e.learner, e.ks, v}, nil)
		p := CurvePoint{PerTake: perTake, Errors: t.sum.after}
		var b bounds
		p.Error, p.Low, p.High, b = t.error(r.options.Seed)
		if v > 0 {
			p.Reduction, p.ReductionLow, p.ReductionHigh = t.reduction(b)
		}
		out = append(out, p)
	}
	if slices.Contains(r.options.Curve, 0) {
		point(0, 0)
	}
	for v, variant := range r.variants {
		if variant.method == r.variants[e.variant].method && slices.Contains(r.options.Curve, variant.perTake) {
			point(v, variant.perTake)
		}
	}
	return out
}

// overall compares one method over all numbers of takes per label.
func (r *run) overall(learner, v int) Overall {
	t := r.tally(element{learner, r.numbers(), v}, nil)
	out := Overall{Method: r.methods[r.variants[v].method].Name, Tested: t.sum.tested, Recorded: t.sum.before, Errors: t.sum.after}
	out.Distance, out.Learner = r.title(learner)
	var b bounds
	out.Error, out.Low, out.High, b = t.error(r.options.Seed)
	out.Comparison = t.comparison(b)
	return out
}

// resampled says what intervals resample.
func (r *run) resampled() string {
	units := "takes"
	if r.people != nil {
		units = "subjects"
	}
	if t := r.tally(element{0, r.numbers(), 0}, nil); len(t.splits) > 1 {
		return "splits and " + units
	}
	return units
}
