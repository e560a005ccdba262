package align

import "math"

// step says how the best path came into a cell of the grid.
type step uint8

const (
	diagonal step = iota // from the frame before of both takes
	down                 // from the frame before of a
	right                // from the frame before of b
	begin                // the path begins here
)

// ceiling bounds a local cost, so that sums of many stay finite whatever the
// values are.
const ceiling = 1e100

// grid is the table of dynamic time warping. Its rows are the frames of a,
// its columns those of b; only the cells within the band are held.
type grid struct {
	a, b         []float64
	width        int
	rows, cols   int
	openA, openB int     // frames that may be passed over at each end
	step, skip   float64 // prices

	lo, hi     []int // per row: first and last column within the band
	start      []int // per row: place of its first cell in steps
	steps      []step
	prev, row  []float64 // sums of the row above and of this one; entry j+1 is column j
	cost       []float64 // local costs of this row
	exit       exit
	longestRow int
}

// rounding is far above the rounding error of a place in the grid and far
// below a frame: a cell on the edge of the band is within.
const rounding = 1e-9

// exit is a cell in which a path may end.
type exit struct {
	row, col int
	sum      float64 // with the price of the frames passed over after it
}

// lay prepares the grid for two takes.
func (g *grid) lay(a, b []float64, width int, o Options) {
	g.a, g.b, g.width = a, b, width
	g.rows, g.cols = len(a)/width, len(b)/width
	g.openA, g.openB = open(g.rows, o.Open), open(g.cols, o.Open)
	g.band(o.Band)
	c0 := g.onDiagonal()
	g.step, g.skip = o.Step*c0, o.Skip*c0
	g.prev, g.row = infinite(g.prev, g.cols+1), infinite(g.row, g.cols+1)
	g.exit = exit{row: g.rows - 1, col: g.cols - 1, sum: math.Inf(1)}
}

// open returns how many of n frames may be passed over at an end: the given
// fraction, and never so many that the two ends meet.
func open(n int, fraction float64) int {
	return max(0, min(int(fraction*float64(n)), (n-1)/2))
}

// band sets the columns of each row. The half width is the given fraction of
// the longer take, and at least what keeps one row's columns joined to the
// next one's and the corners within.
func (g *grid) band(fraction float64) {
	slope := g.slope()
	half := max(1, slope, fraction*float64(max(g.rows, g.cols)))
	g.lo, g.hi, g.start = sized(g.lo, g.rows), sized(g.hi, g.rows), sized(g.start, g.rows)
	cells := 0
	g.longestRow = 0
	for i := range g.rows {
		middle := slope * float64(i)
		g.lo[i] = max(0, int(math.Ceil(middle-half-rounding)))
		g.hi[i] = min(g.cols-1, int(middle+half+rounding))
		if g.rows == 1 {
			g.lo[i], g.hi[i] = 0, g.cols-1
		}
		g.start[i] = cells
		n := g.hi[i] - g.lo[i] + 1
		cells, g.longestRow = cells+n, max(g.longestRow, n)
	}
	g.steps, g.cost = sized(g.steps, cells), sized(g.cost, g.longestRow)
}

// slope returns how many columns the diagonal crosses per row.
func (g *grid) slope() float64 {
	if g.rows == 1 {
		return float64(g.cols)
	}
	return float64(g.cols-1) / float64(g.rows-1)
}

// onDiagonal returns the mean local cost of frames at the same fraction of
// their takes, b read in between linearly.
func (g *grid) onDiagonal() float64 {
	slope, sum := g.slope(), 0.0
	for i := range g.rows {
		at := min(slope*float64(i), float64(g.cols-1))
		if g.rows == 1 {
			at = 0
		}
		j := int(at)
		f := at - float64(j)
		here := g.b[j*g.width:][:g.width]
		next := g.b[min(j+1, g.cols-1)*g.width:][:g.width]
		d := 0.0
		for c, v := range g.a[i*g.width:][:g.width] {
			e := v - here[c] - f*(next[c]-here[c])
			d += e * e
		}
		sum += bounded(d / float64(g.width))
	}
	return sum / float64(g.rows)
}

