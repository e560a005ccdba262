package augment

import (
	"slices"

	"strandwise/augment/choice"
	"strandwise/augment/gate"
	"strandwise/channels"
)

// redraws bounds how many draws are tried for each take wanted.
const redraws = 4

// Tally says what became of the draws of one source or of several.
type Tally struct {
	Wanted  int         `json:"wanted"`  // takes asked for
	Made    int         `json:"made"`    // takes made
	Refused int         `json:"refused"` // sources that the method can make nothing of
	Dropped int         `json:"dropped"` // takes left out because a person dropped them
	Gates   gate.Counts `json:"gates"`   // what the gates said of the draws
}

// Merge adds another tally.
func (t *Tally) Merge(o Tally) {
	t.Wanted += o.Wanted
	t.Made += o.Made
	t.Refused += o.Refused
	t.Dropped += o.Dropped
	t.Gates.Merge(o.Gates)
}

// Takes makes n takes that pass the gates, in the order of choice (package
// choice): every number of them from the start shows what all of them do. The
// place of one that a person dropped is taken by the next, and further draws
// make the number up. There are fewer where draws keep failing: no more than
// four draws are tried for each take wanted.
func (s *Source) Takes(n int) ([]*channels.Take, Tally) {
	tally := Tally{Wanted: n}
	if len(s.drawers) == 0 {
		tally.Refused = 1
		return nil, tally
	}
	next, gates := 0, s.gates()
	pass := func() *channels.Take { // the next draw that passes, or nil
		for next < redraws*n {
			t := s.Draw(next)
			next++
			if s.passes(t, gates, &tally) {
				return t
			}
		}
		return nil
	}
	var takes []*channels.Take
	for len(takes) < n {
		t := pass()
		if t == nil {
			break
		}
		takes = append(takes, t)
	}
	takes = slices.DeleteFunc(s.ranked(takes), func(t *channels.Take) bool { return s.dropped(t, &tally) })
	for len(takes) < n {
		t := pass()
		if t == nil {
			break
		}
		if !s.dropped(t, &tally) {
			takes = append(takes, t)
		}
	}
	for rank, t := range takes {
		t.Made.Rank = rank
	}
	tally.Made = len(takes)
	return takes, tally
}

// passes holds a draw against the gates, if there are any.
func (s *Source) passes(t *channels.Take, gates *gate.Source, tally *Tally) bool {
	if gates == nil {
		return true
	}
	s.maker.training.Gates.Clip(t)
	result := gates.Check(t)
	tally.Gates.Add(result)
	result.Note(t.Made.Parameters)
	return result.OK()
}

// dropped tells whether a person dropped a take, and counts it.
func (s *Source) dropped(t *channels.Take, tally *Tally) bool {
	if !s.maker.variation.Dropped[t.ID] {
		return false
	}
	tally.Dropped++
	return true
}

func (s *Source) gates() *gate.Source {
	if s.maker.training.Gates == nil {
		return nil
	}
	return s.maker.training.Gates.Source(s.take)
}

// ranked brings takes into the order of choice.
func (s *Source) ranked(takes []*channels.Take) []*channels.Take {
	recorded := append([]*channels.Take{s.take}, s.maker.training.ofLabel(s.take.Label, s.take.ID)...)
	out := make([]*channels.Take, 0, len(takes))
	for _, i := range choice.Takes(takes, recorded, s.maker.training.Scales) {
		out = append(out, takes[i])
	}
	return out
}
