package path_test

import (
	"math"
	"testing"

	"strandwise/augment/path"
)

// The published regression n = exp(1.67 + 0.29·density + 1.42·closedness)
// (Taranta et al., UIST 2016; coefficients from memory), put in by hand.
func TestKnotsAtHandComputedValues(t *testing.T) {
	for _, c := range []struct {
		name   string
		points []float64
		width  int
		want   float64
	}{
		{"straight line: density 1, closedness 0", []float64{0, 0, 1, 1, 3, 3}, 2, math.Exp(1.96)}, // 7.0993
		{"legs 3 and 4: density 7/5, closedness 0", []float64{0, 0, 3, 0, 3, 4}, 2, math.Exp(2.076)},
		{"closed unit square: density 4/√2, closedness 1", []float64{0, 0, 1, 0, 1, 1, 0, 1, 0, 0}, 2, 49.9111},
		{"there and half back: density 3/2, closedness 1/2", []float64{0, 2, 1}, 1, math.Exp(1.67 + 0.435 + 0.71)},
		{"diagonal of a cube: density 1, closedness 0", []float64{1, 1, 1, 2, 2, 2}, 3, math.Exp(1.96)},
		{"a point", []float64{4, 4, 4, 4}, 2, math.Exp(1.67)},
	} {
		if got := path.NewArc(c.points, c.width).Knots(); math.Abs(got-c.want) > 1e-5*c.want {
			t.Errorf("%s: %v knots, want %v", c.name, got, c.want)
		}
	}
}

func TestArcCumulative(t *testing.T) {
	arc := path.NewArc([]float64{0, 0, 3, 4, 3, 4, 3, 5}, 2)
	near(t, "cumulative", arc.Cumulative(), []float64{0, 5, 5, 6}, 0)
	near(t, "length", []float64{arc.Length()}, []float64{6}, 0)
}
