package report

import (
	"cmp"
	"math"
	"slices"
)

// spread draws how far takes are from the medoid of their label; nil where that
// was not measured.
func spread(l Label) *figure {
	if !l.measured() {
		return nil
	}
	recorded, synthetic := slices.Sorted(slices.Values(l.RecordedDistances)), slices.Sorted(slices.Values(l.SyntheticDistances))
	p := panel{Name: "Distribution functions of the distances to the medoid, recorded and synthetic", Width: panelWidth, Height: 200}
	e := extent{0, max(recorded[len(recorded)-1], synthetic[len(synthetic)-1]), true}
	_, high := e.padded(0.03)
	x, y := linear{0, high, traceLeft, traceRight}, linear{0, 1, 162, 18}
	p.text(classTick, 2, 10, "", "share of takes no farther away")
	p.xAxis(x, 18, 162, "distance to the medoid, "+l.unit())
	p.yAxis(y, traceLeft, traceRight)
	a, b := steps(recorded, x, y), steps(synthetic, x, y)
	p.path(gapFill, line(append(slices.Clone(a), backwards(b)...)...)+"z")
	p.path(classSynthetic+" w", line(b...))
	p.path(classRecorded, line(a...))
	f := &figure{
		Key:    append(lineKeys(), key{"k-f", "between them"}),
		Panels: []panel{p},
		Caption: "How many takes lie no farther from the label's medoid than a distance. The area between the lines is the Wasserstein-1 distance, " +
			number(l.Wasserstein) + " " + l.unit() + ". A synthetic line to the left of the recorded one is a crowd about its sources; one to the right strays.",
		Numbers: &table{Caption: "Distances to the medoid, " + l.unit(), Head: []string{"takes", "number", "least", "quarter", "middle", "three quarters", "most", "mean"}},
	}
	f.Numbers.add(quantiles("recorded", recorded)...)
	f.Numbers.add(quantiles("synthetic", synthetic)...)
	return f
}

func (l Label) unit() string { return cmp.Or(l.DistanceUnit, "unit not stated") }

// measured tells whether there are distances to show.
func (l Label) measured() bool {
	for _, list := range [][]float64{l.RecordedDistances, l.SyntheticDistances} {
		if len(list) == 0 || slices.ContainsFunc(list, func(v float64) bool { return !finite(v) }) {
			return false
		}
	}
	return finite(l.Wasserstein)
}

// relative is the Wasserstein distance as a share of the mean distance of the
// recorded takes, NaN where there is none.
func (l Label) relative() float64 {
	sum := 0.0
	for _, v := range l.RecordedDistances {
		sum += v
	}
	if sum == 0 || !l.measured() {
		return math.NaN()
	}
	return l.Wasserstein / (sum / float64(len(l.RecordedDistances)))
}

// steps returns the points of an empirical distribution function.
func steps(sorted []float64, x, y linear) []float64 {
	out := []float64{x.from, y.from}
	for i, v := range sorted {
		n := float64(len(sorted))
		out = append(out, x.at(v), y.at(float64(i)/n), x.at(v), y.at(float64(i+1)/n))
	}
	return append(out, x.to, y.to)
}

// backwards returns points in reverse order.
func backwards(points []float64) []float64 {
	out := make([]float64, 0, len(points))
	for i := len(points) - 2; i >= 0; i -= 2 {
		out = append(out, points[i], points[i+1])
	}
	return out
}

func quantiles(what string, sorted []float64) []cell {
	at := func(share float64) cell {
		return figures(number(sorted[int(math.Round(share*float64(len(sorted)-1)))]))
	}
	sum := 0.0
	for _, v := range sorted {
		sum += v
	}
	return []cell{text(what), figures(whole(len(sorted))), at(0), at(0.25), at(0.5), at(0.75), at(1), figures(number(sum / float64(len(sorted))))}
}
