package template

import "math"

// ruler says how the values of a part are rounded to levels.
type ruler struct {
	width   int
	origin  []float64 // per channel: the value of level 0
	levels  float64   // the highest level
	step    float64   // between levels, in the unit of the values
	perUnit float64   // levels
}

// spread is how many standard deviations the range of a ruler reaches to either
// side of a channel's mean. Values beyond are few, and the finer step is worth
// more than what is lost on them.
const spread = 3

// singleLevels is the highest level where a word holds one channel.
const singleLevels = 1<<13 - 1

// finest is the finest step: squares of finer ones are lost when a distance adds
// them up, and nothing measured comes near it.
const finest = 1e-100

// newRuler returns a ruler for a part of takes like those given. Where the step
// would be finer than the finest it is 0, and sketches bound nothing.
func newRuler(p *part, takes []series) ruler {
	r := ruler{width: p.width, origin: make([]float64, p.width)}
	r.levels = singleLevels
	if p.width > 1 {
		r.levels = math.Floor(math.Sqrt((1<<sumBits - 1) / float64(min(p.width, perWord*atOnce))))
	}
	for c := range r.origin {
		mean, sd := moments(p, takes, c)
		r.origin[c] = mean
		r.step = max(r.step, 2*spread*sd/r.levels)
	}
	if r.perUnit = 1 / r.step; r.step < finest {
		r.step, r.perUnit = 0, 0
	}
	for c := range r.origin {
		r.origin[c] -= r.step * r.levels / 2
	}
	return r
}

// moments returns the mean and the standard deviation of a channel of a part
// over takes.
func moments(p *part, takes []series, c int) (mean, sd float64) {
	n, sum, squares := 0.0, 0.0, 0.0
	for i := range takes {
		data := takes[i].part(p)
		for k := c; k < len(data); k += p.width {
			sum += data[k]
			n++
		}
	}
	mean = sum / n
	for i := range takes {
		data := takes[i].part(p)
		for k := c; k < len(data); k += p.width {
			squares += (data[k] - mean) * (data[k] - mean)
		}
	}
	return mean, math.Sqrt(squares / n)
}

// level returns the level of value v of channel c.
func (r *ruler) level(v float64, c int) uint64 {
	at := (v - r.origin[c]) * r.perUnit
	switch {
	case at >= r.levels:
		return uint64(int64(r.levels))
	case at > 0:
		return uint64(int64(at + 0.5))
	}
	return 0
}

// rounding covers what rounding adds to a bound, or takes off it.
const rounding = 1e-9

// under returns a value that the root of a sum of squared differences is not
// below when that of the sketches is k and both run over some cells.
func (r *ruler) under(k uint64, cells int) float64 {
	return r.step * max(0, math.Sqrt(float64(k))-r.apart(cells)) * (1 - rounding)
}

// over returns a sum of squares that the sketches do not pass when the root of
// that of the takes does not pass root.
func (r *ruler) over(root float64, cells int) uint64 {
	k := root/r.step + r.apart(cells)
	k = k*k*(1+rounding) + 1
	if !(k < float64(endless)) {
		return endless
	}
	return uint64(k)
}

// apart returns the most levels that the sketches of two takes are further apart
// than the takes, over some cells.
func (r *ruler) apart(cells int) float64 {
	return math.Sqrt(float64(r.width*cells)) * (1 + rounding)
}
