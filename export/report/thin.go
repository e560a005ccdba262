package report

import "math"

// thin chooses at most n of the points of a line so that its look is kept: the
// first, the last, and of each of n−2 stretches between them the point that
// makes the largest triangle with the one chosen before it and the mean of the
// next stretch (largest-triangle-three-buckets: S. Steinarsson, "Downsampling
// time series for visual representation", MSc thesis, University of Iceland,
// 2013). It returns the places of the points in ascending order; n is at least
// 3.
func thin(xs, ys []float64, n int) []int {
	out := make([]int, 0, min(n, len(xs)))
	if len(xs) <= n {
		for i := range xs {
			out = append(out, i)
		}
		return out
	}
	bound := func(k int) int { return 1 + k*(len(xs)-2)/(n-2) }
	out = append(out, 0)
	for k := range n - 2 {
		from, to := bound(k), bound(k+1)
		mx, my := middle(xs, ys, to, min(bound(k+2), len(xs)))
		if k == n-3 {
			mx, my = xs[len(xs)-1], ys[len(ys)-1]
		}
		last, best, most := out[len(out)-1], from, -1.0
		for i := from; i < to; i++ {
			area := math.Abs((xs[last]-mx)*(ys[i]-ys[last]) - (xs[last]-xs[i])*(my-ys[last]))
			if area > most {
				best, most = i, area
			}
		}
		out = append(out, best)
	}
	return append(out, len(xs)-1)
}

// middle returns the mean of the points from one place up to another.
func middle(xs, ys []float64, from, to int) (x, y float64) {
	for i := from; i < to; i++ {
		x += xs[i]
		y += ys[i]
	}
	n := float64(to - from)
	return x / n, y / n
}
