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

// Takes makes n takes that pass the gates, the best choice first: of every
// number of takes from the start, those that lie furthest from the recorded
// takes of the label and from each other. There are fewer where draws keep
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

// rankFrames is the number of frames at which takes are compared for rank.
const rankFrames = 32

// ranked brings takes into the order of choice and writes their rank.
func (s *Source) ranked(takes []*channels.Take) []*channels.Take {
	draws := make([][]float64, len(takes))
	for i, t := range takes {
		draws[i] = s.maker.sketch(t)
	}
	recorded := [][]float64{s.maker.sketch(s.take)}
	for _, t := range s.maker.training.ofLabel(s.take.Label, s.take.ID) {
		recorded = append(recorded, s.maker.sketch(t))
	}
	out := make([]*channels.Take, 0, len(takes))
	for rank, i := range choice.Order(draws, recorded) {
		takes[i].Made.Rank = rank
		out = append(out, takes[i])
	}
	return out
}

// sketch returns a take's scaled values at a few evenly spaced instants.
func (m *Maker) sketch(t *channels.Take) []float64 {
	w, last := t.Width(), float64(t.Frames()-1)
	values := m.training.Scales.Apply(t)
	out := make([]float64, 0, rankFrames*w)
	for k := range rankFrames {
		x := last * float64(k) / (rankFrames - 1)
		i := min(int(x), t.Frames()-2)
		along := x - float64(i)
		for c := range w {
			out = append(out, values[i*w+c]+along*(values[(i+1)*w+c]-values[i*w+c]))
		}
	}
	return out
}
