package bvh

import (
	"slices"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels/body"
)

// choose returns the channels of a joint.
func (o *writer) choose(i int) []body.Freedom {
	j := o.m.Skeleton.Joints[i]
	if j.End {
		return nil
	}
	moves, turns := []body.Freedom{body.MoveX, body.MoveY, body.MoveZ}, []body.Freedom{body.TurnZ, body.TurnX, body.TurnY}
	movesFit, turnsFit := o.movesFit(i), o.turnsFit(i)
	switch {
	case j.Freedoms == nil && j.Parent >= 0:
		return turns
	case j.Freedoms == nil:
		return append(moves, turns...)
	case movesFit && turnsFit:
		return j.Freedoms
	}
	if movesFit {
		moves = only(j.Freedoms, false)
	}
	if turnsFit {
		turns = only(j.Freedoms, true)
	}
	return append(slices.Clone(moves), turns...)
}

// chooseAbsolute tells how a joint's moves are written so that they are read as
// they are meant: as the skeleton says, unless [nearerToOffset] would be misled.
func (o *writer) chooseAbsolute(i int) bool {
	n, j := o.slot[i], o.m.Skeleton.Joints[i]
	if n < 0 {
		return false
	}
	column := make([]r3.Vec, o.m.Frames())
	for f := range column {
		_, moves := o.m.Pose(f)
		column[f] = stated(j.Offset, j.Absolute, moves[n])
	}
	return nearerToOffset(column, 1, times(j.Offset, mask(o.freedoms[i])))
}

// only returns the freedoms that turn, or those that move.
func only(freedoms []body.Freedom, turn bool) []body.Freedom {
	return slices.DeleteFunc(slices.Clone(freedoms), func(f body.Freedom) bool { return f.IsTurn() != turn })
}

// The largest differences that count as none: about what rounding to single
// precision does to a place a few metres away and to a turn.
const (
	sameLength = 5e-7 // metres
	sameAngle  = 3e-7 // radians
)

// movesFit tells whether the joint stays at its offset on every axis that it
// has no channel for.
func (o *writer) movesFit(i int) bool {
	n, j := o.slot[i], o.m.Skeleton.Joints[i]
	if n < 0 {
		return true
	}
	free := r3.Sub(r3.Vec{X: 1, Y: 1, Z: 1}, mask(j.Freedoms))
	for f := range o.m.Frames() {
		_, moves := o.m.Pose(f)
		if r3.Norm(times(free, r3.Sub(moves[n], j.Offset))) > sameLength {
			return false
		}
	}
	return true
}

// turnsFit tells whether turns about the joint's own axes make all its turns.
func (o *writer) turnsFit(i int) bool {
	axes := turnAxes(o.m.Skeleton.Joints[i].Freedoms)
	for f := range o.m.Frames() {
		turns, _ := o.m.Pose(f)
		if !legalOrder(axes) {
			return false
		}
		angles := anglesOf(axes, turns[i])
		if body.Angle(turns[i], body.Intrinsic(axes, angles[:len(axes)])) > sameAngle {
			return false
		}
	}
	return true
}

func turnAxes(freedoms []body.Freedom) []body.Axis {
	var out []body.Axis
	for _, f := range freedoms {
		if f.IsTurn() {
			out = append(out, f.Axis())
		}
	}
	return out
}

// legalOrder tells whether angles can be found for turns in this order: three
// at most, no two neighbours about one axis.
func legalOrder(axes []body.Axis) bool {
	for i := 1; i < len(axes); i++ {
		if axes[i] == axes[i-1] {
			return false
		}
	}
	return len(axes) <= 3
}

// anglesOf returns the angles in radians that make q from turns in a legal
// order of up to three axes, as nearly as fewer than three can.
func anglesOf(axes []body.Axis, q quat.Number) [3]float64 {
	var order [3]body.Axis
	n := copy(order[:], axes)
	for ; n < 3; n++ {
		// An axis of its own that differs from the ones before.
		for slices.Contains(order[:n], order[n]) {
			order[n]++
		}
	}
	return body.IntrinsicAngles(order, q)
}
