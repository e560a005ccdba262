package chart

import "fmt"

// Kind says what may be done with the coordinates of a part.
type Kind int

// The kinds.
const (
	// Free coordinates are plain numbers: they may be mixed, and scaled about
	// their mean over the take.
	Free Kind = iota
	// Turn coordinates are rotation vectors in rad, axis times angle, of the way
	// from a mean rotation. They are continuous, go beyond π where the motion
	// does, and are treated as Free.
	Turn
	// Rate coordinates are rates of change: angular rate in rad/s, velocity in
	// m/s. They are scaled about zero, and by the tempo at which the take is
	// read: twice as fast doubles them.
	Rate
	// Linear coordinates are accelerations without gravity, linear in m/s^2 or
	// angular in rad/s^2. They are scaled about zero, and by the square of the
	// tempo.
	Linear
	// Fixed coordinates may only be read at other times, and mixed where Mix says
	// so: the direction of gravity, the length of a bone, the legs that bear a
	// still foot.
	Fixed
)

var kindNames = [...]string{"free", "turn", "rate", "linear", "fixed"}

// String returns the name of the kind in lower case.
func (k Kind) String() string {
	if k < 0 || int(k) >= len(kindNames) {
		return fmt.Sprintf("Kind(%d)", int(k))
	}
	return kindNames[k]
}

// Part is a set of coordinates that are varied in one way.
type Part struct {
	Name string // of the channel group, with what the coordinates are where they are not its channels: "left_wrist.accel linear"
	Limb string // parts of one limb must be read at the same times
	Kind Kind
	// Mix says that the coordinates may be mixed with those of another take. It is
	// false for what is fixed, but for the direction of gravity.
	Mix bool
	// Group is the index of the layout's group the part belongs to. Parts of one
	// group share its amplitude.
	Group int
	// Scaled says that the coordinates are in the unit of the group's channels,
	// so that the group's size ([strandwise/channels.Scales]) is theirs too.
	// Where it is false they are radians, or pure numbers, and have no size to be
	// divided by.
	Scaled bool
	// Axes is 3 or 2 when the coordinates are one or more vectors of space, each
	// as x, y, z or x, y, that a rotation turns as such; else 0. Those of kind Turn
	// have none, but [Chart.Rotate] turns them as well.
	Axes int
	// Coordinates are the positions in the chart, ascending. The parts of a chart
	// hold every coordinate once.
	Coordinates []int
	// Follows is the index of the part whose draws must be done to this one too,
	// coordinate by coordinate, so that the two stay together; -1 for none.
	Follows int
}
