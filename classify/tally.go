package classify

import (
	"math"
	"math/rand/v2"
	"slices"

	"strandwise/classify/statistic"
)

// element is what one result sums up: one learner at some numbers of takes per
// label, with the templates of one variant.
type element struct {
	learner int
	ks      []int // places among the options' takes per label
	variant int
}

// tally sums up the tests of an element, with recorded takes alone (before)
// and with those of its variant (after).
type tally struct {
	sum    errorCount
	cells  []cell
	splits []int // of each split tested in, errors saved
	units  []int // of each unit tested, errors saved
	takes  int   // different takes tested
	helped int   // of them, recognised more often after
	hurt   int   // and less often
	most   int   // how often the take tested most was tested
}

// errorCount counts tests, and errors before, after, and both before and after.
type errorCount struct{ tested, before, after, both int }

func (c *errorCount) add(before, after bool) {
	c.tested++
	if before {
		c.before++
	}
	if after {
		c.after++
	}
	if before && after {
		c.both++
	}
}

// cell sums up the tests of one unit in one split.
type cell struct {
	split, unit int // places among those of the tally
	errorCount
}

// tally counts the tests of the takes that keep says yes to; nil is all.
func (r *run) tally(e element, keep func(place int) bool) *tally {
	t := &tally{}
	byTake, byCell := make(map[int]*errorCount), make(map[[2]int]int)
	splits, units := make(map[int]int), make(map[int]int)
	r.tests(e, func(f *fold, a *answers, q int) {
		place := f.test[q]
		if keep != nil && !keep(place) {
			return
		}
		truth := int32(r.place[r.takes[place].Label])
		before, after := a.label[0][q] != truth, a.label[e.variant][q] != truth
		t.sum.add(before, after)
		count(byTake, place).add(before, after)
		key := [2]int{number(splits, f.split), number(units, r.unit(place))}
		if _, ok := byCell[key]; !ok {
			byCell[key] = len(t.cells)
			t.cells = append(t.cells, cell{split: key[0], unit: key[1]})
		}
		t.cells[byCell[key]].add(before, after)
	})
	t.splits, t.units = make([]int, len(splits)), make([]int, len(units))
	for _, c := range t.cells {
		t.splits[c.split] += c.before - c.after
		t.units[c.unit] += c.before - c.after
	}
	t.countTakes(byTake)
	t.nest()
	return t
}

// nest counts all splits as one when none of them tests two units: leaving out
// one person at a time, say, is what resampling people already does.
func (t *tally) nest() {
	tested := make(map[int]int, len(t.splits)) // the unit, of each split
	for _, c := range t.cells {
		if u, ok := tested[c.split]; ok && u != c.unit {
			return
		}
		tested[c.split] = c.unit
	}
	t.splits = []int{t.sum.before - t.sum.after}
	for i := range t.cells {
		t.cells[i].split = 0
	}
}

// tests calls do for every test of an element, fold by fold.
func (r *run) tests(e element, do func(f *fold, a *answers, q int)) {
	for i := range r.folds {
		f := &r.folds[i]
		if r.answers[i] == nil || !slices.Contains(e.ks, f.k) {
			continue
		}
		for q := range f.test {
			do(f, &r.answers[i][e.learner], q)
		}
	}
}

func (t *tally) countTakes(byTake map[int]*errorCount) {
	t.takes = len(byTake)
	for _, c := range byTake {
		t.most = max(t.most, c.tested)
		if c.after < c.before {
			t.helped++
		}
		if c.after > c.before {
			t.hurt++
		}
	}
}

// enough is the number of subjects, or of splits, from which on they are
// resampled, or their signs flipped: with five the smallest p there can be is
// 2/2⁵, which shows nothing at the level of 0.05.
const enough = 6

