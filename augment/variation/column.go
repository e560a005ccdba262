package variation

import "math"

// column is one number that a pair of takes gives: a square, so that means
// over pairs add up.
type column struct {
	part   Part
	of     string  // limb or group, empty for the whole take or all groups together
	group  int     // of a group, its index; -1 otherwise
	median bool    // the column is summed up by its median, not its mean
	pieces float64 // independent pieces of evidence in a pair, at least
}

// gaussMedian is the median of the absolute value of a standard normal draw.
const gaussMedian = 0.6744897501960817

// columns says what stands where in the row of a pair. The first of each kind
// is for the whole take.
type columns struct {
	list []column
	// Places in the row. Of timing, limb l has its two at limbTiming+2l.
	timing, limbTiming, trim, duration, orientation int
	amplitude, gain, offset, shape, increment, turn int // of the first group; the others follow, and then the mean over groups
}

// Columns of no part of their own: the mean squared distance of a timing map
// from a straight line, which with its slope tells TimingLength, and the mean
// squared increment of what is left, which with its size tells ShapeLength.
const (
	bend      Part = "bend of the timing map"
	increment Part = "increment of the shape"
)

// source returns the part of the model that a column answers to.
func (c column) source() Part {
	switch c.part {
	case bend:
		return Timing
	case increment:
		return Shape
	}
	return c.part
}

func (f *form) columns() *columns {
	c := &columns{}
	add := func(p Part, of string, median bool, pieces float64) int {
		c.list = append(c.list, column{p, of, -1, median, pieces})
		return len(c.list) - 1
	}
	c.timing = add(Timing, "", false, 2)
	add(bend, "", false, 1)
	c.trim = add(Trim, "", false, 1)
	c.duration = add(Duration, "", false, 1)
	c.orientation = add(Orientation, "", true, 0.7)
	c.limbTiming = len(c.list)
	if len(f.limbs) > 1 {
		for _, name := range f.limbNames {
			add(Timing, name, false, 2)
			add(bend, name, false, 1)
		}
	}
	groups := func(p Part, median bool, pieces float64) int {
		first := len(c.list)
		for g, group := range f.layout.Groups {
			c.list[add(p, group.Name, median, pieces)].group = g
		}
		return first
	}
	together := func(p Part, pieces float64) int {
		first := groups(p, false, pieces)
		add(p, "", false, pieces) // the mean over groups
		return first
	}
	c.amplitude = together(Amplitude, 1)
	c.gain = together(Gain, 2)
	c.offset = together(Offset, 1)
	c.shape = together(Shape, 2)
	c.increment = together(increment, 2)
	c.turn = groups(Orientation, true, 0.7)
	return c
}

// raw turns a column summed up over pairs into the plain size: pairs differ
// by twice the variance of takes.
func (c column) raw(square float64) float64 {
	if c.median {
		return positive(square) / gaussMedian / math.Sqrt2
	}
	return positive(square / 2)
}
