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
	Least     float64 // shortest rest that parts two takes; 0.3
	Take      float64 // shortest take; 0.3
	Margin    float64 // kept of the rest on each side of a take; 0.1
}

func (r Rest) withDefaults() Rest {
	for _, v := range []struct {
		field    *float64
		standard float64
	}{{&r.Smoothing, 0.2}, {&r.Least, 0.3}, {&r.Take, 0.3}, {&r.Margin, 0.1}} {
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
// seconds, data are frame-major, and columns are the channels that are looked
// at; nil is all of them.
//
// The energy of a frame is the mean over the channels of the squared change
// across it, over half of Smoothing, each in units of the mean change of its
// channel; so units, gravity and rate make no difference. It is averaged over
// Smoothing and taken in decibels. Otsu's threshold ("A threshold selection method from gray-level
// histograms", IEEE Trans. Systems, Man and Cybernetics 9 (1979) 62) parts the
// frames of low energy from those of high energy; the medians of the two are
// rest and movement, and the thresholds with hysteresis lie between them.
// Movements parted by less than Least are one. Changes from or to a missing
// value are left out.
func AtRest(time, data []float64, width int, columns []int, o Rest) (*Movements, error) {
	n := len(time)
	if width < 1 || len(data) != n*width {
		panic("cut: data do not fit times and width")
	}
	if n < 3 || !(time[n-1] > time[0]) {
		return nil, &NoRest{}
	}
	if columns == nil {
		for c := range width {
			columns = append(columns, c)
		}
	}
	o = o.withDefaults()
	rate := float64(n-1) / (time[n-1] - time[0])
	lag := max(1, int(math.Round(o.Smoothing/2*rate)))
	level := decibels(smooth(energy(data, width, columns, lag), int(math.Round(o.Smoothing*rate))))
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

// energy is the mean squared change across each frame, in mean changes.
func energy(data []float64, width int, columns []int, lag int) []float64 {
	n := len(data) / width
	sum, count := make([]float64, n), make([]float64, n)
	change := make([]float64, n)
	for _, c := range columns {
		total, present := 0.0, 0.0
		for i := range change {
			from, to := max(0, i-(lag+1)/2), min(n-1, i+lag/2)
			change[i] = data[to*width+c] - data[from*width+c]
			if !math.IsNaN(change[i]) {
				total, present = total+math.Abs(change[i]), present+1
			}
		}
		mean := total / present
		if !(mean > 0) || math.IsInf(mean, 0) {
			continue // never moves, or never seen, or no size says anything
		}
		for i, v := range change {
			if !math.IsNaN(v) {
				sum[i] += v / mean * (v / mean)
				count[i]++
			}
		}
	}
	for i := range sum {
		sum[i] /= max(1, count[i])
	}
	return sum
}

// smooth averages over a centred window of this many values, made odd, and of
// fewer at the ends.
func smooth(values []float64, window int) []float64 {
	before := make([]float64, len(values)+1)
	for i, v := range values {
		before[i+1] = before[i] + v
	}
	out := make([]float64, len(values))
	for i := range out {
		from, to := max(0, i-window/2), min(len(values), i+window/2+1)
		out[i] = max(0, (before[to]-before[from])/float64(to-from))
	}
	return out
}

// decibels gives the energies relative to the highest, in place.
func decibels(energy []float64) []float64 {
	top := slices.Max(energy)
	for i, e := range energy {
		energy[i] = floor
		if top > 0 && e > 0 {
			energy[i] = max(floor, 10*math.Log10(e/top))
		}
	}
	return energy
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
