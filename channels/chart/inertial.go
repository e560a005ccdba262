package chart

import (
	"math"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
)

// inertial is the sheet of an accelerometer, and of the gyroscope fixed to it
// where there is one. Its coordinates are three each of: the linear
// acceleration; with a gyroscope, its rate, and the rate that the direction of
// gravity follows; and that direction.
type inertial struct {
	accel, gyro []int // channels x, y, z; gyro is nil for none
	list        []Part
}

// gravity is what a take shows of gravity.
type gravity struct {
	magnitude float64 // m/s²
	held      bool    // the take shows no gravity: its mean stands for it, and does not turn
}

// The columns of an inertial sheet with a gyroscope.
const (
	linearAt    = 0
	rateAt      = 3
	followingAt = 6
)

var xyz = []string{"x", "y", "z"}

// newInertial takes every accelerometer with three axes, in m/s², and the
// gyroscope fixed to it, in rad/s.
func newInertial(d *draft) []sheet {
	var out []sheet
	gyros := d.triads(channels.AngularRate)
	accels := d.triads(channels.Acceleration)
	for _, accel := range accels {
		s := &inertial{accel: accel.channels}
		s.add(d.part(s.accel[0], "linear", Linear, 3, linearAt))
		if g, ok := accel.companion(accels, gyros); ok {
			s.gyro = g.channels
			s.add(d.part(s.gyro[0], "", Rate, 3, rateAt))
			s.add(d.part(s.gyro[0], "of gravity", Rate, 3, followingAt))
			s.list[2].Follows = 1
		}
		s.add(d.part(s.accel[0], "gravity", Fixed, 3, s.width()-3))
		s.list[len(s.list)-1].Mix = true
		d.hold(s.accel)
		d.hold(s.gyro)
		out = append(out, s)
	}
	return out
}

// add appends a part. What is fixed to one body has one timing.
func (s *inertial) add(p Part) {
	if len(s.list) > 0 {
		p.Limb = s.list[0].Limb
	}
	s.list = append(s.list, p)
}

func (s *inertial) width() int {
	if s.gyro == nil {
		return 6
	}
	return 12
}

func (s *inertial) parts(memory) []Part { return s.list }

func (s *inertial) plot(dst rows, t *channels.Take, like memory) memory {
	accel, gyro := columns(t, s.accel), columns(t, s.gyro)
	g := body.SeparateGravity(t.Time, accel, gyro)
	m := gravity{g.Magnitude, !plausible(g.Magnitude)}
	if other, ok := like.(gravity); ok {
		m.held = other.held
	}
	if m.held {
		m.magnitude = holdMean(&g, accel)
	}
	w := s.width()
	for f := range t.Time {
		row, k := dst.frame(f), 3*f
		copy(row[linearAt:], g.Linear[k:k+3])
		if s.gyro != nil {
			copy(row[rateAt:], gyro[k:k+3])
			copy(row[followingAt:], g.Rate[k:k+3])
		}
		copy(row[w-3:], g.Direction[k:k+3])
	}
	return m
}

// plausible tells whether a triad of this length at rest shows gravity. One
// that is given in another unit than it states, or freed of gravity already,
// does not.
func plausible(magnitude float64) bool {
	return magnitude > channels.StandardGravity/2 && magnitude < channels.StandardGravity*2
}

// holdMean puts the mean of the triad in the place of gravity, so that the
// linear acceleration is what differs from the mean, and returns its length.
func holdMean(g *body.Gravity, accel []float64) float64 {
	var mean r3.Vec
	for k := 0; k < len(accel); k += 3 {
		mean = r3.Add(mean, r3.Vec{X: accel[k], Y: accel[k+1], Z: accel[k+2]})
	}
	mean = r3.Scale(3/float64(len(accel)), mean)
	up, length := direction(mean), r3.Norm(mean)
	for k := 0; k < len(accel); k += 3 {
		for a, u := range [3]float64{up.X, up.Y, up.Z} {
			g.Direction[k+a] = u
			g.Linear[k+a] = accel[k+a] - length*u
			if g.Rate != nil {
				g.Rate[k+a] = 0
			}
		}
	}
	return length
}

func (s *inertial) take(data []float64, values rows, time []float64, m memory) {
	w := len(data) / len(time)
	for f, up := range s.directions(values, time) {
		row, out := values.frame(f), data[f*w:]
		for a, u := range [3]float64{up.X, up.Y, up.Z} {
			out[s.accel[a]] = m.(gravity).magnitude*u + row[linearAt+a]
			if s.gyro != nil {
				out[s.gyro[a]] = row[rateAt+a]
			}
		}
	}
}

// directions returns the direction of gravity in every frame: as it is read,
// or, with a gyroscope, as the rate it follows carries it on from the first
// frame.
func (s *inertial) directions(values rows, time []float64) []r3.Vec {
	n := s.width()
	out := make([]r3.Vec, len(time))
	if s.gyro == nil {
		for f := range out {
			out[f] = direction(vector(values.frame(f)[n-3:], []int{0, 1, 2}))
		}
		return out
	}
	rate := make([]float64, 0, 3*len(time))
	for f := range time {
		rate = append(rate, values.frame(f)[followingAt:followingAt+3]...)
	}
	flat := body.IntegrateDirection(nil, values.frame(0)[n-3:], rate, time)
	for f := range out {
		out[f] = r3.Vec{X: flat[3*f], Y: flat[3*f+1], Z: flat[3*f+2]}
	}
	return out
}

// rotate turns the sensors on the limb: all readings, about zero.
func (s *inertial) rotate(values rows, by quat.Number, _ memory) {
	for _, p := range s.list {
		rotateVectors(values, p.Coordinates, by, false)
	}
}

// columns returns the values of some channels, frame-major, nil for none.
func columns(t *channels.Take, list []int) []float64 {
	if list == nil {
		return nil
	}
	out := make([]float64, 0, t.Frames()*len(list))
	for f := range t.Time {
		row := t.Frame(f)
		for _, i := range list {
			out = append(out, row[i])
		}
	}
	return out
}

// direction returns v of length one, and up the z axis for no direction at all.
func direction(v r3.Vec) r3.Vec {
	n := r3.Norm(v)
	if !(n > nothing) || math.IsInf(n, 0) {
		return r3.Vec{Z: 1}
	}
	return r3.Scale(1/n, v)
}
