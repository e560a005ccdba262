package clock

import (
	"math"
	"slices"
)

// Report is what the times of a recording, or of one sensor of it, look like.
// Rows are counted as given, from 0.
type Report struct {
	Frames      int
	First, Last float64 // earliest and latest time, s
	Step        float64 // nominal: the mean of the steps that are not gaps, s; 0 for fewer than two times
	Jitter      float64 // median of |step − nominal| over the same steps, s
	Jitter99    float64 // its 99th percentile, s
	Gaps        []Gap   // in order of time
	Duplicates  []int   // rows with the time of an earlier row
	Reversals   []int   // rows whose time is before that of the row above
	NotFinite   []int   // rows without a time: NaN or infinite

	// Slowest and Fastest are the lowest and highest rate over stretches of 32
	// steps without a gap, in Hz: how uneven the rate is. Both are the rate of
	// the whole where there is no such stretch.
	Slowest, Fastest float64
}

// Gap is a place where frames are missing.
type Gap struct {
	Row    int     // the last row before it
	Frames int     // how many are missing, at least 1
	Length float64 // time between the frames on both sides, s
}

// A step is a gap when it is over 1.5 nominal steps long, unless the steps on
// both sides make up for it: then a frame was only stamped late. It is known
// from a gap by the three steps together being no longer than three and a
// half.
const (
	gapSteps   = 1.5
	extraSteps = 0.5
)

// stretch is how many steps the local rate is taken over.
const stretch = 32

// Inspect reports on times in seconds, one per row. It does not change them.
// Steps are those between the distinct times in ascending order, so a row out
// of order is a reversal and not a gap as well.
func Inspect(seconds []float64) Report {
	r := Report{Frames: len(seconds)}
	rows := r.order(seconds)
	if len(rows) == 0 {
		return r
	}
	time := At(seconds, rows)
	last := len(time) - 1
	r.First, r.Last = time[0], time[last]
	if last == 0 {
		return r
	}
	steps := make([]float64, last)
	for i := range steps {
		steps[i] = time[i+1] - time[i]
	}
	median := quantile(slices.Sorted(slices.Values(steps)), 0.5)
	even, sum := steps[:0], 0.0 // the steps that are not gaps
	for i, s := range steps {
		if isGap(time, i, median) {
			r.Gaps = append(r.Gaps, Gap{Row: rows[i], Length: s})
			continue
		}
		even, sum = append(even, s), sum+s
	}
	r.Step = sum / float64(len(even)) // the median step itself is never a gap
	for i, g := range r.Gaps {
		r.Gaps[i].Frames = between(g.Length, r.Step)
	}
	r.unevenness(time, median)
	for i, s := range even {
		even[i] = math.Abs(s - r.Step)
	}
	slices.Sort(even)
	r.Jitter, r.Jitter99 = quantile(even, 0.5), quantile(even, 0.99)
	return r
}

// order lists the rows of distinct times by time, and reports the others.
func (r *Report) order(seconds []float64) []int {
	rows := make([]int, 0, len(seconds))
	last := math.Inf(-1) // time of the last row that has one
	for i, t := range seconds {
		if math.IsNaN(t) || math.IsInf(t, 0) {
			r.NotFinite = append(r.NotFinite, i)
			continue
		}
		if t < last {
			r.Reversals = append(r.Reversals, i)
		}
		rows, last = append(rows, i), t
	}
	if len(r.Reversals) > 0 {
		slices.SortStableFunc(rows, func(a, b int) int { return compare(seconds[a], seconds[b]) })
	}
	distinct := rows[:0]
	for _, row := range rows {
		if n := len(distinct); n > 0 && seconds[distinct[n-1]] == seconds[row] {
			r.Duplicates = append(r.Duplicates, row)
			continue
		}
		distinct = append(distinct, row)
	}
	slices.Sort(r.Duplicates)
	return distinct
}

func compare(a, b float64) int {
	switch {
	case a < b:
		return -1
	case a > b:
		return 1
	}
	return 0
}

// isGap applies the rule of gapSteps to the step after time i.
func isGap(time []float64, i int, nominal float64) bool {
	if time[i+1]-time[i] <= gapSteps*nominal {
		return false
	}
	from, to := max(0, i-1), min(len(time)-1, i+2)
	return time[to]-time[from] > (float64(to-from)+extraSteps)*nominal
}

// between is how many frames are missing in a gap of this length. The bound
// keeps a senseless step from overflowing.
func between(length, step float64) int {
	return max(1, int(min(math.Round(length/step), 1e15))-1)
}

// unevenness finds the extremes of the local rate.
func (r *Report) unevenness(time []float64, median float64) {
	r.Slowest, r.Fastest = 1/r.Step, 1/r.Step
	begin := 0
	for i := range len(time) - 1 {
		switch {
		case isGap(time, i, median):
			begin = i + 1
		case i+1-begin == stretch:
			rate := stretch / (time[i+1] - time[begin])
			r.Slowest, r.Fastest = min(r.Slowest, rate), max(r.Fastest, rate)
			begin = i + 1
		}
	}
}

// Rate is the nominal rate as measured, in Hz, 0 when there is none.
func (r Report) Rate() float64 {
	if r.Step <= 0 {
		return 0
	}
	return 1 / r.Step
}

// Nominal is the nominal rate in Hz with the whole number of hertz in place of
// the measured rate where the times cannot tell the two apart: within twice
// the 99th percentile of the jitter over the length of the recording, and half
// a percent at most.
func (r Report) Nominal() float64 {
	rate := r.Rate()
	if rate == 0 {
		return 0
	}
	doubt := min(max(1e-9, 2*r.Jitter99/(r.Last-r.First)), 0.005)
	if whole := math.Round(rate); whole > 0 && math.Abs(rate-whole) <= doubt*rate {
		return whole
	}
	return rate
}

// Missing is how many frames all gaps together lack.
func (r Report) Missing() int {
	n := 0
	for _, g := range r.Gaps {
		n += g.Frames
	}
	return n
}

// Steady tells whether the times have a nominal step worth the name. They do
// not when at least one step in twenty is a gap and more frames are missing
// than present: the times of arrival of frames sent in bursts, or the rows of
// several sensors taken for one.
func (r Report) Steady() bool {
	return 20*len(r.Gaps) < r.Frames || r.Missing() <= r.Frames
}

// quantile returns the p-quantile of values in ascending order, the nearest
// one from below for an even count.
func quantile(sorted []float64, p float64) float64 {
	if len(sorted) == 0 {
		return 0
	}
	return sorted[int(p*float64(len(sorted)-1))]
}
