package method

import "math"

// Steps of a warping path, as they are stored.
const (
	both   = iota // the next frame of each
	first         // the next frame of the first take only
	second        // the next frame of the second take only
)

// warper finds dynamic time warping paths between takes of given width: both
// ends closed, local cost the squared Euclidean distance of two frames, the
// steps of Sakoe and Chiba (IEEE Trans. ASSP 26 (1978) 43) without weights. It
// keeps its scratch from call to call.
type warper struct {
	width int
	band  float64 // half-width of the band as a share of the longer take; ≥ 1 for none
	row   []float64
	steps []uint8
}

// path calls visit(i, j) for every pair of frames on the cheapest warping path
// from the last pair to the first, and returns its cost: the sum of the local
// costs. Ties go to the diagonal.
func (w *warper) path(a, b []float64, visit func(i, j int)) float64 {
	n, m := len(a)/w.width, len(b)/w.width
	cost := w.fill(a, b, n, m)
	for i, j := n-1, m-1; ; {
		visit(i, j)
		if i == 0 && j == 0 {
			return cost
		}
		switch w.steps[i*m+j] {
		case both:
			i, j = i-1, j-1
		case first:
			i--
		case second:
			j--
		}
	}
}

// fill runs the recursion over the band and stores the step into each cell.
func (w *warper) fill(a, b []float64, n, m int) float64 {
	w.row = resize(w.row, m)
	w.steps = resize(w.steps, n*m)
	for j := range w.row {
		w.row[j] = math.Inf(1)
	}
	for i := range n {
		low, high := w.limits(i, n, m)
		frame := a[i*w.width : (i+1)*w.width]
		left, corner := math.Inf(1), math.Inf(1)
		if low > 0 {
			corner = w.row[low-1]
			w.row[low-1] = math.Inf(1)
		}
		for j := low; j <= high; j++ {
			up := w.row[j]
			best, step := corner, uint8(both)
			if up < best {
				best, step = up, first
			}
			if left < best {
				best, step = left, second
			}
			if i == 0 && j == 0 {
				best = 0
			}
			left = best + distance(frame, b[j*w.width:(j+1)*w.width])
			w.row[j], w.steps[i*m+j] = left, step
			corner = up
		}
		for j := high + 1; j < m; j++ {
			w.row[j] = math.Inf(1)
		}
	}
	return w.row[m-1]
}

// limits returns the cells of row i inside the band, which runs along the
// straight line between the corners and is wide enough to hold a path.
func (w *warper) limits(i, n, m int) (low, high int) {
	slope := float64(m) / float64(n)
	half := max(w.band*float64(max(n, m)), slope, 1)
	middle := (float64(i)+0.5)*slope - 0.5
	low = max(int(math.Ceil(middle-half)), 0)
	high = min(int(math.Floor(middle+half)), m-1)
	if i == 0 {
		low = 0
	}
	if i == n-1 {
		high = m - 1
	}
	return low, high
}

// resize returns s with room for n values, its old ones not kept.
func resize[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n)
	}
	return s[:n]
}
