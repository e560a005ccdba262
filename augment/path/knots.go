package path

import "math"

// Knots returns the number of points the published regression gives for this
// path, not yet rounded:
//
//	n = exp(1.67 + 0.29·density + 1.42·closedness)
//	density    = path length / diagonal of the bounding box
//	closedness = 1 − |last − first| / diagonal
//
// (Taranta et al., UIST 2016, fitted on planar strokes; coefficients from
// memory.) A denser and more closed path needs more points. A path whose
// bounding box is a point has neither measure; the regression at 0 and 0 is
// given for it.
func (a *Arc) Knots() float64 {
	diagonal := a.diagonal()
	if diagonal == 0 {
		return math.Exp(1.67)
	}
	density := a.Length() / diagonal
	closedness := 1 - distance(a.point(0), a.point(len(a.cumulative)-1))/diagonal
	return math.Exp(1.67 + 0.29*density + 1.42*closedness)
}

func (a *Arc) diagonal() float64 {
	sum := 0.0
	for c := range a.width {
		lo, hi := a.points[c], a.points[c]
		for i := c; i < len(a.points); i += a.width {
			lo, hi = min(lo, a.points[i]), max(hi, a.points[i])
		}
		sum += (hi - lo) * (hi - lo)
	}
	return math.Sqrt(sum)
}
