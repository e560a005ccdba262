package align_test

import (
	"math"

	"strandwise/channels/align"
)

// plain is the alignment written down as its definition says, one full table
// at a time and without smoothing. The fast one is held against it.
func plain(a, b []float64, width int, o align.Options) align.Alignment {
	n, m := len(a)/width, len(b)/width
	local := func(i int, at float64) float64 { // b read at a fraction of a frame
		j := min(int(at), m-1)
		k, f, sum := min(j+1, m-1), at-float64(j), 0.0
		for c := range width {
			v := b[j*width+c]*(1-f) + b[k*width+c]*f
			sum += (a[i*width+c] - v) * (a[i*width+c] - v)
		}
		return sum / float64(width)
	}
	slope := 0.0
	if n > 1 {
		slope = float64(m-1) / float64(n-1)
	}
	c0 := 0.0
	for i := range n {
		c0 += local(i, slope*float64(i)) / float64(n)
	}
	half := max(1, slope, o.Band*float64(max(n, m)))
	inside := func(i, j int) bool {
		return i >= 0 && j >= 0 && i < n && j < m && (n == 1 || math.Abs(float64(j)-slope*float64(i)) <= half+1e-9)
	}
	openA, openB := min(int(o.Open*float64(n)), (n-1)/2), min(int(o.Open*float64(m)), (m-1)/2)

	type from struct{ i, j int }
	sum, back := map[from]float64{}, map[from]from{}
	at := func(i, j int) float64 {
		if !inside(i, j) {
			return math.Inf(1)
		}
		return sum[from{i, j}]
	}
	best, end := math.Inf(1), from{}
	for i := range n {
		for j := range m {
			if !inside(i, j) {
				continue
			}
			s, f := at(i-1, j-1), from{i - 1, j - 1}
			if d := at(i-1, j) + o.Step*c0; d < s {
				s, f = d, from{i - 1, j}
			}
			if d := at(i, j-1) + o.Step*c0; d < s {
				s, f = d, from{i, j - 1}
			}
			if i == 0 && j <= openB || j == 0 && i <= openA {
				if d := o.Skip * c0 * float64(i+j); d < s {
					s, f = d, from{-1, -1}
				}
			}
			s += local(i, float64(j))
			sum[from{i, j}], back[from{i, j}] = s, f
			if left := n - 1 - i + m - 1 - j; i == n-1 && left <= openB || j == m-1 && left <= openA {
				if d := s + o.Skip*c0*float64(left); d <= best {
					best, end = d, from{i, j}
				}
			}
		}
	}
	al := align.Alignment{At: make([]float64, n), Last: end.i, End: (n - 1 - end.i) - (m - 1 - end.j)}
	count, cells, total := make([]float64, n), 0.0, 0.0
	p := end
	for {
		al.At[p.i] += float64(p.j)
		count[p.i]++
		cells, total = cells+1, total+local(p.i, float64(p.j))
		if back[p].i < 0 {
			break
		}
		p = back[p]
	}
	al.First, al.Begin, al.Cost = p.i, p.j-p.i, total/cells
	for i := range al.At {
		switch {
		case count[i] > 0:
			al.At[i] /= count[i]
		case i > end.i:
			al.At[i] = float64(m - 1)
		}
	}
	return al
}
