// Package c3d reads motion capture files in the C3D format: the paths of
// points in space, and analog channels recorded beside them.
//
// The format is described in the public "C3D File Format User Guide" (Motion
// Lab Systems, c3d.org; called the manual here). A file is a header block of
// 512 bytes, a section of parameters in named groups, and a section of frames;
// a frame holds every point once, then one or more samples of every analog
// channel. Three kinds of machine wrote such files, so numbers come in three
// byte orders (see [Order]), and frames as 16-bit integers or 32-bit floats.
//
// # What is taken for true
//
// The parameters are the master record and the header a copy, as the manual
// says. Where the two differ on how the data section is laid out (number of
// points and channels, integer or float, scale, where it begins) the file is
// refused, since one of the readings would give wrong numbers without notice.
// Frame counts differ in honest files, because the header counts in 16 bits
// and may number the frames of the recording a file was cut from: of the
// counts stated, the one that fills the file is taken, with a notice.
//
// A point is missing in a frame when its residual is negative or one of its
// coordinates is not a number; it is then read as NaN in all three.
//
// # Departures from the manual
//
//   - Negative numbers of DEC files are sign and magnitude, as the machines had
//     them (VAX Architecture Reference Manual, 1987, F_floating); the manual
//     speaks of two's complement.
//   - The high word of TRIAL:ACTUAL_START_FIELD and ACTUAL_END_FIELD counts
//     65536; the manual multiplies by 65535, but calls it a 32-bit value.
//   - The count of parameter blocks may reach into the data section, as some
//     programs write it; the parameters then end where the data begins.
//   - Points listed in POINT:ANGLES, FORCES, MOMENTS, POWERS, SCALARS or
//     REACTIONS are results of a model, not places. The manual does not know
//     these lists, but they are common practice, and without them an angle
//     would be read as a length.
package c3d
