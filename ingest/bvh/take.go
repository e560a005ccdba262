package bvh

import (
	"errors"
	"fmt"
	"math"
	"regexp"
	"strings"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/ingest/raw"
)

// takeChannels returns the channels of takes of a skeleton, in order: see the
// package documentation.
func takeChannels(s *body.Skeleton) []channels.Channel {
	var out []channels.Channel
	for _, j := range s.Joints {
		for _, axis := range []string{"x", "y", "z"} {
			out = append(out, channelOf(j.Name, channels.Position, axis, "m"))
		}
		if !j.Turns() {
			continue
		}
		for _, c := range body.Components() {
			out = append(out, channelOf(j.Name, channels.Orientation, c, "1"))
		}
	}
	return out
}

func channelOf(joint string, q channels.Quantity, component, unit string) channels.Channel {
	return channels.Channel{
		Name:         strings.Join([]string{joint, q.Word(), component}, "."),
		TrackedPoint: trackedPoint(joint),
		Quantity:     q,
		Component:    component,
		Unit:         unit,
	}
}

// trackedPoint joins the words of a joint's name as [channels.ParseHeader]
// does, so that the channel is the same when its name is read from a table.
func trackedPoint(joint string) string {
	return separators.ReplaceAllString(joint, "_")
}

var separators = regexp.MustCompile(`[._\-\s:/]+`)

// Take returns the motion as a take: the place of every joint in the world and
// the turn of every joint that turns, in the channels told of in the package
// documentation.
func (m *Motion) Take() *raw.Take {
	list := takeChannels(m.Skeleton)
	layout := &raw.Layout{Columns: make([]raw.Column, len(list))}
	for i, c := range list {
		layout.Columns[i] = raw.Column{Channel: c, Unit: c.Unit}
	}
	frames := m.Frames()
	t := &raw.Take{Line: m.Line, Layout: layout, Skeleton: m.Skeleton, Time: make([]float64, frames), Data: make([]float64, 0, frames*len(list))}
	k := body.NewKinematics(m.Skeleton)
	places := make([]r3.Vec, len(m.Skeleton.Joints))
	for i := range t.Time {
		t.Time[i] = float64(i) * m.Interval
		turns, moves := m.Pose(i)
		k.Forward(places, turns, moves)
		for n, at := range places {
			t.Data = append(t.Data, at.X, at.Y, at.Z)
			if m.Skeleton.Joints[n].Turns() {
				t.Data = append(t.Data, 0, 0, 0, 0)
				body.Store(t.Data[len(t.Data)-4:], turns[n])
			}
		}
	}
	return t
}

// FromTake returns the motion of a take of a skeleton, found in its channels by
// name. It needs the turn of every joint that turns, and the place of every
// joint that moves and of its parent; turns are scaled to length one. A channel
// that is missing, a turn without direction and an uneven clock are errors. The
// motion refers to s.
func FromTake(t *channels.Take, s *body.Skeleton) (*Motion, error) {
	if err := s.Validate(); err != nil {
		return nil, fmt.Errorf("skeleton: %w", err)
	}
	interval, err := evenInterval(t.Time)
	if err != nil {
		return nil, fmt.Errorf("take %s: %w", t.ID, err)
	}
	turns, places, err := locate(t.Layout, s)
	if err != nil {
		return nil, fmt.Errorf("take %s: %w", t.ID, err)
	}
	m := &Motion{Skeleton: s, Interval: interval}
	k := body.NewKinematics(s)
	at := make([]r3.Vec, len(s.Joints))
	for i := range t.Time {
		frame := t.Frame(i)
		first := len(m.Turns)
		for j, from := range turns {
			q, ok := turnAt(frame, from)
			if !ok {
				return nil, fmt.Errorf("take %s: frame %d: %s.ornt is no rotation: %v", t.ID, i, s.Joints[j].Name, q)
			}
			m.Turns = append(m.Turns, q)
		}
		for j, from := range places {
			if from[0] >= 0 {
				at[j] = r3.Vec{X: frame[from[0]], Y: frame[from[1]], Z: frame[from[2]]}
			}
		}
		m.Moves = append(m.Moves, k.Moves(nil, m.Turns[first:], at)...)
	}
	return m, nil
}

// turnAt returns the unit quaternion in these channels of a frame, the identity
// for a joint that has none. It is not ok when they hold no direction.
func turnAt(frame []float64, from [4]int) (q quat.Number, ok bool) {
	if from[0] < 0 {
		return body.Identity(), true
	}
	q = quat.Number{Imag: frame[from[0]], Jmag: frame[from[1]], Kmag: frame[from[2]], Real: frame[from[3]]}
	if n := quat.Abs(q); !(n > smallestTurn) || math.IsInf(n, 0) {
		return q, false
	}
	return body.Unit(q), true
}

// smallestTurn is the length below which a quaternion points nowhere.
const smallestTurn = 1e-6

// locate finds the channels of each joint's turn and place; -1 in the first
// part stands for one that is not needed.
func locate(l *channels.Layout, s *body.Skeleton) (turns [][4]int, places [][3]int, err error) {
	turns, places = make([][4]int, len(s.Joints)), make([][3]int, len(s.Joints))
	at := make(map[string]int, len(l.Channels))
	for i, c := range l.Channels {
		at[c.Name] = i
	}
	find := func(dst []int, joint string, q channels.Quantity, components []string) {
		for i, c := range components {
			name := channelOf(joint, q, c, "").Name
			n, ok := at[name]
			if !ok && err == nil {
				err = fmt.Errorf("has no channel %s, which its skeleton needs", name)
			}
			dst[i] = n
		}
	}
	for i, j := range s.Joints {
		turns[i][0], places[i][0] = -1, -1
		if parts := body.Components(); j.Turns() {
			find(turns[i][:], j.Name, channels.Orientation, parts[:])
		}
	}
	for _, i := range s.Moving() {
		for _, n := range []int{i, s.Joints[i].Parent} {
			if n >= 0 {
				find(places[n][:], s.Joints[n].Name, channels.Position, []string{"x", "y", "z"})
			}
		}
	}
	return turns, places, err
}

// unevenness is how far a frame may lie from its place on an even clock, as a
// part of the interval: well above what rounding to single precision does.
const unevenness = 0.01

// evenInterval returns the time from one frame to the next.
func evenInterval(time []float64) (float64, error) {
	n := len(time)
	if n < 2 {
		return 0, errors.New("a single frame has no rate")
	}
	interval := (time[n-1] - time[0]) / float64(n-1)
	if !(interval > 0) {
		return 0, fmt.Errorf("its clock goes from %g s to %g s", time[0], time[n-1])
	}
	for i, t := range time {
		if off := math.Abs(t - time[0] - float64(i)*interval); !(off <= unevenness*interval) {
			return 0, fmt.Errorf("frame %d is %.3g s off an even clock, and BVH has no other; resample the take first", i, off)
		}
	}
	return interval, nil
}
