package variation

import (
	"math"
	"slices"
)

// sizes is the model of how takes of a label differ: what is drawn for each.
type sizes struct {
	timing                         float64 // about the mean over the take
	timingLength                   float64
	trim, turn                     float64
	amplitude, gain, offset, shape []float64 // per group
	shapeLength                    float64
	noise                          []float64 // per channel, scaled
}

// start returns the sizes that the plain numbers of all labels suggest.
func (e *engine) start(squares []float64, noise []float64) sizes {
	s := sizes{timingLength: TimingLength.Default(), shapeLength: ShapeLength.Default(), noise: noise}
	for _, list := range s.perGroup() {
		*list = make([]float64, len(e.layout.Groups))
	}
	for i, c := range e.columns.list {
		if at := s.at(c); at != nil {
			*at = c.bounded(c.raw(squares[i]))
		}
	}
	return s
}

func (s *sizes) perGroup() [4]*[]float64 {
	return [...]*[]float64{&s.amplitude, &s.gain, &s.offset, &s.shape}
}

// clone returns sizes of their own.
func (s sizes) clone() sizes {
	for _, list := range s.perGroup() {
		*list = slices.Clone(*list)
	}
	return s
}

// apart returns the sizes with those of one part changed so much that the
// change shows: left out where they are large, and else as large as at first.
func (s sizes) apart(p Part, list []column, first sizes) sizes {
	out := s.clone()
	now, then := 0.0, 0.0
	for _, c := range list {
		if at := s.at(c); at != nil && c.part == p {
			now, then = now+square(*at), then+square(*first.at(c))
		}
	}
	for _, c := range list {
		at := out.at(c)
		switch {
		case at == nil || c.part != p:
		case now > then/4:
			*at = 0
		default:
			*at = *first.at(c)
		}
	}
	return out
}

// at returns where the size is held that a column tells, nil if it tells
// none by itself.
func (s *sizes) at(c column) *float64 {
	if c.of == "" {
		switch c.part {
		case Timing:
			return &s.timing
		case Trim:
			return &s.trim
		case Orientation:
			return &s.turn
		}
	}
	if c.group >= 0 {
		switch c.part {
		case Amplitude:
			return &s.amplitude[c.group]
		case Gain:
			return &s.gain[c.group]
		case Offset:
			return &s.offset[c.group]
		case Shape:
			return &s.shape[c.group]
		}
	}
	return nil
}

// square returns the squared size behind a column: for a limb that of the
// take, for all groups together the mean of theirs.
func (s *sizes) square(c column) float64 {
	c.part = c.source()
	whole := c
	whole.of, whole.group = "", -1
	if at := s.at(whole); at != nil {
		return square(*at)
	}
	if at := s.at(c); at != nil {
		return square(*at)
	}
	total := 0.0
	for g := range s.amplitude {
		whole.group = g
		if at := s.at(whole); at != nil {
			total += square(*at) / float64(len(s.amplitude))
		}
	}
	return total
}

// bounded keeps a size to begin with away from 0, where a part shows nothing
// of itself, and from where takes fall apart.
func (c column) bounded(size float64) float64 {
	least := 0.03
	if c.part == Trim {
		least = 0.01
	}
	if math.IsNaN(size) {
		return least
	}
	return min(max(size, least), c.most())
}

// most returns the largest size of the model that can still be drawn and
// aligned.
func (c column) most() float64 {
	if c.part == Trim {
		return 0.2
	}
	return 0.8
}
