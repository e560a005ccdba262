package body

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/spatial/r3"
)

// Gravity is what an accelerometer shows, taken apart: at every frame
//
//	accel = Magnitude·Direction + Linear
//
// in the frame of the sensor. An accelerometer shows specific force, so that at
// rest it shows the acceleration of gravity pointing up, away from the ground:
// a resting sensor whose z axis points up shows (0, 0, +9.81) m/s², and
// Direction is the upright of the world seen from the sensor.
type Gravity struct {
	Direction []float64 // frames × 3, of length one
	Magnitude float64   // m/s²: the median length of the triad over its slowest tenth of frames
	Spread    float64   // m/s²: how that length varies over the same frames (1.4826 × median absolute deviation)
	Linear    []float64 // frames × 3, m/s²: what is left
	Rate      []float64 // frames × 3, rad/s: the rate under which [IntegrateDirection] gives Direction; nil without a gyroscope
}

// Plausible tells whether Magnitude is that of gravity to within a tenth, far
// more than places on Earth and sensors differ. It is not where a recording has
// gravity taken out of it, states no true unit, or never rests.
func (g Gravity) Plausible() bool {
	return math.Abs(g.Magnitude-standardGravity) <= 0.1*standardGravity
}

const standardGravity = 9.80665 // m/s², 3rd CGPM 1901; ISO 80000-3

// What the estimate takes for granted of sensors and limbs. None is critical;
// they say how far each frame's accelerometer is believed against the
// gyroscope.
const (
	restSpread   = 0.02 // rad: a resting triad's direction varies so much (tremor, noise of 0.2 m/s²)
	levelWeight  = 2.0  // rad per g by which the triad is longer or shorter than gravity
	turnWeight   = 0.25 // rad per rad/s: a limb of half a metre that turns also accelerates
	correlation  = 0.2  // s for which the direction's error lasts
	rateSpread   = 0.02 // rad/√s by which a gyroscope's integral drifts: 2° in three seconds
	rateShare    = 0.02 // rad/√s per rad/s: its error of scale
	calmWindow   = 0.1  // s before and after a frame over which calm is judged
	freshWeight  = 10.0 // rad²: variance of a direction of which nothing is known
	slowestShare = 10   // one frame in so many counts as slowest

	gravityCorner = 1.0 // Hz: corner of the filter that stands in for a gyroscope
)

// SeparateGravity finds the direction of gravity in a take of an accelerometer
// (frames × 3, m/s²) at the given times in seconds, which rise strictly. gyro
// is the gyroscope fixed to it (frames × 3, rad/s) or nil. Values must be
// finite.
//
// With a gyroscope, the direction u of the upright follows u' = -ω × u and is
// drawn towards the direction of the accelerometer, the complementary filter of
// Mahony, Hamel and Pflimlin, IEEE Transactions on Automatic Control 53 (2008)
// 1203, without its bias term. Two things are added. Its gain is that of a
// scalar Kalman filter, large at rest and small where the triad's length is not
// that of gravity or the sensor turns. And it runs forwards and backwards, and
// the two are joined by their variances (Fraser and Potter, AIAA Journal 7
// (1969) 387), so that rests at both ends are right and a constant bias between
// them cancels. Rate is the gyroscope's with the slow correction that makes its
// integral run through the joined directions; Direction is that integral.
//
// Without one, the direction is that of the low-passed triad: [LowPass] at 1 Hz.
// A corner of 0.3 Hz is usual for splitting gravity from walking (Anguita, Ghio,
// Oneto, Parra and Reyes-Ortiz, ESANN (2013) 437); gestures turn the wrist
// faster. Against the directions found with the gyroscope, 1 Hz is off by less
// than 0.3 Hz is, in generated strokes and in recorded gestures alike (see the
// tests), but still by tens of degrees where gestures are vigorous: a turn
// faster than that is taken for movement.
func SeparateGravity(time, accel, gyro []float64) Gravity {
	if len(accel) != 3*len(time) || gyro != nil && len(gyro) != len(accel) {
		panic("body: triads and times differ in number")
	}
	var g Gravity
	if len(time) == 0 {
		return g
	}
	g.Magnitude, g.Spread = restLevel(time, accel, gyro)
	if gyro == nil {
		g.Direction = slowDirections(time, accel)
	} else {
		joined := joinedDirections(time, accel, gyro, doubts(time, accel, gyro, g.Magnitude))
		g.Rate = followingRate(time, gyro, joined)
		g.Direction = IntegrateDirection(nil, joined[:3], g.Rate, time)
	}
	g.Linear = make([]float64, len(accel))
	for i, v := range accel {
		g.Linear[i] = v - g.Magnitude*g.Direction[i]
	}
	return g
}

