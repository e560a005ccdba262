package table

import (
	"errors"
	"fmt"
	"slices"
	"time"
)

// Recordings of body motion have between these many frames per second (common
// practice: the slowest activity monitors and the fastest inertial sensors).
const slowest, fastest = 5, 2000

// units lists the units of time, the largest first.
var units = []string{"s", "ms", "us", "ns"}

// infer finds the unit of a clock that does not state one, from times of a
// take and the likely frame rates of recordings, and gives the evidence.
func (c *Clock) infer(times []float64) (evidence string, err error) {
	step, even := medianStep(times)
	if step == 1 && even {
		return "", errors.New("counts 1, 2, 3: that may be milliseconds or frames")
	}
	for _, unit := range units { // at most one fits: they are 1000 apart, the limits 400
		if rate := ticks[unit] / step; rate >= slowest && rate <= fastest {
			c.Unit = unit
			return fmt.Sprintf("its median step of %.6g makes that %.4g frames per second", step, rate), nil
		}
	}
	if unit := epochUnit(float64(c.whole)); unit != "" {
		c.Unit = unit
		begins := time.Unix(int64(float64(c.whole)/ticks[unit]), 0).UTC()
		return "as such its first value lies in " + begins.Format("January 2006"), nil
	}
	return "", fmt.Errorf("has a median step of %.6g, which fits no unit: no frame rate of %d to %d per second", step, slowest, fastest)
}

// epochUnit returns the unit in which a clock value counts from 1970 to a date
// between 2001 and 2100, empty for none.
func epochUnit(v float64) string {
	for _, unit := range units {
		if v/ticks[unit] >= 1e9 && v/ticks[unit] < 4.1e9 {
			return unit
		}
	}
	return ""
}

// medianStep returns the median of the first steps of at least two times, and
// whether all are alike.
func medianStep(times []float64) (median float64, even bool) {
	var steps []float64
	for i := 1; i < min(len(times), 4097); i++ {
		steps = append(steps, times[i]-times[i-1])
	}
	slices.Sort(steps)
	return steps[len(steps)/2], steps[0] == steps[len(steps)-1]
}
