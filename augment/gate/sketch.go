package gate

import (
	"cmp"
	"hash/fnv"
	"math"
	"slices"

	"strandwise/channels"
)

// sketched is the number of frames of a sketch.
const sketched = 32

// sketch appends a take's values at as many instants as a sketch has, evenly
// spaced over its clock and read linearly between frames, each multiplied by
// its channel's factor.
func sketch(dst []float64, t *channels.Take, factor []float64) []float64 {
	w, last := t.Width(), t.Frames()-1
	for k, i := 0, 0; k < sketched; k++ {
		at := t.Time[0] + t.Duration()*float64(k)/(sketched-1)
		for i < last-1 && t.Time[i+1] < at {
			i++
		}
		u, next := 0.0, i*w
		if i < last {
			u, next = min(1, (at-t.Time[i])/(t.Time[i+1]-t.Time[i])), (i+1)*w
		}
		for c := range w {
			a := t.Data[i*w+c]
			dst = append(dst, factor[c]*(a+u*(t.Data[next+c]-a)))
		}
	}
	return dst
}

// within returns the squared distance of two sketches, or something above
// bound as soon as it is above it.
func within(a, b []float64, bound float64) float64 {
	const block = 32
	sum := 0.0
	for len(a) > block && sum <= bound {
		sum += squares(a[:block], b[:block])
		a, b = a[block:], b[block:]
	}
	if sum > bound {
		return sum
	}
	return sum + squares(a, b[:len(a)])
}

func squares(a, b []float64) float64 {
	b = b[:len(a)]
	s, r := 0.0, 0.0
	i := 0
	for ; i+1 < len(a); i += 2 {
		d, e := a[i]-b[i], a[i+1]-b[i+1]
		s += d * d
		r += e * e
	}
	if i < len(a) {
		s += (a[i] - b[i]) * (a[i] - b[i])
	}
	return s + r
}

// reference is a recorded take that nearness is measured by.
type reference struct {
	id     string
	label  string
	hash   uint64
	values []float64
}

// reservoir keeps the references of one label with the smallest hashes of
// their ids, so that which ones does not depend on the order they come in.
type reservoir []reference

// offer keeps a reference when it is among the most first; values are only
// asked for then.
func (r reservoir) offer(id, label string, most int, values func() []float64) reservoir {
	h := fnv.New64a()
	h.Write([]byte(id))
	ref := reference{id: id, label: label, hash: h.Sum64()}
	at, _ := slices.BinarySearchFunc(r, ref, func(a, b reference) int {
		return cmp.Or(cmp.Compare(a.hash, b.hash), cmp.Compare(a.id, b.id))
	})
	if at >= most {
		return r
	}
	ref.values = values()
	r = slices.Insert(r, at, ref)
	return r[:min(len(r), most)]
}

// nearest returns the distances of a sketch to the nearest reference of its
// label and of any other, leaving out the reference of the given id; infinite
// where there is none.
func nearest(values []float64, id, label string, references []reference) (own, other float64) {
	own, other = math.Inf(1), math.Inf(1)
	for i := range references {
		switch r := &references[i]; {
		case r.id == id:
		case r.label == label:
			own = min(own, within(values, r.values, own))
		default:
			other = min(other, within(values, r.values, other))
		}
	}
	return math.Sqrt(own), math.Sqrt(other)
}
