package clock

import "fmt"

// Series is a recording as it stands: values at times, rows × Width.
type Series struct {
	Time  []float64 // seconds, one per row
	Data  []float64 // row-major; NaN where a value is missing
	Width int
}

// at returns one value.
func (s Series) at(row, column int) float64 { return s.Data[row*s.Width+column] }

// Interpolation is how values between two frames are found.
type Interpolation int

// The interpolations.
const (
	Linear Interpolation = iota // along the straight line
	Cubic                       // along a cubic that passes through the frames with a continuous slope
)

// DefaultLongestGap is how many missing frames in a row are filled unless the
// caller says otherwise.
const DefaultLongestGap = 3

// Options say what may be repaired and how. The zero value puts a recording
// whose frames are in order and distinct onto its own nominal clock.
type Options struct {
	Rate          float64 // of the result in Hz; 0 is the nominal rate of the fastest sensor
	Interpolation Interpolation
	LongestGap    int // missing frames in a row that are filled; 0 is DefaultLongestGap, negative fills none

	Sort  bool // frames out of order may be put in order
	Merge bool // frames of equal time may be merged into the mean of their values
	Split bool // a recording may be split at a longer gap, or shortened at its ends
}

// longest is LongestGap with its default.
func (o Options) longest() int {
	switch {
	case o.LongestGap == 0:
		return DefaultLongestGap
	case o.LongestGap < 0:
		return 0
	}
	return o.LongestGap
}

// Counts say what a repair did. A frame is a row in which a sensor has a
// value.
type Counts struct {
	Frames     int // rows of the recording
	Reversals  int // rows that came before the row above and were sorted
	Duplicates int // rows merged into another of the same time
	Moved      int // frames off the uniform clock of their sensor by more than a thousandth of a step
	Gaps       int // gaps filled
	Made       int // frames interpolated to fill them
	Values     int // single values filled in frames that lack some columns
	LeftOut    int // rows outside of all pieces
	Pieces     int
	Changes    []Change // sensors whose rate was changed, in order
}

// Change is a sensor brought to the rate of the result.
type Change struct {
	Columns  []int
	From, To float64 // Hz
	Filtered bool    // the rate went down, through the anti-aliasing filter
}

// Piece is a stretch of a recording on a uniform clock, without missing
// values. It belongs to the receiver.
type Piece struct {
	Series
	Row int // row of the recording, as given, at or after which it begins
}

// Reason is why a recording was not repaired.
type Reason int

// The reasons of a [Refusal].
const (
	NoTime     Reason = iota // a time is not a finite number
	OutOfOrder               // a frame comes before the one above it, and Sort is not allowed
	Repeated                 // two frames have the same time, and Merge is not allowed
	LongGap                  // more frames are missing than may be filled, and Split is not allowed
	NeverSeen                // a column has fewer than two values
	Unsteady                 // the times of a sensor have no nominal step
	TooShort                 // fewer than two frames, or no stretch in which all columns have values
	WrongRate                // the rate asked for is not one, or would make thousands of frames out of each
)

// Refusal is the error of [Repair]: the recording is not changed.
type Refusal struct {
	Reason Reason
	Row    int // row of the recording at fault, or after which frames are missing; -1 for none in particular
	Column int // column at fault, -1 for none in particular
	Frames int // missing frames, of a LongGap
	Limit  int // that may be filled
}

// Error says what is wrong, without naming the file or the channel.
func (r *Refusal) Error() string {
	switch r.Reason {
	case NoTime:
		return fmt.Sprintf("frame %d has no finite time", r.Row)
	case OutOfOrder:
		return fmt.Sprintf("frame %d comes before the frame above it", r.Row)
	case Repeated:
		return fmt.Sprintf("frame %d has the time of an earlier frame", r.Row)
	case LongGap:
		return r.gap()
	case NeverSeen:
		return "fewer than two frames have a value"
	case Unsteady:
		return "the times have no steady step"
	case WrongRate:
		return "the rate asked for does not fit the recording"
	}
	return "no two frames hold values of all channels"
}

func (r *Refusal) gap() string {
	where := fmt.Sprintf("after frame %d", r.Row)
	if r.Row < 0 {
		where = "at the beginning"
	}
	return fmt.Sprintf("%d frames are missing %s; at most %d may be filled", r.Frames, where, r.Limit)
}

// refuse makes a refusal that concerns one row.
func refuse(why Reason, row int) *Refusal { return &Refusal{Reason: why, Row: row, Column: -1} }
