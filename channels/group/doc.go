// Package group says which channels of a layout move as one body part or
// sensor, and how far those share their timing.
//
// # Groups and limbs
//
// A group is one trajectory in a space of its own; a limb is what its groups
// are fixed to, and has one timing. [FromNames] reads both out of channel
// names, [FromRules] out of what a user writes. [Propose] proposes them from
// names, from geometry (the skeleton, bones of constant length, sensors that
// turn together) and from the data, each with its evidence.
//
// # Coupling
//
// [MeasureCoupling] measures how far limbs share their timing: ρ is the
// correlation of their timing residuals, over takes and along the clock, once
// each take is aligned to the medoid of its label, limb by limb. Each step keeps
// something out of ρ that is no coupling:
//
//   - The alignment keeps out the gesture. Two hands that do one gesture have
//     alike signals whether or not they keep time with each other.
//   - Comparing the takes of one person keeps out that person's habits, which
//     both hands share; see [Estimate].
//   - Counting time from the first frame, in seconds and not in parts of the
//     take, keeps out that all limbs share the length of the recording.
//   - Reading residuals at the mean instant of the takes, not of the medoid,
//     keeps the medoid's own timing out.
//   - Weighing frames by movement keeps out what alignment makes up where a
//     limb rests.
//   - Dividing by the reliabilities keeps out the noise of alignment, as far as
//     halves of a limb's channels disagree about it.
//
// Whether limbs are coupled at all is asked by a permutation test, of timing
// and of shape together, which needs none of this to be exact.
//
// [Coupling.Matrix] and [SquareRoot] give what a Gaussian copula needs.
package group
