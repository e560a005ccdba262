package template

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// pair is two parts of takes, and what holds between them.
type pair struct {
	ruler          ruler
	a, b           series
	query, other   sketch
	half           int
	levelA, levelB [][]int64 // frames × channels
}

// drawPair draws two random walks with values far out now and then.
func drawPair(t *rapid.T) *pair {
	width := rapid.IntRange(1, 14).Draw(t, "width")
	p := &part{width: width, weight: 1}
	drawSeries := func(name string) series {
		n := rapid.IntRange(2, 40).Draw(t, name+" frames")
		data := rapid.SliceOfN(rapid.Float64Range(-1, 1), n*width, n*width).Draw(t, name)
		for i := width; i < len(data); i++ {
			data[i] += data[i-width]
		}
		if rapid.Bool().Draw(t, name+" spiked") {
			data[rapid.IntRange(0, len(data)-1).Draw(t, name+" spike")] = 50
		}
		return series{frames: n, data: data}
	}
	x := &pair{a: drawSeries("a"), b: drawSeries("b")}
	x.ruler = newRuler(p, []series{x.a, x.b})
	x.query.draw(&x.ruler, x.a.data, false)
	x.other.draw(&x.ruler, x.b.data, true)
	x.levelA, x.levelB = x.levels(&x.a), x.levels(&x.b)
	apart := max(x.a.frames-x.b.frames, x.b.frames-x.a.frames)
	x.half = max(1, apart, rapid.SampledFrom([]int{0, 1, 2, 3, 4, 5, 8, 12, 16, 40}).Draw(t, "half width"))
	return x
}

func (x *pair) levels(s *series) [][]int64 {
	out := make([][]int64, s.frames)
	for i := range out {
		for c := range x.ruler.width {
			out[i] = append(out[i], int64(x.ruler.level(s.data[i*x.ruler.width+c], c)))
		}
	}
	return out
}

// plainCost returns the least cost of a path in a table of n × m cells.
func plainCost[T int64 | float64](n, m, half int, endless T, cost func(i, j int) T) T {
	above := make([]T, m+1)
	for j := range above {
		above[j] = endless
	}
	above[0] = 0
	for i := range n {
		row := make([]T, m+1)
		row[0] = endless
		for j := range m {
			row[j+1] = endless
			if max(i-j, j-i) <= half {
				row[j+1] = cost(i, j) + min(above[j], above[j+1], row[j])
			}
		}
		above = row
	}
	return above[m]
}

// sketches returns the least cost of the levels, and takes that of the values.
func (x *pair) sketches() uint64 {
	return uint64(plainCost(x.a.frames, x.b.frames, x.half, 1<<60, func(i, j int) int64 {
		return squaresOf(x.levelA[i], x.levelB[j])
	}))
}

func (x *pair) takes() float64 {
	w := x.ruler.width
	return plainCost(x.a.frames, x.b.frames, x.half, math.Inf(1), func(i, j int) float64 {
		return squaresOf(x.a.data[i*w:(i+1)*w], x.b.data[j*w:(j+1)*w])
	})
}

func squaresOf[T int64 | float64](a, b []T) T {
	var sum T
	for c := range a {
		sum += (a[c] - b[c]) * (a[c] - b[c])
	}
	return sum
}

// TestSketchCosts holds the products of words against plain sums of squares.
func TestSketchCosts(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := drawPair(t)
		for i, a := range x.levelA {
			got := make([]uint64, len(x.levelB))
			if !x.query.single {
				x.query.costs(got, i, &x.other, 0)
			}
			for j, b := range x.levelB {
				want := uint64(squaresOf(a, b))
				if c := x.query.cost(i, &x.other, j); c != want {
					t.Fatalf("frames %d and %d cost %d, want %d", i, j, c, want)
				}
				if !x.query.single && got[j] != want {
					t.Fatalf("frames %d and %d cost %d in a row, want %d", i, j, got[j], want)
				}
			}
		}
	})
}

// TestSketchExtremes fills every channel with the highest level, and with the
// highest against the lowest: no sum spills into its neighbour.
func TestSketchExtremes(t *testing.T) {
	for width := 1; width <= 13; width++ {
		p := &part{width: width, weight: 1}
		low, high := slices.Repeat([]float64{0}, 2*width), slices.Repeat([]float64{1}, 2*width)
		r := newRuler(p, []series{{frames: 2, data: low}, {frames: 2, data: high}})
		for c := range r.origin {
			r.origin[c], r.step, r.perUnit = 0, 1/r.levels, r.levels
		}
		var a, b, c sketch
		a.draw(&r, high, false)
		b.draw(&r, high, true)
		c.draw(&r, low, true)
		if got := a.cost(0, &b, 1); got != 0 {
			t.Errorf("%d channels: equal frames cost %d", width, got)
		}
		if got, want := a.cost(0, &c, 1), uint64(width)*uint64(r.levels)*uint64(r.levels); got != want {
			t.Errorf("%d channels: frames a whole range apart cost %d, want %d", width, got, want)
		}
	}
}

