package path

import "math"

// Straightener applies displacement normalisation to one group of a take, by
// a strength between 0 and 1. Between knots k and k+1 the source moves by the
// vector d[k]; the new take moves by
//
//	d[k]·(ℓ/|d[k]|)^strength,   ℓ the mean of |d|
//
// so strength 0 keeps every displacement and strength 1 gives all the same
// length, as the published method does. What the path does between two knots
// beside their straight line is kept as it is, which leaves rests at rest.
type Straightener struct {
	width int
	moved []float64 // knots × width: how far each knot is displaced from the source
}

// NewStraightener works on knots × width coordinates, the source's values at
// the drawn knots; it does not keep them.
func NewStraightener(knots []float64, width int, strength float64) *Straightener {
	n := len(knots) / width
	s := &Straightener{width: width, moved: make([]float64, n*width)}
	lengths, mean := make([]float64, n-1), 0.0
	for k := range lengths {
		lengths[k] = distance(knots[k*width:(k+1)*width], knots[(k+1)*width:(k+2)*width])
		mean += lengths[k] / float64(n-1)
	}
	for k, length := range lengths {
		extra := 0.0
		if length > 0 {
			extra = math.Pow(mean/length, strength) - 1
		}
		for c := range width {
			i := k*width + c
			s.moved[i+width] = s.moved[i] + extra*(knots[i+width]-knots[i])
		}
	}
	return s
}

// Add displaces values, the source's at parameter p of the new take (0 to 1,
// knots evenly spaced), to where the straightened path runs.
func (s *Straightener) Add(values []float64, p float64) {
	last := len(s.moved)/s.width - 2
	x := p * float64(last+1)
	k := min(max(int(x), 0), last)
	along := x - float64(k)
	for c := range values {
		i := k*s.width + c
		values[c] += s.moved[i] + along*(s.moved[i+s.width]-s.moved[i])
	}
}
