package puppets

import (
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/spatial/r3"
)

const (
	jitter    = 0.001 // seconds; standard deviation of the clock's error, cut at three times that
	gapShare  = 0.2   // share of takes that lost frames
	mostGaps  = 2     // gaps in such a take
	longest   = 2     // frames lost in one gap
	timeSteps = 1e4   // the logger writes time in tenths of a millisecond
	dataSteps = 1e5   // and readings to five decimals
)

// stamps draws the instants at which the logger takes frames, in seconds from
// the start of the performance: a 50 Hz clock with jitter, less the frames
// lost. They increase strictly.
func stamps(rng *rand.Rand, duration float64) []float64 {
	n := int(duration * rate)
	lost := lostFrames(rng, n)
	var out []float64
	for i := range n {
		late := jitter * min(max(rng.NormFloat64(), -3), 3)
		if !lost[i] {
			out = append(out, decimals((float64(i)+0.5)/rate+late, timeSteps))
		}
	}
	return out
}

// lostFrames draws which of n frames are lost, never the first or last.
func lostFrames(rng *rand.Rand, n int) map[int]bool {
	lost := map[int]bool{}
	if rng.Float64() >= gapShare {
		return lost
	}
	part := (n - 2) / mostGaps // each gap in its own part, so that no two join
	for g := range 1 + rng.IntN(mostGaps) {
		first := 1 + g*part + rng.IntN(part-longest)
		for k := range 1 + rng.IntN(longest) {
			lost[first+k] = true
		}
	}
	return lost
}

// record samples a performance at the stamps, and returns time in seconds from
// the first frame, and data frame-major in the order of [names].
func record(rng *rand.Rand, p performance, worn bands) (time, data []float64) {
	time = stamps(rng, p.duration)
	start := time[0]
	for i, t := range time {
		time[i] = decimals(t-start, timeSteps)
		for hand := range hands {
			band := p.band(hand, t)
			data = write(data, accelerometer.read(rng, band.specificForce(), worn.accel[hand]))
			data = write(data, gyroscope.read(rng, band.bodyRate(), worn.gyro[hand]))
		}
	}
	return time, data
}

// write appends a reading with the digits the logger keeps.
func write(data []float64, v r3.Vec) []float64 {
	return append(data, decimals(v.X, dataSteps), decimals(v.Y, dataSteps), decimals(v.Z, dataSteps))
}

// decimals rounds v to whole 1/steps. The result is the float64 nearest to the
// decimal number, the one a reader of the text gets. It is never −0.
func decimals(v, steps float64) float64 { return math.Round(v*steps)/steps + 0 }
