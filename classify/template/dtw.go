package template

import "math"

// warp returns the least sum of squared frame distances along a path of
// dynamic time warping of a, n frames, and b, m frames, both frame-major of
// the given width, within the metric's band; or any value above bound as soon
// as every path is above it.
//
// Rows of the table are frames of a, columns those of b. One row is held, and
// brought down by a strip of rows at a time: entry j+1 is the cell in column
// j, entry 0 the border left of the table. Cells outside the band are infinite.
func (w *Worker) warp(a, b []float64, n, m, width int, bound float64) float64 {
	s := strip{row: w.border(m + 1), b: b, width: width, half: w.metric.HalfWidth(n, m)}
	for i := 0; i < n; i += stripRows {
		s.a, s.first = a[i*width:min(n, i+stripRows)*width], i
		// A look costs as much as some cells: one every other strip pays best.
		look := i%(2*stripRows) != 0
		w.sieve.counts.Cells += s.cells(m)
		if s.fill(m, look) > bound {
			return math.Inf(1)
		}
		s.row[0] = math.Inf(1)
	}
	return s.row[m]
}

// border returns the row above the table of n-1 columns.
func (w *Worker) border(n int) []float64 {
	if cap(w.row) < n {
		w.row = make([]float64, n)
	}
	row := w.row[:n]
	for j := range row {
		row[j] = math.Inf(1)
	}
	row[0] = 0
	return row
}
