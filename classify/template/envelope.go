package template

import (
	"math/bits"
	"slices"
)

// segmentFrames is the number of frames a segment holds. Bounds from segments
// are a little looser than from frames, and four times as fast.
const segmentFrames = 4

// segments is a sketch cut into runs of frames. What it holds per channel and
// segment lies channel after channel.
type segments struct {
	whole, all int          // segments with all their frames, and with what is left
	sums       []int32      // sum of the levels
	high, low  []int32      // greatest and least level
	ranges     []levelRange // per channel
}

// levelRange is the range of a channel over a take.
type levelRange struct {
	high, low   int32 // of the levels
	most, least int32 // of the sums of whole segments
}

// reset makes room for a take of so many frames and channels.
func (s *segments) reset(frames, width int) {
	s.whole, s.all = frames/segmentFrames, (frames+segmentFrames-1)/segmentFrames
	n := width * s.all
	s.sums, s.high, s.low, s.ranges = zeros(s.sums, n), sized(s.high, n), sized(s.low, n), sized(s.ranges, width)
}

// add adds the level of frame i of a channel, frame after frame.
func (s *segments) add(channel, i int, level int32) {
	at := channel*s.all + i/segmentFrames
	s.sums[at] += level
	if i%segmentFrames == 0 {
		s.high[at], s.low[at] = level, level
		return
	}
	s.high[at], s.low[at] = max(s.high[at], level), min(s.low[at], level)
}

// close ends a channel, of which every frame has been added.
func (s *segments) close(channel int) {
	from, to := channel*s.all, (channel+1)*s.all
	r := levelRange{high: slices.Max(s.high[from:to]), low: slices.Min(s.low[from:to]), most: -outside, least: outside}
	for _, v := range s.sums[from : from+s.whole] {
		r.most, r.least = max(r.most, v), min(r.least, v)
	}
	s.ranges[channel] = r
}

// envelope holds, for every segment, the greatest and the least level that a
// path within the band can meet in another take: segmentFrames times each, as
// against the sums of the segments.
type envelope struct {
	stride    int     // from channel to channel
	high, low []int32 // channel after channel
}

// radius returns the number of segments that a half width in frames leads ahead
// or behind, or somewhat more: large ones are rounded up, so that few different
// envelopes serve takes of many lengths.
func radius(half int) int {
	r := (half + segmentFrames - 1) / segmentFrames
	const digits = 3 // binary
	if shift := bits.Len(uint(r)) - digits; shift > 0 {
		r = (r + 1<<shift - 1) >> shift << shift
	}
	return r
}

// wrap makes e the envelope around s of a radius in segments.
func (e *envelope) wrap(s *segments, radius int) {
	width := len(s.ranges)
	// The other take may be longer by radius segments. Around these and the own
	// ones come margins that the window reaches into.
	e.stride = s.all + 3*radius
	e.high, e.low = sized(e.high, width*e.stride), sized(e.low, width*e.stride)
	for c := range width {
		high, low := e.high[c*e.stride:][:e.stride], e.low[c*e.stride:][:e.stride]
		for k := range high {
			high[k], low[k] = -outside, -outside
		}
		for g, v := range s.high[c*s.all:][:s.all] {
			high[radius+g], low[radius+g] = segmentFrames*v, -segmentFrames*s.low[c*s.all+g]
		}
		greatest(high, 2*radius+1)
		greatest(low, 2*radius+1)
		for k, v := range low {
			low[k] = -v
		}
	}
}

// outside is above what any segment holds.
const outside = 1 << 24

// greatest sets every value to the greatest of itself and those after it that
// are in a window of so many, as far as there are so many. Windows of two of a
// size make one of twice the size, and overlap for what is left.
func greatest(x []int32, window int) {
	size := 1
	for ; 2*size <= window; size *= 2 {
		later(x, size)
	}
	later(x, window-size)
}

// later sets every value to the greater of itself and the one so many after.
func later(x []int32, after int) {
	if after >= len(x) {
		return
	}
	ahead := x[after:]
	for i, v := range ahead {
		x[i] = max(x[i], v)
	}
}

// keogh bounds from below, for every segment and those after it, what the frames
// of s cost on a path within an envelope, and returns the bound for all of them:
// LB_Keogh of Keogh and Ratanamahatana, "Exact indexing of dynamic time
// warping", Knowledge and Information Systems 7 (2005) 358, on means of segments
// as in its section on indexing, and summed over channels as by Rath and
// Manmatha, "Lower-bounding of dynamic time warping distances for multivariate
// time series", University of Massachusetts (2003). rest has one entry per
// segment, and one more.
func (s *segments) keogh(rest []uint64, e *envelope) uint64 {
	clear(rest)
	for from, at := 0, 0; from < len(s.sums); from, at = from+s.all, at+e.stride {
		addGaps(rest, s.sums[from:][:s.whole], e.high[at:], e.low[at:])
	}
	return sumFromEnd(rest)
}

// addGaps adds the squares of how far the sums lie outside the envelope.
func addGaps(dst []uint64, sums, high, low []int32) {
	dst, high, low = dst[:len(sums)], high[:len(sums)], low[:len(sums)]
	for g, v := range sums {
		gap := uint64(max(v-high[g], low[g]-v, 0))
		dst[g] += gap * gap
	}
}

// yi is keogh for a path that may meet any frame of the other take, whose
// envelope is its range: the bound of Yi, Jagadish, Faloutsos, "Efficient
// retrieval of similar time sequences under time warping", ICDE (1998) 201.
func (s *segments) yi(rest []uint64, o *segments) uint64 {
	clear(rest)
	for c, r := range s.ranges {
		high, low := segmentFrames*o.ranges[c].high, segmentFrames*o.ranges[c].low
		if r.most <= high && r.least >= low {
			continue
		}
		for g, v := range s.sums[c*s.all:][:s.whole] {
			gap := uint64(max(v-high, low-v, 0))
			rest[g] += gap * gap
		}
	}
	return sumFromEnd(rest)
}

// sumFromEnd turns the squared gaps of the sums of segments into what each
// segment and those after it cost, and returns what all of them do. The gap of
// the sums, squared, is segmentFrames² that of the means, which every frame
// of the segment costs.
func sumFromEnd(rest []uint64) uint64 {
	sum := uint64(0)
	for g := len(rest) - 1; g >= 0; g-- {
		sum += rest[g]
		rest[g] = sum / segmentFrames
	}
	return rest[0]
}
