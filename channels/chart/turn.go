package chart

import (
	"math"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
)

// turn is the sheet of one tracked point's rotation: the four channels of a
// quaternion as three coordinates, the rotation vector of the way from the
// take's mean rotation, in the frame of what turns.
type turn struct {
	channels [4]int // x, y, z, w
	sensor   bool   // the point carries a sensor, which may sit differently on it
	part     Part
}

// turnFrame is the rotation from which a take's rotations are counted.
type turnFrame struct {
	mean quat.Number // with the sign that the take's channels have
}

// newTurns takes every tracked point whose rotation is a quaternion in channels
// of one group.
func newTurns(d *draft) []sheet {
	var out []sheet
	parts := body.Components()
	for i, c := range d.layout.Channels {
		if d.held[i] || c.Quantity != channels.Orientation || c.Component != parts[0] {
			continue
		}
		list, ok := d.claim(c.TrackedPoint, channels.Orientation, parts[:])
		if !ok {
			continue
		}
		out = append(out, &turn{
			channels: [4]int(list),
			sensor:   d.carriesSensor(c.TrackedPoint),
			part:     d.part(list[0], "", Turn, 0, 0),
		})
	}
	return out
}

func (t *turn) width() int          { return 3 }
func (t *turn) parts(memory) []Part { return []Part{t.part} }

func (t *turn) plot(dst rows, take *channels.Take, like memory) memory {
	qs := make([]quat.Number, take.Frames())
	for f := range qs {
		qs[f] = loadTurn(take.Frame(f), t.channels)
	}
	frame, ok := like.(turnFrame)
	if !ok {
		frame = newTurnFrame(qs, 1)
	}
	frame.flatten(dst, qs, 1)
	return frame
}

func (t *turn) take(data []float64, values rows, time []float64, m memory) {
	frame, w := m.(turnFrame), len(data)/len(time)
	for f := range time {
		storeTurn(data[f*w:], t.channels, frame.at(values.frame(f)))
	}
}

// rotate turns the point in the world, or, where it carries a sensor, the
// sensor on the point.
func (t *turn) rotate(values rows, by quat.Number, m memory) {
	frame := m.(turnFrame)
	if t.sensor {
		frame.rotate(values, body.Identity(), quat.Conj(by))
	} else {
		frame.rotate(values, by, body.Identity())
	}
}

func loadTurn(row []float64, at [4]int) quat.Number {
	return body.Unit(quat.Number{Imag: row[at[0]], Jmag: row[at[1]], Kmag: row[at[2]], Real: row[at[3]]})
}

func storeTurn(row []float64, at [4]int, q quat.Number) {
	row[at[0]], row[at[1]], row[at[2]], row[at[3]] = q.Imag, q.Jmag, q.Kmag, q.Real
}

// newTurnFrame returns the frame about the mean of a series of rotations, every
// stride-th of qs, whose signs follow on from the first.
func newTurnFrame(qs []quat.Number, stride int) turnFrame {
	var series []quat.Number
	var along quat.Number // sum of the series, whose side of the sphere the mean takes
	before := qs[0]
	for i := 0; i < len(qs); i += stride {
		before = body.Nearest(before, qs[i])
		along = quat.Add(along, before)
		series = append(series, before)
	}
	return turnFrame{body.Nearest(along, body.Mean(series, nil))}
}

// flatten writes the coordinates of every stride-th rotation of qs.
func (t turnFrame) flatten(dst rows, qs []quat.Number, stride int) {
	back := quat.Conj(t.mean)
	// The series starts on the side of the sphere on which most of it is nearer
	// to the mean, so that series about one mean have like coordinates.
	side, before := 0.0, qs[0]
	for i := 0; i < len(qs); i += stride {
		before = body.Nearest(before, qs[i])
		side += quat.Mul(back, before).Real
	}
	before = qs[0]
	if side < 0 {
		before = quat.Scale(-1, before)
	}
	var v r3.Vec
	for f := range dst.frames() {
		before = body.Nearest(before, qs[f*stride])
		v = unrolled(quat.Mul(back, before), v)
		row := dst.frame(f)
		row[0], row[1], row[2] = v.X, v.Y, v.Z
	}
}

// at returns the rotation that coordinates stand for. It is a smooth function
// of them, its sign included.
func (t turnFrame) at(row []float64) quat.Number {
	return quat.Mul(t.mean, body.Exp(r3.Vec{X: row[0], Y: row[1], Z: row[2]}))
}

// rotate changes coordinates in place so that every rotation is preceded and
// followed by these.
func (t turnFrame) rotate(values rows, world, sensor quat.Number) {
	before := quat.Mul(quat.Mul(quat.Conj(t.mean), world), t.mean)
	var v r3.Vec
	for f := range values.frames() {
		row := values.frame(f)
		now := r3.Vec{X: row[0], Y: row[1], Z: row[2]}
		if f == 0 {
			v = now
		}
		v = unrolled(quat.Mul(quat.Mul(before, body.Exp(now)), sensor), v)
		row[0], row[1], row[2] = v.X, v.Y, v.Z
	}
}

// unrolled returns the rotation vector of q, taken with its sign as a point of
// the sphere of quaternions, that is nearest to one before: turns by θ + 4πk
// about an axis are the same point.
func unrolled(q quat.Number, before r3.Vec) r3.Vec {
	axis := r3.Vec{X: q.Imag, Y: q.Jmag, Z: q.Kmag}
	sine := r3.Norm(axis)
	switch {
	case sine <= wholeTurn && r3.Norm(before) > math.Pi:
		on := r3.Unit(before) // after whole turns the axis is lost in rounding
		axis, sine = on, r3.Dot(on, axis)
	case sine < nothing:
		axis = r3.Vec{X: 1}
	default:
		axis = r3.Scale(1/sine, axis)
	}
	angle := 2 * math.Atan2(sine, q.Real)
	angle += 4 * math.Pi * math.Round((r3.Dot(before, axis)-angle)/(4*math.Pi))
	return r3.Scale(angle, axis)
}

// wholeTurn is the sine of half an angle below which a turn counts as none or
// whole.
const wholeTurn = 1e-10

// nothing is a length below which a vector has no direction, since what it is
// divided by is not finite.
const nothing = 1e-300
