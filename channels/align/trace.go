package align

// trace walks the best path back from its exit and returns the alignment
// before smoothing.
func (g *grid) trace() Alignment {
	al := Alignment{At: make([]float64, g.rows), Last: g.exit.row}
	i, j := g.exit.row, g.exit.col
	al.End = (g.rows - 1 - i) - (g.cols - 1 - j)
	cells, sum := 0, 0.0
	highest := j // column by which the path left row i
	for {
		sum += g.local(i, j)
		cells++
		s := g.steps[g.start[i]+j-g.lo[i]]
		if s != right { // the path came into the row here: its columns are j to highest
			al.At[i] = float64(j+highest) / 2
		}
		switch s {
		case diagonal:
			i, j = i-1, j-1
			highest = j
		case down:
			i--
			highest = j
		case right:
			j--
		}
		if s == begin {
			break
		}
	}
	al.First, al.Begin, al.Cost = i, j-i, sum/float64(cells)
	for k := al.Last + 1; k < g.rows; k++ {
		al.At[k] = float64(g.cols - 1)
	}
	return al
}

// local returns the local cost of one cell.
func (g *grid) local(i, j int) float64 {
	a, b := g.a[i*g.width:][:g.width], g.b[j*g.width:][:g.width]
	d := 0.0
	for c, v := range a {
		d += (v - b[c]) * (v - b[c])
	}
	return bounded(d / float64(g.width))
}
