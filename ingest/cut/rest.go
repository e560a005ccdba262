package cut

import (
	"fmt"
	"math"
	"slices"
)

// Rest says what counts as rest and as a take, in seconds. Zero stands for the
// default, a negative value for 0.
type Rest struct {
	Smoothing float64 // over which the energy is averaged; 0.2
	Least     float64 // shortest rest that parts two takes; 0.6
	Take      float64 // shortest take; 0.3
	Margin    float64 // kept of the rest on each side of a take; 0.1
}

func (r Rest) withDefaults() Rest {
	for _, v := range []struct {
		field    *float64
		standard float64
	}{{&r.Smoothing, 0.2}, {&r.Least, 0.6}, {&r.Take, 0.3}, {&r.Margin, 0.1}} {
		if *v.field == 0 {
			*v.field = v.standard
		}
		*v.field = max(0, *v.field)
	}
	return r
}

// Movement is a stretch of a recording between two rests.
type Movement struct {
	First, End    int     // frames with the margins: the first, and the one after the last
	Before, After float64 // rest on each side, s; 0 where the recording begins or ends in movement
	Peak          float64 // highest energy, dB above rest
}

// Movements is a recording cut at rest, with the evidence.
type Movements struct {
	List  []Movement
	Short []Movement // left out: shorter than a take

	Moving       float64 // median energy in movement, dB above the median at rest
	Enter, Leave float64 // thresholds, dB above rest
}

// NoRest is the error of [AtRest] for a recording in which rest and movement
// cannot be told apart.
type NoRest struct {
	Moving float64 // how far apart they are, dB
}

// Error says how far apart rest and movement are.
func (e *NoRest) Error() string {
	return fmt.Sprintf("rest and movement cannot be told apart: their energies are %.1f dB apart, and it takes %d", e.Moving, contrast)
}

// What a movement is (common practice; the tests say how far the cuts are from
// the truth): its energy comes half of the way from rest to movement, in
// decibels, and it lasts while the energy is above a quarter of the way. The
// two must be 10 dB apart. Energies more than 80 dB below the highest are
// taken for that low.
const (
	enterPart = 0.5
	leavePart = 0.25
	contrast  = 10
	floor     = -80
)

// AtRest finds the movements of a recording on a uniform clock. Time is in
// seconds, data are frame-major, and groups list the channels that are looked
// at, those of one sensor or body part together; nil is one group of all.
//
// The energy of a group is its squared change across a frame, over a quarter of
// Smoothing: the sum over its channels, so these must be in one unit. It is
// averaged over Smoothing and taken in decibels below its highest; the level
// of a frame is the mean over the groups. So units, gravity, rate and the
// number of channels make no difference, and a channel that only has noise
// hides nothing. Changes from or to a missing value are left out.
//
// Otsu's threshold ("A threshold selection method from gray-level histograms",
// IEEE Trans. Systems, Man and Cybernetics 9 (1979) 62) parts the frames of
// low level from those of high level; the medians of the two are rest and
// movement, and the thresholds with hysteresis lie between them. Movements
// parted by less than Least are one.
func AtRest(time, data []float64, width int, groups [][]int, o Rest) (*Movements, error) {
	n := len(time)
	if width < 1 || len(data) != n*width {
		panic("cut: data do not fit times and width")
	}
	if n < 3 || !(time[n-1] > time[0]) {
		return nil, &NoRest{}
	}
	if groups == nil {
		groups = [][]int{make([]int, width)}
		for c := range width {
			groups[0][c] = c
		}
	}
	o = o.withDefaults()
	rate := float64(n-1) / (time[n-1] - time[0])
	level := levels(data, width, groups, o.Smoothing*rate)
	m, still := thresholds(level)
	if m.Moving < contrast {
		return nil, &NoRest{m.Moving}
	}
	for i := range level {
		level[i] -= still
	}
	m.cut(level, rate, o)
	return m, nil
}

// thresholds finds the levels of rest and movement, and the thresholds between
// them. Still is the level of rest.
func thresholds(level []float64) (m *Movements, still float64) {
	at := otsu(level)
	var low, high []float64
	for _, v := range level {
		if v <= at {
			low = append(low, v)
		} else {
			high = append(high, v)
		}
	}
	if len(low) == 0 || len(high) == 0 {
		return &Movements{}, 0
	}
	slices.Sort(low)
	slices.Sort(high)
	still = low[len(low)/2]
	moving := high[len(high)/2] - still
	return &Movements{Moving: moving, Enter: enterPart * moving, Leave: leavePart * moving}, still
}

