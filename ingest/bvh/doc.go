// Package bvh reads and writes BVH files (Biovision hierarchical data): a
// skeleton, and how each of its joints turns in every frame.
//
// # What is read
//
// The format has no standard. Read is what the descriptions in circulation and
// the files in use have in common (Thingvold, Biovision BVH, Gleicher's course
// notes CS 838, University of Wisconsin, 1999; Meredith and Maddock, Motion
// capture file formats explained, University of Sheffield, 2001):
//
//   - One or more ROOT joints, each with a tree of JOINTs and End Sites. Words
//     may be in upper or lower case and stand on one line or several.
//   - CHANNELS of any number from 0 to 6 on any joint, in any order. Turns
//     follow one another about the joint's own axes, in the order listed, in
//     degrees. Moves are in the frame of the parent, wherever they stand in
//     the list; a joint does not turn its own moves.
//   - One line of numbers for every frame.
//
// Whether a move adds to the joint's OFFSET or takes its place differs between
// the programs that write such files. The numbers tell: a joint whose moves
// lie nearer to its offset than to zero, over the whole file, states its place
// in the frame of the parent; else its moves are added. Reading says so when
// the former is found.
//
// # Length
//
// A file states no unit of length. [Format.LengthUnit] does; where it is empty,
// the unit is the one of m, cm, mm and in, in which the longest way along the
// bones ([body.Skeleton.Span]) is between 1.2 m and 3.0 m, as for people 0.8 m
// to 2.0 m tall (a span of 1.5 times the height was measured on open
// recordings). These ranges do not overlap. Where none fits, it is cm, the
// commonest (common practice). Reading says which unit was taken, and why.
//
// # Channels
//
// A take has, for each joint in the order of the file:
//
//	Hips.pos.x  .y  .z                             place in the world: POS, m
//	Hips.ornt.quat_x  .quat_y  .quat_z  .quat_w    turn in the frame of the parent: ORNT, 1
//
// Both are channels, since a recogniser may want either: places are what a
// camera or a marker sees, turns are what keeps the bones their length. Their
// groups follow from the names, one of places and one of turns for each joint,
// all joints of one arm or leg being one limb. An End Site has a place only and
// is called after its joint, "Head_end"; a joint that never turns has no turn.
// The move of a root is its place. The move of any other joint follows from its
// place, its parent's place and the turns, so no channel of its own is needed.
//
// # Back to BVH
//
// [FromTake] makes a motion of a take with such channels, and [Write] a file of
// a motion. Besides the channels they need the [body.Skeleton], which is what
// must be kept with a take as JSON: joints, parents, offsets in metres, channel
// order and the file's unit of length. The turns, the places of the roots and
// the skeleton decide all; other places are used only for joints that move.
package bvh
