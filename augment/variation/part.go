package variation

import "math"

// Part names one way in which takes of a label differ.
type Part string

// The parts, all of them standard deviations over takes but for
// TimingLength and Straighten. Sizes that are fractions of a group's size are
// relative to the root mean square of its channels about their means.
const (
	// Timing is the standard deviation of the logarithm of the rate at which
	// the motion runs through a take, before the whole is brought to its length.
	Timing Part = "timing"
	// TimingLength is the correlation length of that rate, as a fraction of
	// the take: the ℓ of the covariance exp(−(u−u′)²/(2ℓ²)).
	TimingLength Part = "timing length"
	// Trim is the standard deviation of where a take begins and where it ends,
	// as a fraction of its frames.
	Trim Part = "trim"
	// Duration is the standard deviation of the logarithm of the time a take
	// lasts.
	Duration Part = "duration"
	// Orientation is the standard deviation in radians of the angle by which a
	// take is turned about an axis of any direction.
	Orientation Part = "orientation"
	// Amplitude is the standard deviation of the logarithm of a factor on a
	// group's movement that is the same over the take.
	Amplitude Part = "amplitude"
	// Gain is the standard deviation of the logarithm of a factor on a group's
	// movement that changes slowly over the take: a Gaussian process of
	// correlation length 0.2, from which its mean over the take is taken away,
	// since that is in Amplitude.
	Gain Part = "gain"
	// ChannelGain is a factor like Gain for each channel by itself. It is
	// not measured.
	ChannelGain Part = "channel gain"
	// Offset is the standard deviation of a channel's mean over a take.
	Offset Part = "offset"
	// Shape is the size of what is left when timing, offset, orientation and
	// amplitude are accounted for: a drift of each channel by a Gaussian process,
	// from which its mean over the take is taken away, since that is in Offset.
	Shape Part = "shape"
	// ShapeLength is the correlation length of that drift, as a fraction of the
	// take.
	ShapeLength Part = "shape length"
	// Straighten is the strength, 0 to 1, of displacement normalisation that
	// changes a take as much as Shape does.
	Straighten Part = "straighten"
	// Noise is the standard deviation of a channel at rest about its own slow
	// movement, in the channel's unit.
	Noise Part = "noise"
)

// Parts lists the parts in the order of the table.
func Parts() []Part {
	return []Part{Timing, TimingLength, Trim, Duration, Orientation, Amplitude, Gain, ChannelGain, Offset, Shape, ShapeLength, Straighten, Noise}
}

// Unit returns the unit of the part's figures; a noise figure has that of its
// channel instead.
func (p Part) Unit() string {
	switch p {
	case Timing, Duration, Amplitude, Gain, ChannelGain:
		return "log"
	case TimingLength, ShapeLength, Trim:
		return "of take"
	case Orientation:
		return "rad"
	case Offset, Shape:
		return "of size"
	}
	return "1"
}

// Default returns the size to use when nothing is known: those of the recipe
// that served five kinds of recogniser best on open recordings. The recipe
// leaves the mean over a take in its slow processes; here it stands apart, so
// that Amplitude and Offset have the defaults 0.2 · 0.65 and 0.1 · 0.65, 0.65
// being the standard deviation of the mean of a process of length 0.2.
// Differences the recipe leaves alone have the default 0.
func (p Part) Default() float64 {
	switch p {
	case Timing, TimingLength, Gain, ShapeLength:
		return 0.2
	case Trim:
		return 0.05
	case Orientation:
		return 0.15
	case Amplitude:
		return 0.13
	case ChannelGain, Shape:
		return 0.1
	case Offset:
		return 0.065
	}
	return 0
}

// serving turns a measurement into the size that served best in making takes.
// Those of timing, trim and orientation are the recipe's rules, found by
// experiment on open recordings: timing and orientation are kept within bounds
// outside of which takes were of no use, orientation is halved and trim
// lengthened, all from the plain number. An offset is used as measured up to half
// a group's size: where takes differ by it, as hands seen by a camera do, nothing
// else in the recipe stands for it. The others are kept within about twice the
// recipe's sizes, since nothing shows that more serves.
func (p Part) serving(raw, measured float64) float64 {
	switch p {
	case Timing:
		return min(max(raw, 0.1), 0.4)
	case TimingLength:
		return min(max(measured, 0.1), 0.3)
	case ShapeLength:
		return min(max(measured, 0.05), 0.5)
	case Trim:
		return min(1.3*raw, 0.1)
	case Orientation:
		return min(max(raw/2, 0.05), 0.25)
	case Gain:
		return min(measured, 0.4)
	case Duration, Amplitude:
		return min(measured, 0.3)
	case Offset:
		return min(measured, 0.5)
	case Shape:
		return min(measured, 0.2)
	}
	return measured
}

// prior is how many takes more than labels weigh as much as the default.
const prior = 10

// shrunk returns a value drawn towards another by how little is behind it.
func shrunk(value, towards, freedom float64) float64 {
	return (freedom*value + prior*towards) / (freedom + prior)
}

// positive returns the root of a square that may have come out below 0.
func positive(square float64) float64 { return math.Sqrt(max(0, square)) }
