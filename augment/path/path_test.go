package path_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// drawPath draws a path of 2 to 200 points in 1 to 8 dimensions on a grid, so
// that points repeat, legs double back and whole paths stand still.
func drawPath(t *rapid.T) (points []float64, width int) {
	width = rapid.IntRange(1, 8).Draw(t, "width")
	n := rapid.IntRange(2, 200).Draw(t, "points")
	reach := rapid.IntRange(0, 3).Draw(t, "reach")
	points = make([]float64, n*width)
	step := rapid.IntRange(-reach, reach)
	for i := range points {
		points[i] = 0.25 * float64(step.Draw(t, "step"))
		if i >= width {
			points[i] += points[i-width]
		}
	}
	return points, width
}

// legs returns the lengths between neighbouring points.
func legs(points []float64, width int) []float64 {
	out := make([]float64, len(points)/width-1)
	for k := range out {
		out[k] = length(difference(points[k*width:(k+1)*width], points[(k+1)*width:(k+2)*width]))
	}
	return out
}

func difference(p, q []float64) []float64 {
	out := make([]float64, len(p))
	for c := range p {
		out[c] = q[c] - p[c]
	}
	return out
}

func length(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x * x
	}
	return math.Sqrt(sum)
}

func sum(values []float64) float64 {
	total := 0.0
	for _, v := range values {
		total += v
	}
	return total
}

// largest returns the largest absolute value.
func largest(values []float64) float64 {
	out := 0.0
	for _, v := range values {
		out = max(out, math.Abs(v))
	}
	return out
}

// near fails unless got is within tolerance of want at every position.
func near(t interface {
	Helper()
	Fatalf(string, ...any)
}, what string, got, want []float64, tolerance float64) {
	t.Helper()
	if len(got) != len(want) {
		t.Fatalf("%s: %d values, want %d", what, len(got), len(want))
	}
	for i := range got {
		if !(math.Abs(got[i]-want[i]) <= tolerance) {
			t.Fatalf("%s: value %d is %v, want %v within %g", what, i, got[i], want[i], tolerance)
		}
	}
}

// panics fails unless f panics with a message of this package.
func panics(t *testing.T, what string, f func()) {
	t.Helper()
	defer func() {
		t.Helper()
		if text, ok := recover().(string); !ok || len(text) < 6 || text[:6] != "path: " {
			t.Errorf("%s: no panic that names the package, got %v", what, text)
		}
	}()
	f()
}
