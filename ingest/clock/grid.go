package clock

import (
	"math"
	"slices"
)

// grid is a uniform clock.
type grid struct {
	start, step float64 // s
	frames      int
}

func (g grid) time(k int) float64 { return g.start + float64(k)*g.step }

// grid lays the uniform clock through a stretch of time.
func (j *job) grid(s span) grid {
	n := j.sensors[j.fastest]
	time := within(n.time, s)
	start := s.from
	if len(time) > 0 {
		start = time[0] + n.step*median(phases(time, n.step))
	}
	g := grid{step: 1 / j.rate}
	slack := min(g.step, n.step) / 2
	first := math.Ceil((s.from - slack - start) / g.step)
	last := math.Floor((s.to + slack - start) / g.step)
	g.start, g.frames = start+first*g.step, int(min(max(last-first+1, 0), 1e15))
	return g
}

// phases returns how far each time is from a whole number of steps after the
// first, in steps, from −0.5 to 0.5.
func phases(time []float64, step float64) []float64 {
	out := make([]float64, len(time))
	for i, t := range time {
		n := (t - time[0]) / step
		out[i] = n - math.Round(n)
	}
	return out
}

func median(values []float64) float64 {
	return quantile(slices.Sorted(slices.Values(values)), 0.5)
}

// within returns the times in a span.
func within(time []float64, s span) []float64 {
	from, _ := slices.BinarySearch(time, s.from)
	to, found := slices.BinarySearch(time, s.to)
	if found {
		to++
	}
	return time[from:to]
}
