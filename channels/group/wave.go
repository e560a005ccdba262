package group

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// waves is the number of cosines by which a residual is described: over the
// clock u from 0 to 1, cos(πku) for k = 0, 1 … 3. A shift of the whole, a
// change of tempo, and two slow bends are what alignment reads reliably on
// recorded takes; what is faster is mostly its noise.
const waves = 4

// How a timing map is read, see [waveReader].
const (
	stillness = 0.1  // the mean squared speed times this is the speed at which a frame counts half
	smallness = 0.05 // weight of the preference for small waves, against a weight of one for a take that moves all along
)

// waveReader describes timing maps by cosines. Alignment knows nothing of the
// timing of a limb that rests: there its map is whatever joins the movement
// before to the movement after, or to the ends of the recording, which all limbs
// share. So cosines are fitted by least squares in which a frame counts by
// s/(s + 0.1), s being the medoid's squared speed there over its mean, with a
// weak preference for small waves, the stronger the faster they are (ridge
// regression), where too little moves to tell.
type waveReader struct {
	rows [waves][]float64 // what each wave is, as a weighted sum over frames
}

// newWaveReader prepares for maps onto this medoid, frames × width values. clock
// is the place of each of its frames, from 0 to 1 and not decreasing.
func newWaveReader(medoid []float64, width int, clock []float64) *waveReader {
	weight := movement(medoid, width)
	for f := range weight {
		before, after := max(f-1, 0), min(f+1, len(clock)-1)
		weight[f] *= (clock[after] - clock[before]) / 2
	}
	normal := mat.NewSymDense(waves, nil)
	for j := range waves {
		for k := j; k < waves; k++ {
			sum := 0.0
			for f, w := range weight {
				sum += w * wave(j, clock[f]) * wave(k, clock[f])
			}
			if j == k {
				sum += smallness * float64(1+k*k)
			}
			normal.SetSym(j, k, sum)
		}
	}
	var solved mat.Dense
	if err := solved.Inverse(normal); err != nil {
		panic("group: " + err.Error()) // the ridge keeps it far from singular
	}
	r := &waveReader{}
	for j := range waves {
		r.rows[j] = make([]float64, len(clock))
		for f, w := range weight {
			for k := range waves {
				r.rows[j][f] += solved.At(j, k) * w * wave(k, clock[f])
			}
		}
	}
	return r
}

// commonClock returns the mean instant at which takes show each frame of the
// medoid, from 0 to 1 as a part of their mean duration. The medoid's own clock
// would not do: it runs ahead here and behind there, differently in each limb,
// so that one place on it is not one instant of two limbs.
func commonClock(maps [][]float64, stretch []float64) []float64 {
	out := make([]float64, len(maps[0]))
	mean := 0.0
	for i, at := range maps {
		mean += stretch[i]
		for f, v := range at {
			out[f] += v * stretch[i]
		}
	}
	for f := range out {
		out[f] /= mean * float64(len(out)-1)
	}
	return out
}

// movement returns how much each frame counts, between 0 and 1.
func movement(v []float64, width int) []float64 {
	n := len(v) / width
	out := make([]float64, n)
	if stands(v, width) {
		return out
	}
	mean := 0.0
	for f := range n {
		a, b := max(f-1, 0), min(f+1, n-1)
		for c := range width {
			d := v[b*width+c] - v[a*width+c]
			out[f] += d * d
		}
		mean += out[f] / float64(n)
	}
	for f, s := range out {
		if s > 0 {
			out[f] = s / (s + stillness*mean)
		}
	}
	return out
}

// stands tells whether values never move but by rounding.
func stands(v []float64, width int) bool {
	const rounding = 1e-12
	for i, x := range v {
		if math.Abs(x-v[i%width]) > rounding*math.Abs(x) {
			return false
		}
	}
	return true
}

// append appends the waves of how far a take runs behind the medoid, in parts
// of the label's median duration; at is the take's frame at each frame of the
// medoid, and the two durations are in the same parts. Both takes are counted
// from their first frames in the recording's own time, not in parts of the
// take: the length of a recording is set by whichever limb ends last, so parts
// of it would tie limbs to each other that are independent.
func (r *waveReader) append(dst, at []float64, duration, medoid float64) []float64 {
	for _, row := range r.rows {
		sum := 0.0
		for f, v := range at {
			sum += (v*duration - float64(f)*medoid) * row[f]
		}
		dst = append(dst, sum/float64(len(at)-1))
	}
	return dst
}

// wave is cosine k at the place u of the clock.
func wave(k int, u float64) float64 { return math.Cos(math.Pi * float64(k) * u) }
