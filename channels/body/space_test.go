package body_test

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"

	"strandwise/channels/body"
)

// place draws points of a space.
type place struct {
	name  string
	space body.Space
	draw  func(t *rapid.T, label string) []float64
}

func drawn(n int) func(t *rapid.T, label string) []float64 {
	return func(t *rapid.T, label string) []float64 {
		return rapid.SliceOfN(parts, n, n).Draw(t, label)
	}
}

func drawTurn(t *rapid.T, label string) []float64 {
	out := make([]float64, 4)
	q := drawRotation(t, label)
	if rapid.Bool().Draw(t, "twin") {
		q = quat.Scale(-1, q)
	}
	body.Store(out, q)
	return out
}

func drawDirection(radius float64) func(t *rapid.T, label string) []float64 {
	return func(t *rapid.T, label string) []float64 {
		v := drawVec(t, label)
		if r3.Norm(v) < 1e-3 {
			v = r3.Vec{Y: 1}
		}
		v = r3.Scale(radius/r3.Norm(v), v)
		return []float64{v.X, v.Y, v.Z}
	}
}

func drawBetween(low, high float64) func(t *rapid.T, label string) []float64 {
	return func(t *rapid.T, label string) []float64 {
		return []float64{rapid.Float64Range(low, high).Draw(t, label)}
	}
}

func after(draws ...func(t *rapid.T, label string) []float64) func(t *rapid.T, label string) []float64 {
	return func(t *rapid.T, label string) []float64 {
		var out []float64
		for _, d := range draws {
			out = append(out, d(t, label)...)
		}
		return out
	}
}

var everywhere = []place{
	{"line", body.Euclidean(1), drawn(1)},
	{"room", body.Euclidean(3), drawn(3)},
	{"rotation", body.Rotation(), drawTurn},
	{"direction", body.Direction(1), drawDirection(1)},
	{"bone", body.Direction(0.3), drawDirection(0.3)},
	{"limits", body.Bounded(-2, 5), drawBetween(-2, 5)},
	{"floor", body.Bounded(0, math.Inf(1)), drawBetween(0, 1e6)},
	{"ceiling", body.Bounded(math.Inf(-1), 0), drawBetween(-1e6, 0)},
	{"scaled", body.Scaled(body.Rotation(), 7), drawTurn},
	{"inertial", body.Inertial(3, 2), after(drawDirection(1), drawn(6))},
	{"accelerometer", body.Inertial(3, 0), after(drawDirection(1), drawn(3))},
	{"product", body.Product(body.Rotation(), body.Bounded(-2, 5), body.Euclidean(2), body.Direction(2)), after(drawTurn, drawBetween(-2, 5), drawn(2), drawDirection(2))},
}

// largestIn returns the largest value, for relative bounds.
func largestIn(vs ...[]float64) float64 {
	out := 1.0
	for _, v := range vs {
		for _, x := range v {
			out = max(out, math.Abs(x))
		}
	}
	return out
}

// TestSpaceLaws checks the laws stated at Space for any two points of each.
func TestSpaceLaws(t *testing.T) {
	for _, where := range everywhere {
		t.Run(where.name, func(t *testing.T) {
			s := where.space
			rapid.Check(t, func(t *rapid.T) {
				p, q, share := where.draw(t, "p"), where.draw(t, "q"), rapid.Float64Range(0, 1).Draw(t, "share")
				if len(p) != s.Width() {
					t.Fatalf("width %d", s.Width())
				}
				// Angles near a half turn and near none lose half the digits.
				within := 1e-7 * largestIn(p, q)
				whole := s.Distance(p, q)
				way, got := make([]float64, s.Freedom()), make([]float64, s.Width())
				s.Displacement(way, p, q)
				check := func(what string, got, want float64) {
					t.Helper()
					if !(math.Abs(got-want) <= within) {
						t.Fatalf("%s is %v, want %v", what, got, want)
					}
				}
				check("way", length(way), whole)
				check("way back", s.Distance(q, p), whole)
				check("way to itself", s.Distance(p, p), 0)
				s.Chain(got, p, way)
				check("distance from q to where the way leads", s.Distance(got, q), 0)
				s.Interpolate(got, p, q, 0)
				check("distance of the start", s.Distance(got, p), 0)
				s.Interpolate(got, p, q, 1)
				check("distance of the end", s.Distance(got, q), 0)
				s.Interpolate(got, p, q, share)
				check("share of the way", s.Distance(p, got), share*whole)
				check("rest of the way", s.Distance(got, q), (1-share)*whole)
				copy(got, p)
				s.Interpolate(got, got, q, 1)
				check("distance of the end in place", s.Distance(got, q), 0)
				s.Chain(p, p, way)
				check("distance of the chain in place", s.Distance(p, q), 0)
			})
		})
	}
}

func length(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x * x
	}
	return math.Sqrt(sum)
}

