package realism

import (
	"math"

	"strandwise/channels"
)

// Spread compares how far takes are from the medoid of their label, the
// recorded take with the least sum of distances to the others. Distances are
// Euclidean, of takes read at 64 instants with their groups scaled alike, per
// value.
type Spread struct {
	Recorded    float64 `json:"recorded"`    // mean distance of the recorded takes other than the medoid
	Synthetic   float64 `json:"synthetic"`   // mean distance of the synthetic ones
	Wasserstein float64 `json:"wasserstein"` // distance of the two samples, as a multiple of Recorded
}

// laid is the number of instants at which takes are compared.
const laid = 64

// spread compares recorded points with synthetic ones; nil where there are
// fewer than three recorded ones, no synthetic one, or recorded ones that are
// all alike.
func spread(recorded, synthetic [][]float64) *Spread {
	if len(recorded) < 3 || len(synthetic) == 0 {
		return nil
	}
	centre := medoid(recorded)
	var near, far []float64
	for i, p := range recorded {
		if i != centre {
			near = append(near, distance(p, recorded[centre]))
		}
	}
	for _, p := range synthetic {
		far = append(far, distance(p, recorded[centre]))
	}
	s := &Spread{Recorded: mean(near), Synthetic: mean(far)}
	if s.Recorded == 0 {
		return nil
	}
	s.Wasserstein = Wasserstein(near, far) / s.Recorded
	return s
}

// medoid returns the place of the point with the least sum of distances to the
// others, the first among equals.
func medoid(points [][]float64) int {
	best, least := 0, math.Inf(1)
	for i, p := range points {
		sum := 0.0
		for _, q := range points {
			sum += distance(p, q)
		}
		if sum < least {
			best, least = i, sum
		}
	}
	return best
}

// distance is the root mean square difference of two points.
func distance(a, b []float64) float64 {
	sum := 0.0
	for i, v := range a {
		sum += (v - b[i]) * (v - b[i])
	}
	return math.Sqrt(sum / float64(len(a)))
}

// point lays a take out at evenly spaced instants, read linearly, with its
// groups scaled alike, as a take of its own.
func point(t *channels.Take, scales *channels.Scales) *channels.Take {
	values, w, last := scales.Apply(t), t.Width(), t.Frames()-1
	out := *t
	out.Time, out.Data = make([]float64, laid), make([]float64, 0, laid*w)
	for k, i := 0, 0; k < laid; k++ {
		at := t.Time[0] + t.Duration()*float64(k)/(laid-1)
		for i < last-1 && t.Time[i+1] < at {
			i++
		}
		u := min(1, (at-t.Time[i])/(t.Time[i+1]-t.Time[i]))
		for c := range w {
			out.Data = append(out.Data, (1-u)*values[i*w+c]+u*values[(i+1)*w+c])
		}
		out.Time[k] = float64(k)
	}
	return &out
}

// mean returns the mean, NaN of nothing.
func mean(x []float64) float64 {
	sum := 0.0
	for _, v := range x {
		sum += v
	}
	return sum / float64(len(x))
}
