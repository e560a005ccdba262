// Package align finds which moments of two takes of one motion belong
// together, by dynamic time warping (Sakoe and Chiba, "Dynamic programming
// algorithm optimization for spoken word recognition", IEEE Transactions on
// Acoustics, Speech, and Signal Processing 26 (1978) 43–49).
//
// Two things differ from the textbook form. Steps that are not diagonal cost
// extra, so that noise does not make a ragged timing map; and the ends are
// open: some frames at the beginning or end of one of the two takes may be
// passed over at a price, since nobody starts and stops a recording at the
// same instant of the motion. Both prices are in units of the mean local cost
// on the plain diagonal, so they mean the same for still and for wild motion.
//
// The package works on plain numbers, frames × width values with the frames
// one after the other, already scaled so that every value counts alike.
package align
