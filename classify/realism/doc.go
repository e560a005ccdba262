// Package realism says how much like recorded takes synthetic ones are, in
// figures that have nothing to do with templates.
//
// [Measure] takes recorded takes and makes some from each. It reports, per
// label and over all:
//
//   - how far takes are from the label's medoid, recorded and synthetic: the
//     Wasserstein-1 distance of the two samples against the recorded spread. It
//     is large both when synthetic takes huddle around their sources and when
//     they scatter.
//   - the exponent of the two-thirds power law of planar hand paths, which
//     people keep without knowing it and arithmetic easily breaks.
//   - the share of power in the upper half of the recorded band, which jitter,
//     kinks and linear interpolation raise.
//   - a witness: how often a classifier that was trained to tell recorded takes
//     from synthetic ones is right about takes it has not met. Half the time is
//     ideal.
//
// None of this asks for variety: copies of recorded takes are perfectly real.
// Whether synthetic takes add anything is for the score to say.
//
// [Compare] does so for several makers and holds each against the first: other
// methods, or the same one with one part left out, which tells what gives
// synthetic takes away most.
package realism
