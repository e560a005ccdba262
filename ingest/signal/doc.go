// Package signal looks for what goes wrong between a sensor and its file: a
// range that was too small, an axis that stands still, a unit that was
// mistaken, single wild values, values left out, and one recording that comes
// twice. It reports and changes nothing.
//
// Each detector is one function over the samples of a take, or a small struct
// that is shown take after take and holds no samples. Its comment gives the
// rule, its thresholds and their units. A threshold whose source is "common
// practice" was chosen so that none of the open recordings the project is
// tested with gives a false alarm; the tests say what they give.
//
// Data are frame-major, frames × channels, in SI units; a missing value is NaN
// and is never taken for a sample. Frames and channels count from 0.
package signal
