package template

// table is a table of dynamic time warping of two sketches, of which one row is
// held. It holds scratch and serves one goroutine.
type table struct {
	a, b  *sketch             // of the rows and of the columns
	row   []uint64            // the last row done: entry j+1 is column j, entry 0 the border
	done  int                 // columns of it that were done; those after are endless
	left  [stripRows]uint64   // in each row of the strip, the cell last done
	cost  [stripRows][]uint64 // scratch of cells that are not done in one go
	cells int64               // cells done, over all tables
}

// endless is above the cost of any path, and leaves room to add to it.
const endless = uint64(1) << 61

// warp returns a cost that no path within the half width is below, or endless
// when every path is above limit. rest says, for every strip of rows, what is
// to come from it on at least, and has one entry more.
//
// The band is that of a strip as a whole, a little wider than that of its rows.
// Cells at either end of a strip from which no path ends below the limit are
// left out: PrunedDTW of Silva and Batista, "Speeding up all-pairwise dynamic
// time warping matrix calculation", SIAM SDM (2016) 837, with the remainder of
// Rakthanmanon et al., "Searching and mining trillions of time series
// subsequences under dynamic time warping", KDD (2012) 262.
func (t *table) warp(a, b *sketch, half int, limit uint64, rest []uint64) uint64 {
	t.reset(a, b)
	begin, end := 0, 0 // of the columns alive in the row above
	for first := 0; first < a.frames; first += stripRows {
		ahead, lo, hi := rest[first/stripRows+1], max(begin, first-half), min(b.frames, first+stripRows+half)
		if ahead > limit || end < lo {
			return endless // what is alive has left the band
		}
		t.strip(first, lo, hi, end+stripRows, limit-ahead)
		if first+stripRows >= a.frames {
			break // rows below the table need not be alive
		}
		if begin, end = alive(t.row[1:t.done+1], lo, limit-ahead); begin == end {
			return endless
		}
	}
	cost := t.left[(a.frames-1)%stripRows]
	if t.done < b.frames || cost > limit {
		return endless
	}
	return cost
}

// reset makes the row the border above the table.
func (t *table) reset(a, b *sketch) {
	t.a, t.b, t.done = a, b, 0
	t.row = append(t.row[:0], 0)
	for range b.frames {
		t.row = append(t.row, endless)
	}
	for k, c := range t.cost {
		t.cost[k] = sized(c, b.frames)
	}
}

// further is the number of columns done at a time beyond those that paths reach
// straight from the row above.
const further = 4

// strip brings the row down by stripRows rows from row first on: columns lo to
// end, then on until hi or until no cell is at or below limit.
func (t *table) strip(first, lo, hi, end int, limit uint64) {
	for k := range t.left {
		t.left[k] = endless
	}
	before, corner := t.done, t.row[lo]
	t.row[lo] = endless // no path comes back left of lo
	for end = min(hi, end); ; end = min(hi, end+further) {
		corner = t.fill(first, lo, end, corner)
		if lo = end; end == hi || min(t.left[0], t.left[1], t.left[2], t.left[3]) > limit {
			break
		}
	}
	t.done = end
	for j := end; j < before; j++ {
		t.row[j+1] = endless
	}
}

// alive returns the range of the cells from lo on that lie at or below limit at
// its ends. It is empty when there are none.
func alive(row []uint64, lo int, limit uint64) (begin, end int) {
	begin, end = lo, len(row)
	for begin < end && row[begin] > limit {
		begin++
	}
	for end > begin && row[end-1] > limit {
		end--
	}
	return begin, end
}