// fill computes the cells row by row, keeping how the best path came into each.
func (g *grid) fill() {
	for i := range g.rows {
		lo, hi := g.lo[i], g.hi[i]
		g.costs(i)
		g.row[lo] = math.Inf(1) // column lo-1, left of the band
		steps := g.steps[g.start[i]:][:hi-lo+1]
		from := lo
		if i == 0 {
			g.top(steps)
			from = hi + 1
		} else if lo == 0 {
			g.edge(i, steps)
			from = 1
		}
		if from <= hi {
			fillRow(g.row[from:hi+2], g.prev[from:hi+2], g.cost[from-lo:hi-lo+1], steps[from-lo:], g.step)
		}
		g.leave(i)
		g.prev, g.row = g.row, g.prev
		if i+1 < g.rows { // the row below may end further right than this one
			for j := hi + 1; j <= g.hi[i+1]; j++ {
				g.prev[j+1] = math.Inf(1)
			}
		}
	}
}

// fillRow computes cells of one row from the row above. Entry 0 of row and
// above is the column before the first cell.
func fillRow(row, above, cost []float64, steps []step, price float64) {
	above = above[:len(row)]
	steps = steps[:len(cost)]
	row = row[:len(cost)+1]
	left, corner := row[0], above[0]
	for j, c := range cost {
		over := above[j+1]
		best, s := corner, diagonal
		if d := over + price; d < best {
			best, s = d, down
		}
		if d := left + price; d < best {
			best, s = d, right
		}
		corner, left = over, best+c
		row[j+1], steps[j] = left, s
	}
}

// top computes the first row: the path comes from the left or begins here.
func (g *grid) top(steps []step) {
	for j := range steps {
		sum, s := g.row[j]+g.step, right
		if d := g.skip * float64(j); j == 0 || j <= g.openB && d < sum {
			sum, s = d, begin
		}
		g.row[j+1], steps[j] = sum+g.cost[j], s
	}
}

// edge computes the first column of a row: the path comes from above or
// begins here.
func (g *grid) edge(i int, steps []step) {
	sum, s := g.prev[1]+g.step, down
	if d := g.skip * float64(i); i <= g.openA && d < sum {
		sum, s = d, begin
	}
	g.row[1], steps[0] = sum+g.cost[0], s
}

// leave looks for the best cell in which to end among those of row i. Of two
// as good it keeps the one that passes over fewer frames.
func (g *grid) leave(i int) {
	last := g.cols - 1
	if i == g.rows-1 {
		for j := max(g.lo[i], last-g.openB); j <= last; j++ {
			g.offer(exit{i, j, g.row[j+1] + g.skip*float64(last-j)})
		}
	} else if i >= g.rows-1-g.openA && g.hi[i] == last {
		g.offer(exit{i, last, g.row[last+1] + g.skip*float64(g.rows-1-i)})
	}
}

// offer keeps e if it is better than the exit kept so far.
func (g *grid) offer(e exit) {
	if e.sum < g.exit.sum || e.sum == g.exit.sum && g.passed(e) <= g.passed(g.exit) {
		g.exit = e
	}
}

func (g *grid) passed(e exit) int { return g.rows - 1 - e.row + g.cols - 1 - e.col }

func bounded(d float64) float64 {
	if d < ceiling {
		return d
	}
	return ceiling
}

// infinite returns s grown to n entries, all infinite.
func infinite(s []float64, n int) []float64 {
	s = sized(s, n)
	for i := range s {
		s[i] = math.Inf(1)
	}
	return s
}

// sized returns s with n entries of any value.
func sized[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n+n/4)[:n]
	}
	return s[:n]
}
