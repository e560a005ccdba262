package classify

import (
	"context"
	"errors"
	"fmt"
	"slices"
	"strings"

	"strandwise/channels"
)

// Score scores the learners on the takes, which must be recorded ones, and
// reports the errors made with recorded takes alone and with o.PerTake
// synthetic ones per recorded one added. fit is called once per split of the
// protocol, with exactly the takes that train in it; it may be nil when
// o.PerTake is 0. progress, unless nil, is called from one goroutine at a time
// with the number of training takes dealt with over all splits.
//
// The report depends on the takes, their order, the maker and the options, but
// not on o.Workers. Ties between templates go to recorded ones, then to the
// first in order. Memory holds the takes given, an answer for every test, what
// the learners keep of the splits under way (the takes tested, for nearest
// templates), and per worker the takes made from one; splits are under way as
// many at a time as keep the workers busy.
//
// When ctx ends, so does Score, with its error and with a report on the splits
// done by then, marked unfinished; the report is nil when none was done. With
// any other error there is no report.
func Score(ctx context.Context, takes []*channels.Take, fit Fit, o Options, progress func(done, total int)) (*Report, error) {
	if fit == nil && o.PerTake > 0 {
		panic("classify: no fit to make synthetic takes with")
	}
	var methods []Method
	if o.PerTake > 0 {
		methods = []Method{{o.withDefaults().Method, fit}}
	}
	return Compare(ctx, takes, methods, o, progress)
}

// Compare is [Score] with several methods of making takes, on the same splits
// and against the same results of recorded takes. Names of methods must
// differ. The first method leads the verdict. Methods are ignored when
// o.PerTake is 0, and o.Method always.
func Compare(ctx context.Context, takes []*channels.Take, methods []Method, o Options, progress func(done, total int)) (*Report, error) {
	o, folds, err := o.lay(takes)
	if err != nil {
		return nil, err
	}
	if o.PerTake == 0 {
		methods = nil
	} else if len(methods) == 0 {
		panic("classify: no method to make synthetic takes with")
	}
	for i, m := range methods {
		if slices.ContainsFunc(methods[:i], func(n Method) bool { return n.Name == m.Name }) {
			panic("classify: two methods have one name")
		}
	}
	r := newRun(takes, methods, o, folds, progress)
	err = r.work(ctx)
	if err != nil && !interrupted(ctx, err) || len(r.finished()) == 0 {
		return nil, err
	}
	return r.report(), err
}

// Comparisons returns how many pairs of takes [Score] would hold against each
// other for one distance and method, or why it cannot score these takes: a single label,
// say, or a protocol they do not allow.
func (o Options) Comparisons(takes []*channels.Take) (int, error) {
	o, folds, err := o.lay(takes)
	pairs := 0
	for _, f := range folds {
		pairs += len(f.training) * (1 + o.PerTake) * len(f.test)
	}
	return pairs, err
}

// lay returns the options with every default settled for the takes, and the
// splits to score.
func (o Options) lay(takes []*channels.Take) (Options, []fold, error) {
	if err := o.Validate(); err != nil {
		return o, nil, err
	}
	if err := checkTakes(takes); err != nil {
		return o, nil, err
	}
	if err := checkLayouts(slices.Concat(takes, o.Rest)); err != nil {
		return o, nil, err
	}
	o = o.withDefaults()
	o.Protocol = o.protocol(takes)
	folds, err := o.folds(takes)
	return o, folds, err
}

// checkTakes reports takes that cannot be scored on.
func checkTakes(takes []*channels.Take) error {
	if len(takes) == 0 {
		return errors.New("there are no takes to score on")
	}
	for _, t := range takes {
		if t.Origin() == channels.Synthetic {
			return fmt.Errorf("take %s is synthetic; only recorded takes are scored on", t.ID)
		}
		if t.Label == "" {
			return fmt.Errorf("take %s%s has no label; a score needs the label of every take", t.ID, from(t))
		}
	}
	if labels := distinct(takes, labelOf); len(labels) == 1 {
		return fmt.Errorf("every take is labelled %s; a score needs takes of two labels or more", labels[0])
	}
	return nil
}

// checkLayouts reports takes that cannot be compared with the first.
func checkLayouts(takes []*channels.Take) error {
	names := takes[0].Layout.Names()
	for _, t := range takes {
		if t.Layout != takes[0].Layout && !slices.Equal(t.Layout.Names(), names) {
			return fmt.Errorf("take %s%s has the channels %s where take %s has %s; every take of a score needs the same", t.ID, from(t), strings.Join(t.Layout.Names(), ", "), takes[0].ID, strings.Join(names, ", "))
		}
	}
	return nil
}
