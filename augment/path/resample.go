package path

import "math"

// Resample makes one synthetic path of n = len(intervals)+1 points by the
// published method and returns it in dst, n × width coordinates (nil
// allocates): the points at the cumulated fractions of the arc length, every
// between-point vector scaled to Length/(n−1), chained from the source's first
// point. Where two drawn points coincide (a path that doubles back on itself)
// the direction of travel at the first of them stands in for their difference.
// A path of no length gives n copies of its point.
func (a *Arc) Resample(dst, intervals []float64) []float64 {
	w, n := a.width, len(intervals)+1
	if n < 2 {
		panic("path: resampling needs at least one interval")
	}
	if dst == nil {
		dst = make([]float64, n*w)
	}
	if len(dst) != n*w {
		panic("path: destination does not hold n points")
	}
	at := a.pick(dst, intervals)
	a.chain(dst, at, a.Length()/float64(n-1))
	return dst
}

// pick writes into dst the points at the cumulated fractions of the arc
// length, and returns the segment each was found on.
func (a *Arc) pick(dst, intervals []float64) []int {
	w, n := a.width, len(intervals)+1
	sum := 0.0
	for _, x := range intervals {
		sum += x
	}
	scale := a.Length() / sum
	at := make([]int, n)
	s, seg := 0.0, 0
	for k := range n {
		if k > 0 {
			s += intervals[k-1]
		}
		position := s * scale
		if k == n-1 {
			position = a.Length()
		}
		i, along := a.segment(position, seg)
		p, q, o := a.point(i), a.point(i+1), dst[k*w:(k+1)*w]
		for c := range o {
			o[c] = p[c] + along*(q[c]-p[c])
		}
		at[k], seg = i, i
	}
	return at
}

// chain replaces the points in dst by the chain of their differences, each
// scaled to the given length.
func (a *Arc) chain(dst []float64, at []int, length float64) {
	w := a.width
	from := append([]float64(nil), dst[:w]...) // the picked point, before it was moved
	step := make([]float64, w)
	for k := 1; k < len(at); k++ {
		here, before := dst[k*w:(k+1)*w], dst[(k-1)*w:k*w]
		sum := 0.0
		for c := range step {
			step[c] = here[c] - from[c]
			from[c] = here[c]
			sum += step[c] * step[c]
		}
		if sum == 0 {
			a.tangent(step, at[k-1])
			for _, d := range step {
				sum += d * d
			}
		}
		scale := 0.0
		if sum > 0 {
			scale = length / math.Sqrt(sum)
		}
		for c := range step {
			here[c] = before[c] + scale*step[c]
		}
	}
}
