package path_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"

	"strandwise/augment/path"
	"strandwise/channels/body"
)

// In coordinates without curvature a curve is an arc, whatever the path.
func TestCurveAgreesWithArc(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		points, width := drawPath(t)
		intervals := rapid.SliceOfN(rapid.Float64Range(0.1, 1.9), 1, 64).Draw(t, "intervals")
		arc, curve := path.NewArc(points, width), path.NewCurve(body.Euclidean(width), points)
		near(t, "length", []float64{curve.Length()}, []float64{arc.Length()}, 0)
		near(t, "lengths", curve.Cumulative(), arc.Cumulative(), 0)
		near(t, "points", curve.Resample(nil, intervals, 1), arc.Resample(nil, intervals), 1e-12)
	})
}

// turns is a series of rotations that wander, stored with signs at random.
func turns(rng *rand.Rand, n int) []float64 {
	q, out := body.Identity(), make([]float64, 4*n)
	for i := range n {
		q = body.After(q, r3.Vec{X: 0.2 * rng.NormFloat64(), Y: 0.2 * rng.NormFloat64(), Z: 0.2 * rng.NormFloat64()})
		if i%5 == 0 && i > 0 { // a rest
			copy(out[4*i:], out[4*i-4:4*i])
			continue
		}
		body.Store(out[4*i:], quat.Scale(float64(1-2*rng.IntN(2)), q))
	}
	return out
}

// In every space the definition holds: all steps are of one length, their sum
// that of the source, and all points are of the space.
func TestCurveKeepsLength(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	for range 20 {
		rotations, bone, level := turns(rng, 80), make([]float64, 3*80), make([]float64, 80)
		for i := range 80 {
			v := body.Rotate(body.Load(rotations[4*i:]), r3.Vec{Z: 0.3})
			bone[3*i], bone[3*i+1], bone[3*i+2] = v.X, v.Y, v.Z
			level[i] = 5 + 5*math.Sin(float64(i)/7)
		}
		for _, c := range []struct {
			name   string
			space  body.Space
			points []float64
			valid  func(p []float64) bool
		}{
			{"rotations", body.Rotation(), rotations, func(p []float64) bool { return math.Abs(length(p)-1) < 1e-12 }},
			{"bone", body.Direction(0.3), bone, func(p []float64) bool { return math.Abs(length(p)-0.3) < 1e-12 }},
			{"level", body.Bounded(0, 10), level, func(p []float64) bool { return p[0] >= 0 && p[0] <= 10 }},
		} {
			curve := path.NewCurve(c.space, c.points)
			w := c.space.Width()
			for _, n := range []int{16, 40} {
				for _, strength := range []float64{0, 0.5, 1} {
					got := curve.Resample(nil, path.Intervals(make([]float64, n-1), 0.25, rng), strength)
					whole := curve.Length() / float64(n-1)
					for k := range n {
						if !c.valid(got[k*w : (k+1)*w]) {
							t.Fatalf("%s: point %d is %v", c.name, k, got[k*w:(k+1)*w])
						}
						if k == 0 || strength != 1 || c.name == "level" { // which may turn back at a limit
							continue
						}
						if step := c.space.Distance(got[(k-1)*w:k*w], got[k*w:(k+1)*w]); math.Abs(step-whole) > 1e-9 {
							t.Fatalf("%s: step %d is %v long, want %v", c.name, k, step, whole)
						}
					}
					if d := c.space.Distance(got[:w], c.points[:w]); d > 1e-9 {
						t.Fatalf("%s: starts %v from the start", c.name, d)
					}
				}
			}
		}
	}
}

// Strength 0 gives points of the path itself, in order, to its end.
func TestCurveStrengthZero(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 3))
	points, s := turns(rng, 50), body.Rotation()
	curve := path.NewCurve(s, points)
	intervals := path.Intervals(make([]float64, 19), 0.25, rng)
	got := curve.Resample(nil, intervals, 0)
	at, whole := 0.0, sum(intervals)
	for k := range 20 {
		position := at / whole * curve.Length()
		i := 0
		for i < 48 && curve.Cumulative()[i+1] < position {
			i++
		}
		near(t, "way along the leg",
			[]float64{s.Distance(points[4*i:4*i+4], got[4*k:4*k+4]) + s.Distance(got[4*k:4*k+4], points[4*i+4:4*i+8])},
			[]float64{s.Distance(points[4*i:4*i+4], points[4*i+4:4*i+8])}, 1e-7)
		near(t, "position", []float64{curve.Cumulative()[i] + s.Distance(points[4*i:4*i+4], got[4*k:4*k+4])}, []float64{position}, 1e-7)
		if k < 19 {
			at += intervals[k]
		}
	}
}

// In between, a step is the geometric mean of its own length and the common one.
func TestCurveStrengthHalf(t *testing.T) {
	curve := path.NewCurve(body.Euclidean(1), []float64{0, 1, 8})
	near(t, "halfway", curve.Resample(nil, []float64{1, 3}, 0.5), []float64{0, math.Sqrt(2 * 4), math.Sqrt(2*4) + math.Sqrt(6*4)}, 1e-14)
}

func TestCurveOfNoLength(t *testing.T) {
	point := []float64{0, 0, 0, 1}
	curve := path.NewCurve(body.Rotation(), append(append([]float64(nil), point...), 0, 0, 0, -1))
	for _, strength := range []float64{0, 0.5, 1} {
		got := curve.Resample(nil, []float64{1, 1}, strength)
		for k := range 3 {
			if d := body.Rotation().Distance(got[4*k:4*k+4], point); d != 0 {
				t.Errorf("strength %g: point %d is %v", strength, k, got[4*k:4*k+4])
			}
		}
	}
}

func TestCurveMisuse(t *testing.T) {
	curve := path.NewCurve(body.Euclidean(1), []float64{0, 1})
	panics(t, "no interval", func() { curve.Resample(nil, nil, 1) })
	panics(t, "wrong destination", func() { curve.Resample(make([]float64, 2), []float64{1, 1}, 1) })
	panics(t, "one point", func() { path.NewCurve(body.Rotation(), []float64{0, 0, 0, 1}) })
	panics(t, "torn row", func() { path.NewCurve(body.Euclidean(2), []float64{1, 2, 3, 4, 5}) })
}

// BenchmarkCurve measures one synthetic path of 40 points from 128.
func BenchmarkCurve(b *testing.B) {
	rng := rand.New(rand.NewPCG(7, 1))
	for _, c := range []struct {
		name   string
		space  body.Space
		points []float64
	}{{"room", body.Euclidean(3), walk(rng, 128, 3)}, {"rotation", body.Rotation(), turns(rng, 128)}} {
		b.Run(c.name, func(b *testing.B) {
			curve, intervals := path.NewCurve(c.space, c.points), path.Intervals(make([]float64, 39), 0.25, rng)
			dst := make([]float64, 40*c.space.Width())
			b.ReportAllocs()
			for b.Loop() {
				curve.Resample(dst, intervals, 1)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N), "ns/take")
		})
	}
}
