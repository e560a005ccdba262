package classify

import (
	"cmp"
	"math"
	"math/rand/v2"
	"slices"

	"strandwise/classify/statistic"
)

// Rejection says how well the distance to the nearest template tells gestures
// from other movements. Gestures are the takes tested whose label has
// templates. Other movements are the same takes held against the templates of
// the other labels alone, as if their own had never been recorded, and the rest
// that was given.
type Rejection struct {
	Threshold float64 `json:"threshold"` // take nothing beyond this distance for a gesture
	// Error is the equal error rate: at the threshold this share of gestures is
	// rejected and of other movements accepted (their mean, where no threshold makes
	// them equal). Low and High are its 95 % interval, made like that of an
	// error.
	Error    float64 `json:"error"`
	Low      float64 `json:"low"`
	High     float64 `json:"high"`
	Gestures int     `json:"gestures"` // tests of gestures
	Others   int     `json:"others"`   // tests of other movements
	Rest     int     `json:"rest"`     // of them, of the rest
}

// reading is a reading of a test with the split and unit it belongs to.
type reading struct {
	statistic.Reading
	split, unit int
}

// rejection finds the threshold for an element; nil unless it was asked for
// and the learner measures distances.
func (r *run) rejection(e element) *Rejection {
	if !r.options.Reject {
		return nil
	}
	readings, splits, units, rest := r.readings(e)
	slices.SortStableFunc(readings, func(a, b reading) int { return cmp.Compare(a.Distance, b.Distance) })
	plain := make([]statistic.Reading, len(readings))
	out := &Rejection{Rest: rest}
	for i, x := range readings {
		plain[i] = x.Reading
		if x.Gesture {
			out.Gestures++
		} else {
			out.Others++
		}
	}
	var rate float64
	out.Threshold, rate = statistic.EqualError(plain)
	if math.IsNaN(rate) {
		return nil
	}
	var rates []float64
	for w := range statistic.Resamples(rand.New(rand.NewPCG(r.options.Seed, resampling)), splits, units, resamples) {
		for i, x := range readings {
			plain[i].Weight = w.Split[x.split] * w.Unit[x.unit]
		}
		if _, again := statistic.EqualError(plain); !math.IsNaN(again) {
			rates = append(rates, again)
		}
	}
	var b bounds
	b.low, b.high = statistic.Wilson(rate, r.tally(e, nil).takes, Level)
	b.hold(statistic.Percentile(rates, Level))
	out.Threshold, out.Error, out.Low, out.High = figures(out.Threshold, 6), decimals(rate), decimals(b.low), decimals(b.high)
	return out
}

// readings returns how far every movement tested was from anything known, the
// number of splits and of units among them, and how many are of the rest.
func (r *run) readings(e element) (out []reading, splits, units, rest int) {
	seenSplits, seenUnits := make(map[int]int), make(map[int]int)
	add := func(f *fold, unit int, distance float64, gesture bool) {
		if !math.IsNaN(distance) {
			out = append(out, reading{
				statistic.Reading{Distance: distance, Gesture: gesture, Weight: 1},
				number(seenSplits, f.split), number(seenUnits, unit),
			})
		}
	}
	for i := range r.folds {
		f := &r.folds[i]
		if r.answers[i] == nil || !slices.Contains(e.ks, f.k) {
			continue
		}
		trained := make(map[string]bool)
		for _, p := range f.training {
			trained[r.takes[p].Label] = true
		}
		for q, a := range r.answers[i][e.learner].distance[e.variant] {
			if q >= len(f.test) { // the rest, each a unit of its own
				add(f, -1-q+len(f.test), a.Distance, false)
				rest++
				continue
			}
			place := f.test[q]
			if trained[r.takes[place].Label] {
				add(f, r.unit(place), a.Distance, true)
			}
			add(f, r.unit(place), a.Other, false)
		}
	}
	return out, len(seenSplits), len(seenUnits), rest
}
