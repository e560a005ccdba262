package template

import "slices"

// A sketch is a part of a take in whole numbers, from which distances can be
// bounded from below by exact integer arithmetic at a fraction of their cost.
//
// Values are rounded to levels of a ruler, which moves the difference of two
// values by at most one step; values out of its range are moved to its end,
// which takes no two of them further apart. Seen as one vector over the cells of
// a path and the channels, the differences of the sketches are then longer than
// those of the takes by at most √(cells × channels) steps, so that by the
// triangle inequality
//
//	√cost of the takes ≥ step × (√cost of the sketches − √(cells × channels))
//
// along every path, hence along the best. To hold coarse forms of the takes
// against each other first is the idea of Sakurai, Yoshikawa, Faloutsos, "FTW:
// fast similarity search under the time warping distance", PODS 2005; those are
// coarse in time, these in value.
type sketch struct {
	frames   int
	single   bool     // there is one channel, and a word is its level
	words    []uint64 // three channels a word; word after word, all frames of each
	norms    []uint64 // per frame: the sum of the squares of its levels
	segments segments
}

// Three channels share a word, so that one multiplication of two words, one of
// them with its channels in reverse, gives three products and their sum: the
// middle one of the five fields of the product, of which the upper two do not
// fit and are lost. Levels are such that the sum of two products of words, and
// the fields below, do not spill.
const (
	field    = 22           // bits from channel to channel in a word
	perWord  = 3            // channels in a word
	atOnce   = 2            // words whose products are added up
	sumBits  = 64 - 2*field // bits of the sum of products
	doubling = 2*field - 1  // bits to shift for twice the sum
)

// draw sketches the values of a part, which are frame-major. The sketch of a
// query and that of a template have their channels in opposite order in a word.
func (s *sketch) draw(r *ruler, values []float64, reverse bool) {
	s.frames, s.single = len(values)/r.width, r.width == 1
	s.words = zeros(s.words, (r.width+perWord-1)/perWord*s.frames)
	s.norms = zeros(s.norms, s.frames)
	s.segments.reset(s.frames, r.width)
	for c := range r.width {
		place := c % perWord
		if reverse && !s.single {
			place = perWord - 1 - place
		}
		words := s.words[c/perWord*s.frames:][:s.frames]
		for i := range words {
			v := r.level(values[i*r.width+c], c)
			words[i] |= v << (field * place)
			s.norms[i] += v * v
			s.segments.add(c, i, int32(v))
		}
		s.segments.close(c)
	}
}

// zeros returns n zeros, in the memory of s when it is large enough.
func zeros[T any](s []T, n int) []T {
	s = sized(s, n)
	clear(s)
	return s
}

// sized returns n values, whatever they are, in the memory of s when it is large
// enough.
func sized[T any](s []T, n int) []T { return slices.Grow(s[:0], n)[:n] }

// cost returns the squared distance of frame i to frame j of o.
func (s *sketch) cost(i int, o *sketch, j int) uint64 {
	if s.single {
		d := s.words[i] - o.words[j]
		return d * d
	}
	sum := s.norms[i] + o.norms[j]
	for ; i < len(s.words); i, j = i+s.frames, j+o.frames {
		sum -= s.words[i] * o.words[j] >> doubling
	}
	return sum
}

// costs sets dst to the squared distances of frame i to the frames of o from
// frame lo on.
func (s *sketch) costs(dst []uint64, i int, o *sketch, lo int) {
	sum, norm, k, words := o.norms[lo:], s.norms[i], 0, len(s.words)/s.frames
	for ; k+atOnce <= words; k += atOnce {
		a, b := s.words[k*s.frames+i:], o.words[k*o.frames+lo:]
		lessTwo(dst, sum, norm, a[0], a[s.frames], b, b[o.frames:])
		sum, norm = dst, 0
	}
	if k < words {
		lessOne(dst, sum, norm, s.words[k*s.frames+i], o.words[k*o.frames+lo:])
	}
}

// lessTwo sets dst to sum + norm less twice the products of a0 with the words of
// b0 and of a1 with those of b1.
func lessTwo(dst, sum []uint64, norm, a0, a1 uint64, b0, b1 []uint64) {
	sum, b0, b1 = sum[:len(dst)], b0[:len(dst)], b1[:len(dst)]
	for j := range dst {
		dst[j] = sum[j] + norm - (a0*b0[j]+a1*b1[j])>>doubling
	}
}

// lessOne is lessTwo for one word.
func lessOne(dst, sum []uint64, norm, a uint64, b []uint64) {
	sum, b = sum[:len(dst)], b[:len(dst)]
	for j := range dst {
		dst[j] = sum[j] + norm - a*b[j]>>doubling
	}
}
