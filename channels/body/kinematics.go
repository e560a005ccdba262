package body

import (
	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"
)

// Kinematics relates the turns of a skeleton's joints to their places in the
// world. It holds scratch, so one is for one goroutine; a stream of frames
// needs only one.
type Kinematics struct {
	skeleton *Skeleton
	moving   []int
	slot     []int         // place of each joint in moving, -1 for none
	world    []quat.Number // scratch: how each joint is turned in the world
}

// NewKinematics returns the kinematics of a valid skeleton. It panics when
// [Skeleton.Validate] would report a fault in the order of the joints.
func NewKinematics(s *Skeleton) *Kinematics {
	k := &Kinematics{s, s.Moving(), make([]int, len(s.Joints)), make([]quat.Number, len(s.Joints))}
	for i, j := range s.Joints {
		k.slot[i] = -1
		if j.Parent >= i {
			panic("body: a parent does not stand before its joint")
		}
	}
	for n, i := range k.moving {
		k.slot[i] = n
	}
	return k
}

// Forward writes the place of every joint in the world, in metres, into dst
// and returns it; a nil dst is allocated. turns holds, for each joint, the unit
// quaternion that turns it in the frame of its parent (what stands there for an
// end site is not used), and moves, for each joint of [Skeleton.Moving], where
// it is in the frame of its parent, in metres. It panics when a length is not
// right.
//
// Forward kinematics: a joint j with parent p has the turn W(j) = W(p) q(j) and
// the place x(j) = x(p) + W(p) o(j), with o(j) its offset or move.
func (k *Kinematics) Forward(dst []r3.Vec, turns []quat.Number, moves []r3.Vec) []r3.Vec {
	if dst == nil {
		dst = make([]r3.Vec, len(k.world))
	}
	if len(dst) != len(k.world) || len(turns) != len(k.world) || len(moves) != len(k.moving) {
		panic("body: pose does not fit the skeleton")
	}
	for i := range k.skeleton.Joints {
		j := &k.skeleton.Joints[i]
		at := j.Offset
		if n := k.slot[i]; n >= 0 {
			at = moves[n]
		}
		k.turn(i, turns)
		if j.Parent >= 0 {
			at = r3.Add(dst[j.Parent], Rotate(k.world[j.Parent], at))
		}
		dst[i] = at
	}
	return dst
}

// turn finds how joint i is turned in the world, once its parent is known.
func (k *Kinematics) turn(i int, turns []quat.Number) {
	switch j := &k.skeleton.Joints[i]; {
	case j.End:
	case j.Parent < 0:
		k.world[i] = turns[i]
	default:
		k.world[i] = quat.Mul(k.world[j.Parent], turns[i])
	}
}

// Moves is the way back from places to moves: it writes, for each joint of
// [Skeleton.Moving], where it is in the frame of its parent, given the turns as
// for [Kinematics.Forward] and the places in the world. Of the places, only
// those of moving joints and their parents are used. A nil dst is allocated; it
// panics when a length is not right.
func (k *Kinematics) Moves(dst []r3.Vec, turns []quat.Number, places []r3.Vec) []r3.Vec {
	if dst == nil {
		dst = make([]r3.Vec, len(k.moving))
	}
	if len(dst) != len(k.moving) || len(turns) != len(k.world) || len(places) != len(k.world) {
		panic("body: pose does not fit the skeleton")
	}
	for i := range k.skeleton.Joints {
		k.turn(i, turns)
		n, p := k.slot[i], k.skeleton.Joints[i].Parent
		switch {
		case n < 0:
		case p < 0:
			dst[n] = places[i]
		default:
			dst[n] = Rotate(quat.Conj(k.world[p]), r3.Sub(places[i], places[p]))
		}
	}
	return dst
}
