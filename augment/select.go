package augment

import (
	"strandwise/augment/choice"
	"strandwise/augment/gate"
	"strandwise/channels"
)

// redraws bounds how many draws are tried for each take wanted.
const redraws = 4

// Tally says what became of the draws of one source or of several.
type Tally struct {
	Wanted int `json:"wanted"` // takes asked for
	Made   int `json:"made"`   // takes made
	// Refused counts sources that the method can make nothing of.
	Refused int         `json:"refused"`
	Gates   gate.Counts `json:"gates"` // what the gates said of the draws
}

// Merge adds another tally.
func (t *Tally) Merge(o Tally) {
	t.Wanted += o.Wanted
	t.Made += o.Made
	t.Refused += o.Refused
	t.Gates.Merge(o.Gates)
}

// Takes makes n takes that pass the gates, in the order of choice (package
// choice): every number of them from the start shows what all of them do. There are fewer where draws keep
// failing: no more than four draws are tried for each take wanted.
func (s *Source) Takes(n int) ([]*channels.Take, Tally) {
	tally := Tally{Wanted: n}
	gates := s.gates()
	var takes []*channels.Take
	if len(s.drawers) == 0 {
		tally.Refused = 1
	}
	for draw := 0; len(s.drawers) > 0 && len(takes) < n && draw < redraws*n; draw++ {
		t := s.Draw(draw)
		if gates != nil {
			s.maker.training.Gates.Clip(t)
			result := gates.Check(t)
			tally.Gates.Add(result)
			result.Note(t.Made.Parameters)
			if !result.OK() {
				continue
			}
		}
		takes = append(takes, t)
	}
	tally.Made = len(takes)
	return s.ranked(takes), tally
}

func (s *Source) gates() *gate.Source {
	if s.maker.training.Gates == nil {
		return nil
	}
	return s.maker.training.Gates.Source(s.take)
}

// ranked brings takes into the order of choice and writes their rank.
func (s *Source) ranked(takes []*channels.Take) []*channels.Take {
	recorded := append([]*channels.Take{s.take}, s.maker.training.ofLabel(s.take.Label, s.take.ID)...)
	out := make([]*channels.Take, 0, len(takes))
	for rank, i := range choice.Takes(takes, recorded, s.maker.training.Scales) {
		takes[i].Made.Rank = rank
		out = append(out, takes[i])
	}
	return out
}
