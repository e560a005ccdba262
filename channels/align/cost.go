package align

// costs computes the local costs of row i within the band: the mean over the
// width of the squared difference.
func (g *grid) costs(i int) {
	w := g.width
	a := g.a[i*w:][:w]
	b := g.b[g.lo[i]*w : (g.hi[i]+1)*w]
	dst := g.cost[:g.hi[i]-g.lo[i]+1]
	switch w {
	case 1:
		costs1(dst, a, b)
	case 2:
		costs2(dst, a, b)
	case 3:
		costs3(dst, a, b)
	default:
		costsAny(dst, a, b)
	}
	inverse := 1 / float64(w)
	for j, d := range dst {
		dst[j] = bounded(d * inverse)
	}
}

func costs1(dst, a, b []float64) {
	a0 := a[0]
	b = b[:len(dst)]
	for j := range dst {
		d := a0 - b[j]
		dst[j] = d * d
	}
}

func costs2(dst, a, b []float64) {
	a0, a1 := a[0], a[1]
	for j := range dst {
		f := b[2*j:][:2]
		d0, d1 := a0-f[0], a1-f[1]
		dst[j] = d0*d0 + d1*d1
	}
}

func costs3(dst, a, b []float64) {
	a0, a1, a2 := a[0], a[1], a[2]
	for j := range dst {
		f := b[3*j:][:3]
		d0, d1, d2 := a0-f[0], a1-f[1], a2-f[2]
		dst[j] = d0*d0 + d1*d1 + d2*d2
	}
}

// costsAny adds up four values at a time in sums of their own, which do not
// wait for each other.
func costsAny(dst, a, b []float64) {
	for j := range dst {
		f := b[j*len(a):][:len(a)]
		var s0, s1, s2, s3 float64
		c := 0
		for ; c+4 <= len(a); c += 4 {
			x, y := a[c:][:4], f[c:][:4]
			d0, d1, d2, d3 := x[0]-y[0], x[1]-y[1], x[2]-y[2], x[3]-y[3]
			s0, s1, s2, s3 = s0+d0*d0, s1+d1*d1, s2+d2*d2, s3+d3*d3
		}
		for ; c < len(a); c++ {
			d := a[c] - f[c]
			s0 += d * d
		}
		dst[j] = (s0 + s1) + (s2 + s3)
	}
}
