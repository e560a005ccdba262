// Package ingest opens recordings of any format it knows and hands on their
// takes as one stream: identified, on one layout, in SI units, each take valid
// and met once.
//
// What is particular to a format lives in a package of its own below this one,
// behind the contract of package raw. This package does what is alike for all:
// it finds the files, unpacks them, reads identity from their paths, converts
// units, fixes the channels and groups by the first take, and refuses whatever
// cannot be made sound.
//
// Errors are of two kinds. A [*UsageError] says that what was asked for is
// impossible, a *fault.Error that a recording is not sound, where and what to
// do about it.
//
// Memory: one take, the buffers of one file, and some 20 to 40 bytes for each
// take met (see [Recordings.Takes]).
package ingest
