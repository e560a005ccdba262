package puppets

import (
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
)

// sensor is a three-axis sensor with 16-bit output.
type sensor struct {
	fullScale    float64 // SI units; readings beyond ± this are clipped
	noiseDensity float64 // SI units per √Hz
	biasSpread   float64 // SI units; standard deviation of an axis's bias
}

// The two sensors of a band, with figures common for consumer parts: ±8 g,
// 300 µg/√Hz, 10 mg; ±1000 deg/s, 0.01 (deg/s)/√Hz, 0.3 deg/s.
var (
	accelerometer = sensor{8 * channels.StandardGravity, 300e-6 * channels.StandardGravity, 0.010 * channels.StandardGravity}
	gyroscope     = sensor{1000 * degree, 0.01 * degree, 0.3 * degree}
)

// rate is the nominal frame rate in Hz.
const rate = 50

// noise returns the standard deviation of the sensor's white noise: the noise
// density times the square root of the bandwidth, half the frame rate (common
// practice).
func (s sensor) noise() float64 { return s.noiseDensity * math.Sqrt(rate/2.0) }

// step returns the value of the last bit.
func (s sensor) step() float64 { return s.fullScale / (1 << 15) }

// read returns what the sensor reports of the true value.
func (s sensor) read(rng *rand.Rand, truth, bias r3.Vec) r3.Vec {
	v := r3.Add(r3.Add(truth, bias), vector(rng, s.noise()))
	return r3.Vec{X: s.quantise(v.X), Y: s.quantise(v.Y), Z: s.quantise(v.Z)}
}

// quantise rounds to a whole number of steps that 16 bits hold.
func (s sensor) quantise(v float64) float64 {
	counts := math.Round(v / s.step())
	return s.step() * min(max(counts, math.MinInt16), math.MaxInt16)
}

// specificForce is what an ideal accelerometer on the link senses, in the
// link's axes and m/s²: Rᵀ(a − g), which at rest points up and has the
// magnitude of gravity.
func (l link) specificForce() r3.Vec {
	return l.inverse().Rotate(r3.Add(l.accel, r3.Scale(channels.StandardGravity, up)))
}

// bodyRate is what an ideal gyroscope on the link senses, in the link's axes
// and rad/s: ω with RᵀdR/dt = [ω]×.
func (l link) bodyRate() r3.Vec { return l.inverse().Rotate(l.rate) }

func (l link) inverse() r3.Rotation { return r3.Rotation(quat.Conj(quat.Number(l.orientation))) }

// bands are the two bands as worn by one person in one session.
type bands struct {
	seat        [hands]r3.Rotation // sensor axes to forearm axes
	accel, gyro [hands]r3.Vec      // biases
}

// wear draws how the bands sit in one session, near the person's habit, and
// the biases of the day.
func (p person) wear(rng *rand.Rand) bands {
	var b bands
	for hand := range hands {
		v := r3.Add(p.seat[hand], vector(rng, 2.5*degree))
		b.seat[hand] = r3.NewRotation(r3.Norm(v), v)
		b.accel[hand] = vector(rng, accelerometer.biasSpread)
		b.gyro[hand] = vector(rng, gyroscope.biasSpread)
	}
	return b
}
