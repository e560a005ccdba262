// Package clock says how honest the times of a recording are, and puts its
// values onto one uniform clock where the user allows it.
//
// # Inspection
//
// [Inspect] reads a column of times and reports the nominal step, how far the
// steps stray from it, and where frames are missing, repeated or out of order.
// It changes nothing. In a log of several sensors a row may hold values of
// only one of them; [Sensors] finds which columns were sampled together, and
// each sensor has a clock of its own. [Between] compares two of them.
//
// # Repair
//
// [Repair] samples every column anew at equal steps. A value that lies on the
// uniform clock already is kept to the bit; the others are interpolated
// between their neighbours in time. Nothing is made up across more missing
// frames than the caller allows: there the recording is split, or refused.
// Where the rate goes down, an anti-aliasing filter ([Polyphase]) comes first.
// Whatever was done is counted in [Counts].
//
// All times are seconds and all rates hertz. Data are frame-major, rows ×
// columns, and a value that is missing is NaN.
package clock
