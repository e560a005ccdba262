package convolution

import "math"

// add7, add9 and add11 add the responses of the taps of one channel:
//
//	z[i] += Σ_j w[j]·x[i+j·d]
//
// Each reads one stretch of x per tap, so that the loop has neither a bounds
// check nor a table of places; padding is in x. Two partial sums let the
// processor work on both at once.

func add7(z, x []float64, d int, w *[7]float64) {
	n := len(z)
	x0, x1, x2, x3 := x[:n], x[d:][:n], x[2*d:][:n], x[3*d:][:n]
	x4, x5, x6 := x[4*d:][:n], x[5*d:][:n], x[6*d:][:n]
	w0, w1, w2, w3, w4, w5, w6 := w[0], w[1], w[2], w[3], w[4], w[5], w[6]
	for i, v := range z {
		a := w0*x0[i] + w1*x1[i] + w2*x2[i]
		b := w3*x3[i] + w4*x4[i] + w5*x5[i] + w6*x6[i]
		z[i] = v + (a + b)
	}
}

func add9(z, x []float64, d int, w *[9]float64) {
	n := len(z)
	x0, x1, x2, x3 := x[:n], x[d:][:n], x[2*d:][:n], x[3*d:][:n]
	x4, x5, x6, x7, x8 := x[4*d:][:n], x[5*d:][:n], x[6*d:][:n], x[7*d:][:n], x[8*d:][:n]
	w0, w1, w2, w3, w4, w5, w6, w7, w8 := w[0], w[1], w[2], w[3], w[4], w[5], w[6], w[7], w[8]
	for i, v := range z {
		a := w0*x0[i] + w1*x1[i] + w2*x2[i] + w3*x3[i]
		b := w4*x4[i] + w5*x5[i] + w6*x6[i] + w7*x7[i] + w8*x8[i]
		z[i] = v + (a + b)
	}
}

func add11(z, x []float64, d int, w *[11]float64) {
	n := len(z)
	x0, x1, x2, x3, x4 := x[:n], x[d:][:n], x[2*d:][:n], x[3*d:][:n], x[4*d:][:n]
	x5, x6, x7, x8, x9, x10 := x[5*d:][:n], x[6*d:][:n], x[7*d:][:n], x[8*d:][:n], x[9*d:][:n], x[10*d:][:n]
	w0, w1, w2, w3, w4, w5 := w[0], w[1], w[2], w[3], w[4], w[5]
	w6, w7, w8, w9, w10 := w[6], w[7], w[8], w[9], w[10]
	for i, v := range z {
		a := w0*x0[i] + w1*x1[i] + w2*x2[i] + w3*x3[i] + w4*x4[i]
		b := w5*x5[i] + w6*x6[i] + w7*x7[i] + w8*x8[i] + w9*x9[i] + w10*x10[i]
		z[i] = v + (a + b)
	}
}

// summarise returns the largest response and the share of those above zero.
func summarise(z []float64) (largest, positive float64) {
	largest = z[0]
	count := uint64(0)
	for _, v := range z {
		if v > largest {
			largest = v
		}
		// Signs change at random, which a branch would stumble over. The top bit
		// of −bits is set for numbers above zero, and for −0, which cannot come
		// of a sum that begins with a bias other than −0.
		count += -math.Float64bits(v) >> 63
	}
	return largest, float64(count) / float64(len(z))
}
