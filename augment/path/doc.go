// Package path makes new paths from one recorded path by stochastic
// resampling.
//
// # The published method
//
// Taranta, Maghoumi, Pittman, LaViola, "A Rapid Prototyping Approach to
// Synthetic Data Generation for Improved 2D Gesture Recognition", UIST 2016:
// draw n−1 intervals from a uniform distribution of mean 1 and variance v,
// normalise them to sum to one, take the path's points at the cumulated
// fractions of its arc length, scale every between-point vector to one length
// and chain the vectors again. [Arc.Resample] is that, with the common length
// chosen so that the length of the whole path is kept; [Knots] is the published
// regression for n.
//
// # The sensor form
//
// Resampling by arc length alone deletes rests and speed. [Clock] keeps them:
// its parameter mixes arc length and time, a drawn [Map] says which moment of
// the source is shown at each moment of the source's clock, and
// [Straightener] applies the displacement normalisation by a strength between
// 0 and 1.
package path
