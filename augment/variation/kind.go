package variation

import (
	"math"
	"slices"
)

// Thresholds of the kind of motion, both of which an ongoing motion exceeds.
// Set by experiment on twelve open sets: of 40 draws of one take per label
// from the two ongoing ones 39 came out right, of 200 from the ten others all.
const (
	ongoingEnds        = 0.45
	ongoingPeriodicity = 0.5
)

// Lags at which the autocorrelation is looked at, from frame 6 of 64 to half
// the take, and the share of a take that is an end.
const (
	leastLag = 6.0 / 64
	endShare = 1.0 / 8
)

// motions tells the kind of motion of all labels and of each.
func (e *engine) motions() []Motion {
	var out []Motion
	for _, sc := range e.scopes() {
		var ends, periods []float64
		for _, l := range e.labels[sc.from:sc.to] {
			for _, t := range l.takes {
				ends = append(ends, e.endActivity(t.data))
				periods = append(periods, e.periodicity(t.data))
			}
		}
		m := Motion{Label: sc.label, Kind: Gesture, Ends: median(ends), Periodicity: median(periods), Takes: len(ends)}
		if m.Ends > ongoingEnds && m.Periodicity > ongoingPeriodicity {
			m.Kind = Ongoing
		}
		out = append(out, m)
	}
	return out
}

// endActivity returns the mean speed in the stiller of the first and the last
// eighth of a take, relative to that of the whole; 0 for a take that stands.
func (f *form) endActivity(data []float64) float64 {
	speeds := make([]float64, f.frames-1)
	for i := range speeds {
		d := 0.0
		for c := range f.width {
			d += square(data[(i+1)*f.width+c] - data[i*f.width+c])
		}
		speeds[i] = math.Sqrt(d)
	}
	n := max(1, int(endShare*float64(f.frames)))
	all := sum(speeds) / float64(len(speeds))
	if all == 0 {
		return 0
	}
	return min(sum(speeds[:n]), sum(speeds[len(speeds)-n:])) / float64(n) / all
}

// periodicity returns the rise of the autocorrelation of all channels of a
// view together, from its lowest point to the highest after it.
// The sum of products at each lag is relative to the sum of squares.
func (f *form) periodicity(data []float64) float64 {
	lowest, rise := math.Inf(1), 0.0
	squares := f.product(data, 0)
	if squares == 0 {
		return 0
	}
	for lag := int(leastLag * float64(f.frames)); lag <= f.frames/2; lag++ {
		r := f.product(data, lag) / squares
		if r < lowest {
			lowest, rise = r, 0
		}
		rise = max(rise, r-lowest)
	}
	return rise
}

// product returns the sum of products of frames a lag apart.
func (f *form) product(data []float64, lag int) float64 {
	shift := lag * f.width
	total := 0.0
	for i := shift; i < len(data); i++ {
		total += data[i] * data[i-shift]
	}
	return total
}

// median returns the median of the values, which it sorts; 0 of none.
func median(values []float64) float64 {
	slices.Sort(values)
	n := len(values)
	if n == 0 {
		return 0
	}
	return (values[n/2] + values[(n-1)/2]) / 2
}
