package template

// fill does the cells of a strip in columns lo to hi. corner is the cell above
// and left of the first; the one above and left of the next is returned. Rows
// below the table are filled with whatever costs least to come by, and not read.
func (t *table) fill(first, lo, hi int, corner uint64) uint64 {
	t.cells += int64(stripRows * (hi - lo))
	switch {
	case t.a.single:
		return t.fillSingle(first, lo, hi, corner)
	case len(t.a.words) <= atOnce*t.a.frames:
		return t.fillFew(first, lo, hi, corner)
	}
	return t.fillMany(first, lo, hi, corner)
}

// fillSingle is fill for sketches of one channel.
func (t *table) fillSingle(first, lo, hi int, corner uint64) uint64 {
	var a [stripRows]uint64
	copy(a[:], t.a.words[first:])
	row := t.row[lo+1 : hi+1]
	b := t.b.words[lo:][:len(row)]
	left0, left1, left2, left3 := t.left[0], t.left[1], t.left[2], t.left[3]
	for j, above := range row {
		e0, e1, e2, e3 := a[0]-b[j], a[1]-b[j], a[2]-b[j], a[3]-b[j]
		d0, d1, d2, d3 := min(above, corner), min(left0, left1), min(left1, left2), min(left2, left3)
		corner = above
		left0 = min(left0, d0) + e0*e0
		left1 = min(left0, d1) + e1*e1
		left2 = min(left1, d2) + e2*e2
		left3 = min(left2, d3) + e3*e3
		row[j] = left3
	}
	t.left = [stripRows]uint64{left0, left1, left2, left3}
	return corner
}

// fillFew is fill for sketches of one word or two a frame. The words of the
// strip stay in memory: there are not registers enough.
func (t *table) fillFew(first, lo, hi int, corner uint64) uint64 {
	n, m := t.a.frames, t.b.frames
	var a [atOnce * stripRows]uint64
	var norms [stripRows]uint64
	copy(a[:stripRows], t.a.words[first:n])
	copy(a[stripRows:], t.a.words[min(n+first, len(t.a.words)):])
	copy(norms[:], t.a.norms[first:])
	row := t.row[lo+1 : hi+1]
	// Where there is one word, those of a in place of the second are 0.
	b0, b1, sums := t.b.words[lo:][:len(row)], t.b.words[len(t.b.words)-m+lo:][:len(row)], t.b.norms[lo:][:len(row)]
	left0, left1, left2, left3 := t.left[0], t.left[1], t.left[2], t.left[3]
	for j, above := range row {
		x, y, sum := b0[j], b1[j], sums[j]
		d0, d1, d2, d3 := min(above, corner), min(left0, left1), min(left1, left2), min(left2, left3)
		corner = above
		left0 = min(left0, d0) + (sum + norms[0] - (a[0]*x+a[4]*y)>>doubling)
		left1 = min(left0, d1) + (sum + norms[1] - (a[1]*x+a[5]*y)>>doubling)
		left2 = min(left1, d2) + (sum + norms[2] - (a[2]*x+a[6]*y)>>doubling)
		left3 = min(left2, d3) + (sum + norms[3] - (a[3]*x+a[7]*y)>>doubling)
		row[j] = left3
	}
	t.left = [stripRows]uint64{left0, left1, left2, left3}
	return corner
}

// fillMany is fill for sketches of any number of words: costs first, row by row.
func (t *table) fillMany(first, lo, hi int, corner uint64) uint64 {
	row := t.row[lo+1 : hi+1]
	for k := range min(stripRows, t.a.frames-first) {
		t.a.costs(t.cost[k][:len(row)], first+k, t.b, lo)
	}
	c0, c1, c2, c3 := t.cost[0][:len(row)], t.cost[1][:len(row)], t.cost[2][:len(row)], t.cost[3][:len(row)]
	left0, left1, left2, left3 := t.left[0], t.left[1], t.left[2], t.left[3]
	for j, above := range row {
		d0, d1, d2, d3 := min(above, corner), min(left0, left1), min(left1, left2), min(left2, left3)
		corner = above
		left0 = min(left0, d0) + c0[j]
		left1 = min(left0, d1) + c1[j]
		left2 = min(left1, d2) + c2[j]
		left3 = min(left2, d3) + c3[j]
		row[j] = left3
	}
	t.left = [stripRows]uint64{left0, left1, left2, left3}
	return corner
}
