package augment

import (
	"math"
	"slices"

	"strandwise/augment/path"
	"strandwise/channels"
)

// timedSource draws takes by path resampling that keeps the clock. Knots are
// spaced evenly along a parameter of the whole take that mixes arc length and
// time. A draw moves the content found at each knot; the knot keeps its own
// time. All limbs share the knots, so that limbs with one timing stay exactly
// together, and each limb has its own draw of what is found there.
type timedSource struct {
	maker   *Maker
	take    *channels.Take
	samples path.Samples
	clock   *path.Clock
	time    []float64 // of the new takes: the source's, or evenly spaced where the source's steps differ
	along   []float64 // the parameter along the path at each frame of the new takes
}

func newTimedSource(m *Maker, t *channels.Take) *timedSource {
	arc := path.NewArc(m.scales.Apply(t), t.Width())
	s := &timedSource{
		maker: m, take: t,
		samples: path.Samples{Time: t.Time, Values: t.Data, Width: t.Width()},
		clock:   path.NewClock(t.Time, arc.Cumulative(), m.variation.TimeShare),
		time:    evenClock(t.Time),
	}
	for _, at := range s.time {
		s.along = append(s.along, s.clock.Parameter((at-t.Time[0])/t.Duration()))
	}
	return s
}

// unevenStep is the relative deviation of a frame's step from the median step
// above which a clock counts as uneven.
const unevenStep = 1e-6

// maxFilling bounds the frames of an even clock, as a multiple of those of the
// uneven one: a clock of short bursts and long gaps would ask for frames
// without end.
const maxFilling = 8

// evenClock returns the clock itself when its steps are even, else one with
// even steps from the same first to the same last instant. It has as many
// frames as the clock would have without its gaps: a step counts as the whole
// number of median steps it comes nearest to.
func evenClock(clock []float64) []float64 {
	n := len(clock)
	steps := make([]float64, n-1)
	for i := range steps {
		steps[i] = clock[i+1] - clock[i]
	}
	slices.Sort(steps)
	median := steps[len(steps)/2]
	if median-steps[0] <= unevenStep*median && steps[n-2]-median <= unevenStep*median {
		return clock
	}
	last := 0
	for _, step := range steps {
		last += int(math.Round(min(max(step/median, 1), float64(maxFilling*n))))
	}
	last = min(last, maxFilling*n)
	even := make([]float64, last+1)
	for i := range even {
		even[i] = clock[0] + (clock[n-1]-clock[0])*float64(i)/float64(last)
	}
	even[last] = clock[n-1]
	return even
}

// maxTrimDeviations bounds a trim draw, in standard deviations.
const maxTrimDeviations = 2.5

// trimKey is the group name under which trims are drawn, which no limb has.
const trimKey = "\x00trim"

// trims draws the shifts of start and end as fractions of the duration.
func (s *timedSource) trims(draw int) (start, end float64) {
	rng := Generator(s.maker.seed, s.take.ID, draw, trimKey)
	shift := func() float64 {
		return s.maker.variation.Trim * min(max(rng.NormFloat64(), -maxTrimDeviations), maxTrimDeviations)
	}
	return shift(), shift()
}

func (s *timedSource) draw(draw int, p map[string]float64) (time, data []float64) {
	v, t := s.maker.variation, s.take
	first, duration := t.Time[0], t.Duration()
	start, end := s.trims(draw)
	p["knots"], p["time_share"], p["straighten"] = float64(v.Knots), v.TimeShare, v.Straighten
	p["trim_start_s"], p["trim_end_s"] = start*duration, -end*duration

	intervals := s.maker.limbIntervals(t, draw, v.Knots)
	shown := make([]float64, len(s.time)) // the source's instant shown in each frame, in seconds
	data = make([]float64, len(s.time)*t.Width())
	for _, limb := range t.Layout.Limbs() {
		timing := timingMap(intervals[limb])
		instant := func(p float64) float64 {
			return first + duration*(start+s.clock.Time(timing.At(p))*(1+end-start))
		}
		for i := range shown {
			shown[i] = instant(s.along[i])
		}
		for _, g := range t.Layout.Groups {
			if g.Limb == limb {
				s.fill(data, g.Channels, shown, instant)
			}
		}
	}
	return slices.Clone(s.time), data
}

// timingMap lays a smooth map through the drawn intervals.
func timingMap(intervals []float64) *path.Map {
	return path.NewMap(path.Fractions(make([]float64, len(intervals)+1), intervals))
}

// fill reads one group's channels at the shown instants into data, and
// straightens them where the variation asks for it.
func (s *timedSource) fill(data []float64, list []int, shown []float64, instant func(p float64) float64) {
	v, w, row := s.maker.variation, s.take.Width(), make([]float64, len(list))
	var straight *path.Straightener
	if v.Straighten > 0 {
		knots := make([]float64, v.Knots*len(list))
		for k := range v.Knots {
			s.samples.At(knots[k*len(list):(k+1)*len(list)], instant(float64(k)/float64(v.Knots-1)), list)
		}
		straight = path.NewStraightener(knots, len(list), v.Straighten)
	}
	for i, at := range shown {
		s.samples.At(row, at, list)
		if straight != nil {
			straight.Add(row, s.along[i])
		}
		for k, c := range list {
			data[i*w+c] = row[k]
		}
	}
}