// levels is the mean energy of the groups in decibels, frame by frame, with
// floor where none has values. Window is in frames.
func levels(data []float64, width int, groups [][]int, window float64) []float64 {
	n := len(data) / width
	sum, count := make([]float64, n), make([]float64, n)
	for _, g := range groups {
		e := energy(data, width, g, max(1, int(math.Round(window/4))))
		e = decibels(smooth(e, int(math.Round(window))))
		for i, v := range e {
			if !math.IsNaN(v) {
				sum[i], count[i] = sum[i]+v, count[i]+1
			}
		}
	}
	for i := range sum {
		if sum[i] /= count[i]; count[i] == 0 {
			sum[i] = floor
		}
	}
	return sum
}

// energy is the squared change of a group across each frame, over lag frames,
// NaN where a value is missing.
func energy(data []float64, width int, group []int, lag int) []float64 {
	n := len(data) / width
	out := make([]float64, n)
	for i := range out {
		from, to := max(0, i-(lag+1)/2), min(n-1, i+lag/2)
		for _, c := range group {
			change := data[to*width+c] - data[from*width+c]
			out[i] += change * change
		}
	}
	return out
}

// smooth averages what is present over a centred window of this many values,
// made odd, and of fewer at the ends.
func smooth(values []float64, window int) []float64 {
	sum, count := make([]float64, len(values)+1), make([]float64, len(values)+1)
	for i, v := range values {
		sum[i+1], count[i+1] = sum[i], count[i]
		if !math.IsNaN(v) && !math.IsInf(v, 0) {
			sum[i+1], count[i+1] = sum[i]+v, count[i]+1
		}
	}
	out := make([]float64, len(values))
	for i := range out {
		from, to := max(0, i-window/2), min(len(values), i+window/2+1)
		out[i] = max(0, sum[to]-sum[from]) / (count[to] - count[from])
	}
	return out
}

// decibels gives energies relative to the highest, in place. A missing one
// stays NaN.
func decibels(energy []float64) []float64 {
	top := 0.0
	for _, e := range energy {
		if e > top { // not for NaN
			top = e
		}
	}
	for i, e := range energy {
		switch {
		case math.IsNaN(e):
		case e > 0 && top > 0:
			energy[i] = max(floor, 10*math.Log10(e/top))
		default:
			energy[i] = floor
		}
	}
	return energy
}

// otsu returns the level that parts the values into two classes with the
// greatest variance between them, from a histogram over floor to 0 dB.
func otsu(level []float64) float64 {
	const bins = 4 * -floor
	var count [bins + 1]float64
	total := 0.0
	for _, v := range level {
		b := int((v - floor) / -floor * bins)
		count[b]++
		total += float64(b)
	}
	best, at := -1.0, 0
	n, sum := 0.0, 0.0
	for b, c := range count[:bins] {
		n, sum = n+c, sum+c*float64(b)
		rest := float64(len(level)) - n
		if n == 0 || rest == 0 {
			continue
		}
		apart := sum/n - (total-sum)/rest
		if v := n * rest * apart * apart; v > best {
			best, at = v, b
		}
	}
	return floor + float64(at+1)*-floor/bins - 1e-9
}

// cut finds the movements by the thresholds. Level is above rest.
func (m *Movements) cut(level []float64, rate float64, o Rest) {
	var found []Movement
	for i := 0; i < len(level); i++ {
		if level[i] < m.Leave {
			continue
		}
		now := Movement{First: i}
		for ; i < len(level) && level[i] >= m.Leave; i++ {
			now.Peak = max(now.Peak, level[i])
		}
		now.End = i
		if now.Peak < m.Enter {
			continue
		}
		if k := len(found) - 1; k >= 0 && float64(now.First-found[k].End) < o.Least*rate {
			found[k].End, found[k].Peak = now.End, max(found[k].Peak, now.Peak)
			continue
		}
		found = append(found, now)
	}
	m.share(found, len(level), rate, o)
}

// share gives each movement its margins, at most half of the rest beside it,
// and sorts out the short ones. A short movement is no rest, so it bounds the
// rest of its neighbours too.
func (m *Movements) share(found []Movement, frames int, rate float64, o Rest) {
	margin := int(math.Round(o.Margin * rate))
	for i, f := range found {
		before, after := f.First, frames-f.End
		if i > 0 {
			before -= found[i-1].End
		}
		if i+1 < len(found) {
			after = found[i+1].First - f.End
		}
		cut := f
		cut.Before, cut.After = float64(before)/rate, float64(after)/rate
		cut.First -= min(margin, before/min(i+1, 2))
		cut.End += min(margin, after/min(len(found)-i, 2))
		if float64(f.End-f.First) < o.Take*rate {
			m.Short = append(m.Short, cut)
		} else {
			m.List = append(m.List, cut)
		}
	}
}
