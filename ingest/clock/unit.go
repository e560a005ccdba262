package clock

import (
	"fmt"
	"math"
	"slices"
	"time"
)

// Unit is what one count of a clock stands for.
type Unit string

// The units of time.
const (
	Second      Unit = "s"
	Millisecond Unit = "ms"
	Microsecond Unit = "us"
	Nanosecond  Unit = "ns"
)

// PerSecond is how many of the unit make a second, 0 for an unknown unit.
func (u Unit) PerSecond() float64 {
	switch u {
	case Second:
		return 1
	case Millisecond:
		return 1e3
	case Microsecond:
		return 1e6
	case Nanosecond:
		return 1e9
	}
	return 0
}

// Recordings of body motion have between these many frames per second (common
// practice: the slowest activity monitors and the fastest inertial sensors).
const slowest, fastest = 5, 2000

// InferUnit finds the unit of a clock that does not state one, and gives the
// evidence in words. First is the first time as recorded, times are those of
// the first take, from any start. The median step must make a likely frame
// rate in one of the units, or else first must be a date of this century. A
// clock that counts 1, 2, 3 may count frames, and that is an error.
func InferUnit(first float64, times []float64) (u Unit, evidence string, err error) {
	steps := make([]float64, 0, len(times))
	for i := 1; i < len(times); i++ {
		if s := times[i] - times[i-1]; s > 0 {
			steps = append(steps, s)
		}
	}
	if len(steps) == 0 {
		return "", "", fmt.Errorf("has no two times that differ")
	}
	slices.Sort(steps)
	step := quantile(steps, 0.5)
	if steps[0] == 1 && steps[len(steps)-1] == 1 {
		return "", "", fmt.Errorf("counts 1, 2, 3: that may be milliseconds or frames")
	}
	units := []Unit{Second, Millisecond, Microsecond, Nanosecond}
	for _, u := range units { // at most one fits: they are 1000 apart, the limits 400
		if rate := u.PerSecond() / step; rate >= slowest && rate <= fastest {
			return u, fmt.Sprintf("its median step of %.6g makes that %.4g frames per second", step, rate), nil
		}
	}
	for _, u := range units {
		if s := first / u.PerSecond(); s >= 978307200 && s < 4102444800 { // 2001-01-01, 2100-01-01
			return u, "as such its first value lies in " + time.Unix(int64(math.Floor(s)), 0).UTC().Format("January 2006"), nil
		}
	}
	return "", "", fmt.Errorf("has a median step of %.6g, which fits no unit: no frame rate of %d to %d per second", step, slowest, fastest)
}
