package template

import "math"

// stripRows is the number of rows filled at once. A cell waits for the cells
// left of it and above it; with four rows under way the processor works on
// others meanwhile, and reads each frame of b once for all four. Against one
// row at a time this measured 1.2 (24 channels) to 1.8 times (one channel,
// full window) the cells per second on an AMD EPYC of family 26.
const stripRows = 4

// strip is a run of at most stripRows rows of the table being filled.
type strip struct {
	row   []float64 // the row above; after fill the last of the strip
	a, b  []float64 // the strip's frames of a, and all of b
	width int
	half  int // half width of the band
	first int // row of the table

	left   [stripRows]float64 // in each row, the cell last filled
	corner float64            // the cell above that of the first row
}

// fill fills the strip's cells in the band of a table of m columns, and returns
// the least cell of its last row when asked for it: no path can end below.
func (s *strip) fill(m int, look bool) float64 {
	rows := len(s.a) / s.width
	lo, hi := max(0, s.first-s.half), min(m, s.first+rows+s.half)
	s.corner = s.row[lo]
	for k := range s.left {
		s.left[k] = math.Inf(1)
	}
	// In the core every row of the strip is inside the band.
	begin, end := max(0, s.first+stripRows-1-s.half), min(m, s.first+s.half+1)
	if rows < stripRows || begin > end {
		begin, end = hi, hi
	}
	s.edge(lo, begin)
	if begin < end {
		s.core(begin, end)
	}
	s.edge(end, hi)
	if !look {
		return 0
	}
	return least(s.row[max(0, s.first+rows-1-s.half)+1 : hi+1])
}

// cells returns the number of cells of the strip in the band of a table of m
// columns.
func (s *strip) cells(m int) int64 {
	n := 0
	for i := s.first; i < s.first+len(s.a)/s.width; i++ {
		n += min(m, i+s.half+1) - max(0, i-s.half)
	}
	return int64(n)
}

// edge fills columns lo to hi, excluded, cell by cell. The band runs down to
// the right: it leaves out the last rows of the strip at its left end and the
// first at its right end. What it leaves in the row for columns the last row does
// not reach is never read.
func (s *strip) edge(lo, hi int) {
	for j := lo; j < hi; j++ {
		above, corner := s.row[j+1], s.corner
		s.corner = above
		from, to := max(0, j-s.half-s.first), min(len(s.a)/s.width, j+s.half-s.first+1)
		if from > 0 {
			above, corner = math.Inf(1), s.left[from-1]
		}
		for k := from; k < to; k++ {
			cell := min(s.left[k], above, corner) + s.cost(k, j)
			above, corner, s.left[k] = cell, s.left[k], cell
		}
		s.row[j+1] = above
	}
}

// cost returns the squared distance of row k of the strip to frame j of b.
func (s *strip) cost(k, j int) float64 {
	x, y := s.a[k*s.width:(k+1)*s.width], s.b[j*s.width:(j+1)*s.width]
	sum := 0.0
	for c, v := range x {
		sum += (v - y[c]) * (v - y[c])
	}
	return sum
}

// core is edge for a strip of stripRows rows that are all inside the band.
func (s *strip) core(lo, hi int) {
	w, b, row := s.width, s.b[lo*s.width:hi*s.width], s.row[lo+1:hi+1]
	a0, a1, a2, a3 := s.a[:w], s.a[w:][:w], s.a[2*w:][:w], s.a[3*w:][:w]
	left0, left1, left2, left3, corner := s.left[0], s.left[1], s.left[2], s.left[3], s.corner
	for j, above := range row {
		v := b[:w]
		var d0, d1, d2, d3 float64
		for c, x := range v {
			e0, e1, e2, e3 := a0[c]-x, a1[c]-x, a2[c]-x, a3[c]-x
			d0 += e0 * e0
			d1 += e1 * e1
			d2 += e2 * e2
			d3 += e3 * e3
		}
		d0 += min(left0, min(above, corner))
		d1 += min(d0, min(left0, left1))
		d2 += min(d1, min(left1, left2))
		d3 += min(d2, min(left2, left3))
		left0, left1, left2, left3, corner = d0, d1, d2, d3, above
		row[j], b = d3, b[w:]
	}
	s.left, s.corner = [stripRows]float64{left0, left1, left2, left3}, corner
}

// least returns the least value of the row.
func least(row []float64) float64 {
	a, b := math.Inf(1), math.Inf(1)
	for ; len(row) >= 2; row = row[2:] {
		a, b = min(a, row[0]), min(b, row[1])
	}
	if len(row) > 0 {
		a = min(a, row[0])
	}
	return min(a, b)
}