// IntegrateDirection writes into dst (frames × 3, nil allocates) how a
// direction that stands still in the world is seen from a turning body: first
// (three values, made of length one) at the first frame, then u' = -ω × u. From
// one frame to the next the rate is the mean of the two frames' rates (frames ×
// 3, rad/s), and the step is a whole turn of that rate: exact where the rate is
// constant, and the length stays one.
func IntegrateDirection(dst, first, rate, time []float64) []float64 {
	if dst == nil {
		dst = make([]float64, len(rate))
	}
	if len(rate) != 3*len(time) || len(dst) != len(rate) {
		panic("body: rates and times differ in number")
	}
	u := direction(vec(first))
	for i := range time {
		if i > 0 {
			u = direction(turned(r3.Scale(time[i-1]-time[i], meanRate(rate, i)), u))
		}
		put(dst[3*i:], u)
	}
	return dst
}

// meanRate returns the rate of the step that ends at frame i.
func meanRate(rate []float64, i int) r3.Vec {
	return r3.Scale(0.5, r3.Add(vec(rate[3*i-3:]), vec(rate[3*i:])))
}

// restLevel returns the median length of the triad over its slowest frames, and
// how it varies there.
func restLevel(time, accel, gyro []float64) (level, spread float64) {
	stir := stirring(time, accel, gyro)
	order := make([]int, len(time))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(i, j int) int {
		switch {
		case stir[i] < stir[j]:
			return -1
		case stir[i] > stir[j]:
			return 1
		}
		return 0
	})
	lengths := make([]float64, min(len(time), max(3, len(time)/slowestShare)))
	for k := range lengths {
		lengths[k] = r3.Norm(vec(accel[3*order[k]:]))
	}
	level = median(lengths)
	for k, l := range lengths {
		lengths[k] = math.Abs(l - level)
	}
	return level, 1.4826 * median(lengths)
}

// stirring returns how much each frame stirs, for comparison within a take: how
// the triad varies around it in g, and how fast the sensor turns.
func stirring(time, accel, gyro []float64) []float64 {
	out := make([]float64, len(time))
	for i := 1; i < len(time); i++ {
		step := r3.Norm2(r3.Sub(vec(accel[3*i:]), vec(accel[3*i-3:]))) / (standardGravity * standardGravity)
		out[i] = max(out[i], step)
		out[i-1] = max(out[i-1], step)
	}
	for i := range gyro {
		out[i/3] += turnWeight * turnWeight * gyro[i] * gyro[i]
	}
	return windowMeans(time, out)
}

// doubts returns the variance in rad² of each frame's accelerometer as a sign
// of where up is.
func doubts(time, accel, gyro []float64, level float64) []float64 {
	off := make([]float64, len(time))
	for i := range off {
		if level > 0 {
			d := r3.Norm(vec(accel[3*i:]))/level - 1
			off[i] = levelWeight * levelWeight * d * d
		}
	}
	for i, w := range gyro {
		off[i/3] += turnWeight * turnWeight * w * w
	}
	off = windowMeans(time, off)
	for i := range off {
		off[i] += restSpread * restSpread
	}
	return off
}

// windowMeans returns the mean over the frames at most calmWindow seconds away.
func windowMeans(time, values []float64) []float64 {
	out := make([]float64, len(values))
	from, to, sum := 0, 0, 0.0
	for i, t := range time {
		for ; to < len(time) && time[to] <= t+calmWindow; to++ {
			sum += values[to]
		}
		for ; time[from] < t-calmWindow; from++ {
			sum -= values[from]
		}
		out[i] = max(sum, 0) / float64(to-from)
	}
	return out
}

// slowDirections are the directions of the low-passed triad.
func slowDirections(time, accel []float64) []float64 {
	out, before := LowPass(time, accel, 3, gravityCorner), r3.Vec{Z: 1}
	for i := range time {
		if v := vec(out[3*i:]); r3.Norm(v) > 0 {
			before = direction(v)
		}
		put(out[3*i:], before)
	}
	return out
}

// median returns the middle value, and sorts the values.
func median(values []float64) float64 {
	slices.Sort(values)
	n := len(values)
	return (values[(n-1)/2] + values[n/2]) / 2
}
