package statistic

import "math"

// Reading is how far one movement was from anything known.
type Reading struct {
	Distance float64
	Gesture  bool    // whether it was a gesture, to be accepted, or none
	Weight   float64 // how often it counts
}

// EqualError returns the threshold on the distance, up to which a movement is
// accepted as a gesture, at which the share of gestures rejected and that of
// other movements accepted are nearest to each other, and their mean there:
// the equal error rate. The threshold lies midway between two readings. The
// readings must be in ascending order of distance, infinite ones included.
// Where gestures or other movements have no weight both results are NaN.
func EqualError(readings []Reading) (threshold, rate float64) {
	gestures, others := 0.0, 0.0
	for _, r := range readings {
		if r.Gesture {
			gestures += r.Weight
		} else {
			others += r.Weight
		}
	}
	if gestures == 0 || others == 0 {
		return math.NaN(), math.NaN()
	}
	accepted, wrong := 0.0, 0.0 // gestures, and other movements, up to reading i
	best, at := math.Inf(1), -1
	for i := -1; i < len(readings); i++ {
		if i >= 0 && readings[i].Gesture {
			accepted += readings[i].Weight
		} else if i >= 0 {
			wrong += readings[i].Weight
		}
		if i+1 < len(readings) && i >= 0 && readings[i].Distance == readings[i+1].Distance {
			continue
		}
		missed, taken := 1-accepted/gestures, wrong/others
		if apart := math.Abs(missed - taken); apart < best {
			best, at, rate = apart, i, (missed+taken)/2
		}
	}
	return between(readings, at), rate
}

// between returns a threshold that accepts the readings up to number i, −1 for
// none, and no others.
func between(readings []Reading, i int) float64 {
	switch {
	case i < 0:
		return math.Nextafter(readings[0].Distance, math.Inf(-1))
	case i+1 == len(readings) || math.IsInf(readings[i+1].Distance, 1):
		return readings[i].Distance
	}
	return (readings[i].Distance + readings[i+1].Distance) / 2
}