// TestSpacesAreKept checks that any displacement chained from any point leads to
// a point of the space.
func TestSpacesAreKept(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		far := rapid.Float64Range(-1e3, 1e3)
		d := []float64{far.Draw(t, "dx"), far.Draw(t, "dy"), far.Draw(t, "dz")}
		p := drawTurn(t, "turn")
		body.Rotation().Chain(p, p, d)
		if n := length(p); math.Abs(n-1) > tolerance {
			t.Fatalf("quaternion is %v long", n)
		}
		v := drawDirection(0.3)(t, "bone")
		body.Direction(0.3).Chain(v, v, d)
		if n := length(v); math.Abs(n-0.3) > tolerance {
			t.Fatalf("bone is %v long", n)
		}
		for _, limits := range [][2]float64{{-2, 5}, {0, math.Inf(1)}, {math.Inf(-1), 0}, {math.Inf(-1), math.Inf(1)}, {1, 1 + 1e-15}} {
			x := []float64{far.Draw(t, "value")}
			body.Bounded(limits[0], limits[1]).Chain(x, x, d)
			if !(x[0] >= limits[0] && x[0] <= limits[1]) {
				t.Fatalf("%v is outside of %v", x[0], limits)
			}
		}
	})
}

// TestDirectionKeepsStep checks that a way taken at one direction has its length
// when it is chained at another, unless that is longer than half round.
func TestDirectionKeepsStep(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s, draw := body.Direction(2), drawDirection(2)
		p, q, from := draw(t, "p"), draw(t, "q"), draw(t, "from")
		way, got := make([]float64, 3), make([]float64, 3)
		s.Displacement(way, p, q)
		s.Chain(got, from, way)
		if a, b := s.Distance(from, got), length(way); math.Abs(a-b) > 1e-7 {
			t.Fatalf("a step of %v is %v long elsewhere", b, a)
		}
	})
}

// TestBoundedFolds works reflections out by hand.
func TestBoundedFolds(t *testing.T) {
	inf := math.Inf(1)
	for _, c := range []struct{ low, high, from, way, want float64 }{
		{0, 10, 4, 3, 7},
		{0, 10, 4, 9, 7},
		{0, 10, 4, -6, 2},
		{0, 10, 4, 26, 10},
		{0, 10, 4, -27, 3},
		{0, 10, 10, 0, 10},
		{0, 10, 12, 0, 10},
		{-5, -1, -1, 1, -2},
		{0, inf, 1, -4, 3},
		{-inf, 0, -1, 4, -3},
	} {
		got := []float64{c.from}
		body.Bounded(c.low, c.high).Chain(got, got, []float64{c.way})
		if math.Abs(got[0]-c.want) > tolerance {
			t.Errorf("%g from %g between %g and %g is %g, want %g", c.way, c.from, c.low, c.high, got[0], c.want)
		}
	}
}

// TestRotationSpace holds the space against values of SciPy 1.10 Slerp, and
// checks that q and -q are one point.
func TestRotationSpace(t *testing.T) {
	p := []float64{0.23929834, 0.18930786, 0.03813458, 0.95154852}
	q := []float64{0.08925655, -0.03877032, 0.64264440, 0.75995941}
	want := []float64{0.21042711, 0.13687329, 0.20356259, 0.94633419}
	twin := []float64{-q[0], -q[1], -q[2], -q[3]}
	s, got := body.Rotation(), make([]float64, 4)
	for _, q := range [][]float64{q, twin} {
		s.Interpolate(got, p, q, 0.25)
		for i, v := range got {
			if math.Abs(v-want[i]) > 2e-8 {
				t.Errorf("%.8f, want %.8f", got, want)
				break
			}
		}
	}
	if d := s.Distance(q, twin); d != 0 {
		t.Errorf("q and -q are %g apart", d)
	}
}

func TestSpaceMisuse(t *testing.T) {
	for name, f := range map[string]func(){
		"no coordinate": func() { body.Euclidean(0) },
		"no radius":     func() { body.Direction(0) },
		"no limits":     func() { body.Bounded(1, 1) },
		"no scale":      func() { body.Scaled(body.Rotation(), 0) },
		"no space":      func() { body.Product() },
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if recover() == nil {
					t.Error("does not panic")
				}
			}()
			f()
		})
	}
}

// go test -run '^$' -bench Space ./channels/body
func BenchmarkSpace(b *testing.B) {
	p, q := make([]float64, 12), make([]float64, 12)
	for i := range p {
		p[i], q[i] = math.Sin(float64(i)), math.Cos(float64(i))
	}
	for _, c := range []struct {
		name  string
		space body.Space
	}{{"euclidean", body.Euclidean(3)}, {"rotation", body.Rotation()}, {"direction", body.Direction(1)}, {"inertial", body.Inertial(3, 2)}} {
		b.Run(c.name, func(b *testing.B) {
			way, at := make([]float64, 12), make([]float64, 12)
			b.ReportAllocs()
			for b.Loop() {
				c.space.Interpolate(at, p, q, 0.3)
				c.space.Displacement(way, at, q)
				c.space.Chain(at, p, way)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N), "ns/frame")
		})
	}
}
