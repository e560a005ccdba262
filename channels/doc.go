// Package channels is the model every other package stands on: what a take
// of motion is, which channels it carries, in which units, and which channels
// move as one group. It reads and writes no files.
//
// # Vocabulary
//
// A take is one recorded performance of one gesture: frames × channels on one
// clock. A channel is one scalar series with a quantity and an SI unit, named
// tracked_point.type.component in the vocabulary of the Motion-BIDS extension
// of the Brain Imaging Data Structure standard (Jeung et al., Scientific Data
// 11 (2024) 716). A group is a set of channels that move as one body part or
// sensor and form one trajectory in a space of their own; groups fixed to one
// limb share its timing.
//
// # Units
//
// Values are held in SI units: metres, metres per second squared, radians per
// second, radians, tesla. Recordings in other units are converted on the way
// in, by the factors of [ParseUnit]. A channel whose quantity is unknown keeps
// its numbers as recorded and has no unit.
package channels
