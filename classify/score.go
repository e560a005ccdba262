package classify

import (
	"context"
	"errors"
	"fmt"
	"slices"
	"strings"

	"strandwise/channels"
)

// Score scores the nearest-template recogniser on the takes, which must be
// recorded ones, and reports the errors made with recorded templates alone
// and with o.PerTake synthetic ones per recorded one added. fit is called once
// per split of the protocol, with exactly the takes that train in it; it may
// be nil when o.PerTake is 0. progress, unless nil, is called from one
// goroutine at a time with the number of training takes dealt with over all
// splits.
//
// The report depends on the takes, their order, the maker and the options, but
// not on o.Workers. Ties between templates go to recorded ones, then to the
// first in order. When ctx ends, so does Score, with its error. Memory holds
// the takes given, and per worker the takes made from one.
func Score(ctx context.Context, takes []*channels.Take, fit Fit, o Options, progress func(done, total int)) (*Report, error) {
	if fit == nil && o.PerTake > 0 {
		panic("classify: no fit to make synthetic takes with")
	}
	o, folds, err := o.lay(takes)
	if err != nil {
		return nil, err
	}
	r := newRun(takes, fit, o, folds, progress)
	for i := range folds {
		if err := r.fold(ctx, &folds[i]); err != nil {
			return nil, err
		}
	}
	return r.report(), nil
}

// Comparisons returns how many pairs of takes [Score] would hold against each
// other for one distance, or why it cannot score these takes: a single label,
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
	names := takes[0].Layout.Names()
	for _, t := range takes {
		if t.Layout != takes[0].Layout && !slices.Equal(t.Layout.Names(), names) {
			return fmt.Errorf("take %s%s has the channels %s where take %s has %s; every take of a score needs the same", t.ID, from(t), strings.Join(t.Layout.Names(), ", "), takes[0].ID, strings.Join(names, ", "))
		}
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
