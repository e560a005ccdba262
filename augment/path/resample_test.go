package path_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"

	"strandwise/augment/path"
)

// A path of two legs, 3 to the right and 1 up, is 4 long. Worked by hand:
// equal intervals pick (0,0), (2,0), (3,1), whose differences (2,0) and (1,1)
// are both brought to the length 4/2; intervals 1:3 pick (0,0), (1,0), (3,1)
// with the differences (1,0) and (2,1).
func TestResampleWorkedByHand(t *testing.T) {
	arc := path.NewArc([]float64{0, 0, 3, 0, 3, 1}, 2)
	for _, c := range []struct {
		name            string
		intervals, want []float64
	}{
		{"equal", []float64{1, 1}, []float64{0, 0, 2, 0, 2 + math.Sqrt2, math.Sqrt2}},
		{"one to three", []float64{0.5, 1.5}, []float64{0, 0, 2, 0, 2 + 4/math.Sqrt(5), 2 / math.Sqrt(5)}},
		{"one interval", []float64{1}, []float64{0, 0, 4 * 3 / math.Sqrt(10), 4 * 1 / math.Sqrt(10)}},
	} {
		near(t, c.name, arc.Resample(nil, c.intervals), c.want, 1e-14)
	}
}

func TestResampleCoincidentPoints(t *testing.T) {
	for _, c := range []struct {
		name                    string
		width                   int
		points, intervals, want []float64
	}{
		// There and back, 2 long: positions 0, 0.5, 1.5, 2 pick 0, ½, ½, 0. The
		// second step has no direction of its own and goes on forwards.
		{"doubling back", 1, []float64{0, 1, 0}, []float64{0.5, 1, 0.5}, []float64{0, 2. / 3, 4. / 3, 2. / 3}},
		{"doubling back at a rest", 1, []float64{0, 1, 1, 1, 0}, []float64{0.5, 1, 0.5}, []float64{0, 2. / 3, 4. / 3, 2. / 3}},
		// Positions 0, 2, 4: both ends and the middle are the same point. The
		// start is left to the right; the middle, a corner, is reached leftwards.
		{"closed path", 2, []float64{0, 0, 1, 0, 0, 0, 0, 1, 0, 0}, []float64{1, 1}, []float64{0, 0, 2, 0, 0, 0}},
		// One step from end to end, whose direction is that of the first leg after
		// the rest at the start.
		{"rest and come back", 1, []float64{0, 0, 1, 0}, []float64{1}, []float64{0, 2}},
		{"no length", 2, []float64{5, 7, 5, 7, 5, 7}, []float64{1, 1, 1}, []float64{5, 7, 5, 7, 5, 7, 5, 7}},
	} {
		got := path.NewArc(c.points, c.width).Resample(nil, c.intervals)
		near(t, c.name, got, c.want, 1e-14)
	}
}

// The definition: every between-point length is the same, and their sum is the
// length of the source.
func TestResampleKeepsLength(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	for width := 1; width <= 8; width++ {
		points := walk(rng, 100, width)
		arc := path.NewArc(points, width)
		for _, n := range []int{2, 3, 16, 64} {
			got := arc.Resample(nil, path.Intervals(make([]float64, n-1), 0.25, rng))
			want := arc.Length() / float64(n-1)
			for k, leg := range legs(got, width) {
				if math.Abs(leg-want) > 1e-12*want {
					t.Fatalf("width %d, %d points: leg %d is %v long, want %v", width, n, k, leg, want)
				}
			}
			near(t, "first point", got[:width], points[:width], 0)
			near(t, "whole length", []float64{sum(legs(got, width))}, []float64{arc.Length()}, 1e-12*arc.Length())
		}
	}
}

func TestResampleAgreesWithPlainReference(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		points, width := drawPath(t)
		arc := path.NewArc(points, width)
		intervals := rapid.SliceOfN(rapid.Float64Range(0.1, 1.9), 1, 64).Draw(t, "intervals")
		before := append([]float64(nil), points...)

		got := arc.Resample(make([]float64, (len(intervals)+1)*width), intervals)

		near(t, "source", points, before, 0)
		reference, shortest := plainResample(points, width, intervals)
		// Bringing a short step to full length enlarges its rounding alike.
		rounding := 8 * 0x1p-52 * (1 + largest(points) + arc.Length())
		near(t, "points", got, reference, rounding*(1+arc.Length()/shortest))
		if arc.Length() == 0 {
			return
		}
		want := arc.Length() / float64(len(intervals))
		for k, leg := range legs(got, width) {
			if math.Abs(leg-want) > 1e-12*want+rounding {
				t.Fatalf("leg %d is %v long, want %v", k, leg, want)
			}
		}
	})
}

// plainResample is the published method word for word, slowly: every position
// is searched for from the start of the path, and no state is carried from one
// point to the next but the chain itself. It also returns the length of the
// shortest step between two drawn points that differ, at most the whole.
func plainResample(points []float64, width int, intervals []float64) (out []float64, shortest float64) {
	segments, n := legs(points, width), len(intervals)+1
	whole, scale := sum(segments), sum(segments)/sum(intervals)
	out, shortest = append(out, points[:width]...), max(whole, 1)
	for k := 1; k < n; k++ {
		from, to := sum(intervals[:k-1])*scale, sum(intervals[:k])*scale
		if k == n-1 {
			to = whole
		}
		step := difference(plainPoint(points, width, from), plainPoint(points, width, to))
		if length(step) == 0 {
			step = plainDirection(points, width, from)
		} else {
			shortest = min(shortest, length(step))
		}
		here := append([]float64(nil), out[len(out)-width:]...)
		for c := range here {
			if whole > 0 {
				here[c] += whole / float64(n-1) / length(step) * step[c]
			}
		}
		out = append(out, here...)
	}
	return out, shortest
}

// plainSegment returns the first segment that reaches the position, the last
// one when rounding leaves the position beyond the end.
func plainSegment(points []float64, width int, position float64) int {
	segments := legs(points, width)
	for i := range segments {
		if sum(segments[:i+1]) >= position {
			return i
		}
	}
	return len(segments) - 1
}

func plainPoint(points []float64, width int, position float64) []float64 {
	i := plainSegment(points, width, position)
	segments := legs(points, width)
	p, q := points[i*width:(i+1)*width], points[(i+1)*width:(i+2)*width]
	out := append([]float64(nil), p...)
	if segments[i] == 0 {
		return out
	}
	along := min((position-sum(segments[:i]))/segments[i], 1)
	for c := range out {
		out[c] += along * (q[c] - p[c])
	}
	return out
}

// plainDirection is the first leg with a length at or after the position, else
// the last before it.
func plainDirection(points []float64, width int, position float64) []float64 {
	segments, at := legs(points, width), plainSegment(points, width, position)
	best := -1
	for i, leg := range segments {
		if leg > 0 && (best < at || best < 0) {
			best = i
		}
	}
	if best < 0 {
		return make([]float64, width)
	}
	return difference(points[best*width:(best+1)*width], points[(best+1)*width:(best+2)*width])
}

func TestResampleMisuse(t *testing.T) {
	arc := path.NewArc([]float64{0, 1}, 1)
	panics(t, "no interval", func() { arc.Resample(nil, nil) })
	panics(t, "wrong destination", func() { arc.Resample(make([]float64, 2), []float64{1, 1}) })
	panics(t, "one point", func() { path.NewArc([]float64{1, 2}, 2) })
	panics(t, "no width", func() { path.NewArc([]float64{1, 2}, 0) })
	panics(t, "torn row", func() { path.NewArc([]float64{1, 2, 3, 4, 5}, 2) })
}
