// Package gate holds what a synthetic take must pass before it may stand
// beside recorded ones.
//
// A [Recorded] looks at recorded training takes, one after the other, and
// [Recorded.Gates] draws the limits from what it saw; [Fit] does both.
// [Gates.Source] makes a source take ready, and [Source.Check] holds one
// synthetic take made from it against the limits. Every gate measures one
// figure, which is kept whether the take passes or not:
//
//	finite      numbers that are not finite, and instants that do not come after the one before
//	range       how far a value lies outside what its channel was ever recorded at,
//	            as a share of the range of the channel's group
//	jerk        rms jerk of a group, as a multiple of the largest of its source's, of what the
//	            recorded takes of the label reach, and of what takes of a label reach on average
//	bandwidth   share of power in the upper half of the band, from 15 Hz on where the rate is
//	            40 Hz or more, mean over groups, as a multiple in the same way
//	bones       how much a bone's length strays from its own, beyond what it does in the source
//	stray       distance to the nearest recorded take of the label, as a multiple of the
//	            distance to the nearest of another label
//	copy        distance to the source, as a share of the source's distance to the nearest
//	            other recorded take of its label
//
// Values beyond the range of a sensor are no fault of a take but of the sensor
// that would have recorded it: [Gates.Clip] clips them at the level at which
// recorded takes were clipped, and belongs before the check.
//
// What is kept of recorded takes is bounded: extremes per channel, two figures
// per label and group, and at most [Options].References takes of each label as
// sketches of 32 frames.
package gate