// p returns the two-sided p-value of the difference: exact by McNemar when
// every take was tested once. When tests repeat, signs are flipped by unit, and
// by split where there are enough, and the larger p counts: a difference is to
// hold over the people or takes tested and over what was drawn to train, so
// neither may explain it alone. (Rejecting when both tests do keeps the level:
// R. L. Berger, "Multiparameter hypothesis testing and acceptance sampling",
// Technometrics 24 (1982) 295–300.)
func (t *tally) p() float64 {
	if t.most <= 1 {
		return statistic.McNemar(t.helped, t.hurt)
	}
	p := statistic.SignFlip(t.units)
	if len(t.splits) >= enough {
		p = max(p, statistic.SignFlip(t.splits))
	}
	return p
}

// resamples is the number of bootstrap resamples behind an interval.
const resamples = 1999

// bounds are the limits of an interval.
type bounds struct{ low, high float64 }

// hold widens the bounds to hold others.
func (b *bounds) hold(low, high float64) { b.low, b.high = min(b.low, low), max(b.high, high) }

// intervals returns intervals of the error after and of the relative reduction.
//
// Where every take is tested once, that of the error is Wilson's, and that of
// the reduction the bootstrap interval widened to hold the one joined from
// Wilson's. Where tests repeat they are the bootstrap intervals; Wilson's,
// counting each take once, only come in where no resample differs from another
// and the bootstrap has nothing to say: no errors at all, or none that change.
// The reduction's lower limit is −Inf when too many resamples have no error
// before and some after.
func (t *tally) intervals(seed uint64) (share, reduction bounds) {
	n := float64(t.takes) / float64(t.sum.tested) // of a test
	share, reduction = t.bootstrap(seed)
	if t.most <= 1 || share.low == share.high {
		share.low, share.high = statistic.Wilson(float64(t.sum.after)/float64(t.sum.tested), t.takes, Level)
	}
	before, right := float64(t.sum.before), float64(t.sum.tested-t.sum.before)
	if before > 0 && (t.most <= 1 || reduction.low == reduction.high) {
		kept, caused := float64(t.sum.both)/before, float64(t.sum.after-t.sum.both)/max(1, right)
		reduction.hold(statistic.Reduction(kept, n*before, caused, n*right, Level))
	}
	return share, reduction
}

// bootstrap returns bootstrap intervals of the error after and of the relative
// reduction, over splits and units.
func (t *tally) bootstrap(seed uint64) (share, reduction bounds) {
	g := rand.New(rand.NewPCG(seed, resampling))
	var shares, reductions []float64
	for w := range statistic.Resamples(g, len(t.splits), len(t.units), resamples) {
		tested, before, after := 0.0, 0.0, 0.0
		for i := range t.cells {
			c := &t.cells[i]
			weight := w.Split[c.split] * w.Unit[c.unit]
			tested += weight * float64(c.tested)
			before += weight * float64(c.before)
			after += weight * float64(c.after)
		}
		if tested > 0 { // else the resample holds no test
			shares = append(shares, after/tested)
			reductions = append(reductions, saved(before, after))
		}
	}
	share.low, share.high = statistic.Percentile(shares, Level)
	reduction.low, reduction.high = statistic.Percentile(reductions, Level)
	return share, reduction
}

// resampling keeps the draws of resamples apart from those of splits.
const resampling = 1 << 33

// saved returns the share of the errors before that are saved after: 0 when
// there are none on either side, −Inf when there are some after alone.
func saved(before, after float64) float64 {
	switch {
	case before > 0:
		return 1 - after/before
	case after > 0:
		return math.Inf(-1)
	}
	return 0
}

// number returns the number of a key in the order in which keys came.
func number[K comparable](seen map[K]int, key K) int {
	n, ok := seen[key]
	if !ok {
		n = len(seen)
		seen[key] = n
	}
	return n
}

func count(counts map[int]*errorCount, key int) *errorCount {
	c := counts[key]
	if c == nil {
		c = new(errorCount)
		counts[key] = c
	}
	return c
}
