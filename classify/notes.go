package classify

import (
	"fmt"
	"slices"
	"strings"
)

// notes says what a reader should know before believing the report. It is
// never nil.
func (r *run) notes() []string {
	out := []string{}
	add := func(note string) {
		if note != "" {
			out = append(out, note)
		}
	}
	add(r.untrained())
	add(r.untested())
	add(r.sharedPeople())
	add(r.unfinished())
	add(r.repetition())
	add(r.thinned())
	for m := range r.methods {
		add(r.short(m))
	}
	if len(r.methods) > 1 {
		add(fmt.Sprintf("%d methods were compared: the best of them looks better here than it is, for being picked.", len(r.methods)))
	}
	return out
}

// unfinished says how much was done of a score that was interrupted.
func (r *run) unfinished() string {
	done := len(r.finished())
	if done == len(r.folds) {
		return ""
	}
	return fmt.Sprintf("Interrupted: %d of %d splits were scored.", done, len(r.folds))
}

// repetition says what intervals and p make of tests that repeat.
func (r *run) repetition() string {
	t := r.tally(element{0, r.numbers(), 0}, nil)
	if t.most <= 1 {
		return ""
	}
	note := fmt.Sprintf("Takes are tested up to %d times: intervals resample %s, and p flips signs by %s", t.most, r.resampled(), strings.TrimSuffix(strings.TrimPrefix(r.resampled(), "splits and "), "s"))
	switch n := len(t.splits); {
	case n >= enough:
		return note + " and by split, whichever shows less."
	case n > 1:
		return note + fmt.Sprintf("; %d random splits are too few to tell how far the draw decides (%d or more would).", n, enough)
	}
	return note + "."
}

// thinned counts labels that had fewer training takes than were asked for.
func (r *run) thinned() string {
	if r.options.Protocol == Pooled || len(r.options.TakesPerLabel) == 0 {
		return ""
	}
	fewer := map[string]int{}
	for _, f := range r.finished() {
		k := r.options.TakesPerLabel[f.k]
		for _, pool := range byLabel(r.takes, f.training) {
			if len(pool) < k {
				fewer[r.takes[pool[0]].Label] = max(fewer[r.takes[pool[0]].Label], k-len(pool))
			}
		}
	}
	return listed("Trained on fewer takes than asked for in some splits, at worst by", fewer)
}

// short counts synthetic takes that could not be made.
func (r *run) short(method int) string {
	n := r.shortfall[method].Load()
	if n == 0 {
		return ""
	}
	by := ""
	if len(r.methods) > 1 {
		by = " by " + r.methods[method].Name
	}
	return fmt.Sprintf("%d synthetic takes fewer than asked for could be made%s.", n, by)
}

// untrained names labels that were tested without a training take.
func (r *run) untrained() string {
	missing, met := map[string]int{}, map[int]bool{}
	for _, f := range r.finished() {
		trained := map[string]bool{}
		for _, i := range f.training {
			trained[r.takes[i].Label] = true
		}
		for _, i := range f.test {
			if l := r.takes[i].Label; !trained[l] && !met[i] {
				met[i] = true
				missing[l]++
			}
		}
	}
	return listed("Tested without any training take of the label, so always counted as errors", missing)
}

// untested names labels none of whose takes were tested.
func (r *run) untested() string {
	tested := map[string]bool{}
	for _, f := range r.finished() {
		for _, i := range f.test {
			tested[r.takes[i].Label] = true
		}
	}
	left := map[string]int{}
	for _, t := range r.takes {
		if !tested[t.Label] {
			left[t.Label]++
		}
	}
	return listed("Trained but never tested", left)
}

// sharedPeople says how many subjects are on both sides of a split.
func (r *run) sharedPeople() string {
	shared := map[string]bool{}
	for _, f := range r.finished() {
		trained := map[string]bool{}
		for _, i := range f.training {
			trained[r.takes[i].Subject] = true
		}
		for _, i := range f.test {
			if s := r.takes[i].Subject; s != "" && trained[s] {
				shared[s] = true
			}
		}
	}
	if len(shared) == 0 {
		return ""
	}
	return fmt.Sprintf("%d subjects both train and are tested: a person never recorded will be recognised less well; protocol subject keeps people apart.", len(shared))
}

// listed writes counts of takes per label as one sentence, none as nothing.
func listed(what string, counts map[string]int) string {
	if len(counts) == 0 {
		return ""
	}
	var parts []string
	for label, n := range counts {
		noun := "takes"
		if n == 1 {
			noun = "take"
		}
		parts = append(parts, fmt.Sprintf("%s (%d %s)", label, n, noun))
	}
	slices.Sort(parts)
	return what + ": " + strings.Join(parts, ", ") + "."
}
