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
	if r.options.Protocol == Pooled && len(r.folds) > 1 {
		add(fmt.Sprintf("The splits repeat %d times over the same takes: intervals and p count each take once.", len(r.folds)))
	}
	if n := r.shortfall.Load(); n > 0 {
		add(fmt.Sprintf("%d synthetic takes fewer than asked for could be made.", n))
	}
	return out
}

// untrained names labels that were tested without a training take.
func (r *run) untrained() string {
	missing := map[string]int{}
	for _, f := range r.folds {
		trained := map[string]bool{}
		for _, i := range f.training {
			trained[r.takes[i].Label] = true
		}
		for _, i := range f.test {
			if l := r.takes[i].Label; !trained[l] {
				missing[l]++
			}
		}
	}
	return listed("Tested without any training take of the label, so always counted as errors", missing)
}

// untested names labels none of whose takes were tested.
func (r *run) untested() string {
	tested := map[string]bool{}
	for _, f := range r.folds {
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
	for _, f := range r.folds {
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