// TestSketchBelow checks that what is concluded from a sketch is never above what
// holds for the takes, and the other way round.
func TestSketchBelow(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := drawPair(t)
		k, d, cells := x.sketches(), x.takes(), x.a.frames+x.b.frames-1
		if least := x.ruler.under(k, cells); least*least > d {
			t.Fatalf("sketches at %d say at least %g, takes are at %g", k, least*least, d)
		}
		if most := x.ruler.over(math.Sqrt(d), cells); most < k {
			t.Fatalf("takes at %g say sketches are at most at %d, they are at %d", d, most, k)
		}
	})
}

// TestBoundsBelow holds the bounds from segments against the cost of the sketches
// from every segment on, whatever it is matched with.
func TestBoundsBelow(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := drawPair(t)
		a, b := &x.query.segments, &x.other.segments
		var e envelope
		e.wrap(b, radius(x.half))
		keogh, yi := make([]uint64, a.all+1), make([]uint64, a.all+1)
		a.keogh(keogh, &e)
		a.yi(yi, b)
		for g := range keogh {
			inBand, anywhere := uint64(0), uint64(0)
			for i := g * segmentFrames; i < len(x.levelA); i++ {
				inBand += x.nearest(i, x.half)
				anywhere += x.nearest(i, len(x.levelA)+len(x.levelB))
			}
			if keogh[g] > inBand {
				t.Fatalf("from segment %d on the envelope says %d, the frames in the band say %d", g, keogh[g], inBand)
			}
			if yi[g] > anywhere {
				t.Fatalf("from segment %d on the range says %d, the frames say %d", g, yi[g], anywhere)
			}
		}
	})
}

// TestEnvelope holds envelopes against the greatest and least of every window.
func TestEnvelope(t *testing.T) {
	for frames := 2; frames < 70; frames += 3 {
		for radius := 1; radius <= 20; radius++ {
			var s segments
			s.reset(frames, 2)
			for c := range 2 {
				for i := range frames {
					s.add(c, i, int32((i*i*(7+c)+i)%400))
				}
				s.close(c)
			}
			var e envelope
			e.wrap(&s, radius)
			for c := range 2 {
				for g := range s.all + radius {
					from, to := c*s.all+max(0, g-radius), c*s.all+min(s.all, g+radius+1)
					high, low := 4*slices.Max(s.high[from:to]), 4*slices.Min(s.low[from:to])
					if at := c*e.stride + g; e.high[at] != high || e.low[at] != low {
						t.Fatalf("%d frames, radius %d: segment %d has %d to %d around it, want %d to %d", frames, radius, g, e.low[at], e.high[at], low, high)
					}
				}
			}
		}
	}
}

// nearest returns the least cost of frame i with a frame within a half width.
func (x *pair) nearest(i, half int) uint64 {
	least := uint64(math.MaxUint64)
	for j := max(0, i-half); j < min(len(x.levelB), i+half+1); j++ {
		least = min(least, uint64(squaresOf(x.levelA[i], x.levelB[j])))
	}
	return least
}

// TestTable holds the table against the plain one: it is never above it and,
// being told nothing of what is to come, in the full window equal to it; and it
// is given up only when the cost passes the limit.
func TestTable(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := drawPair(t)
		want := x.sketches()
		rest := make([]uint64, x.query.segments.all+1)
		if rapid.Bool().Draw(t, "told") {
			var e envelope
			e.wrap(&x.other.segments, radius(x.half))
			x.query.segments.keogh(rest, &e)
		}
		limit := want + uint64(rapid.IntRange(-1000, 1000).Draw(t, "beyond"))
		if limit > endless {
			limit = 0
		}
		var table table
		got := table.warp(&x.query, &x.other, x.half, limit, rest)
		switch {
		case want <= limit && got > want:
			t.Fatalf("table says %d, above the cost of %d; the limit is %d", got, want, limit)
		case got != endless && got > limit:
			t.Fatalf("table says %d above the limit of %d", got, limit)
		}
		if x.half >= max(len(x.levelA), len(x.levelB)) {
			if got := table.warp(&x.query, &x.other, x.half, endless, make([]uint64, len(rest))); got != want {
				t.Fatalf("full table says %d, want %d", got, want)
			}
		}
	})
}

// TestNoRuler draws sketches of takes that do not change: they bound nothing.
func TestNoRuler(t *testing.T) {
	p := &part{width: 2, weight: 1}
	still := series{frames: 3, data: slices.Repeat([]float64{7, -1}, 3)}
	r := newRuler(p, []series{still})
	var a, b sketch
	a.draw(&r, still.data, false)
	b.draw(&r, []float64{8, -1, 9, 3}, true)
	if got := r.under(a.cost(0, &b, 1), 1); got != 0 {
		t.Errorf("a ruler without a step says at least %g", got)
	}
	for _, root := range []float64{0, 1, math.Inf(1)} {
		if got := r.over(root, 1); got != endless {
			t.Errorf("a ruler without a step says at most %d within %g", got, root)
		}
	}
}
