package lognormal

import "math"

// equations are the normal equations of a least-squares step. Only the lower
// triangle of the matrix is held.
type equations struct {
	size    int
	matrix  []float64 // JᵀJ, size × size
	factor  []float64 // scratch of solve
	descent []float64 // Jᵀr
	delta   []float64
}

// reset clears the equations for the given number of parameters.
func (e *equations) reset(size int) {
	e.size = size
	e.matrix = zeros(e.matrix, size*size)
	e.factor = zeros(e.factor, size*size)
	e.descent = zeros(e.descent, size)
	e.delta = zeros(e.delta, size)
}

// project adds a stroke's share of Jᵀr, its m parameters beginning at position
// at.
func (e *equations) project(b *block, residual signal, at, m int) {
	for i, row := range b.slopes {
		r := residual.velocity[b.low+i]
		for c := range m {
			e.descent[at+c] += dot(row[c], r)
		}
	}
}

// couple adds the products of two strokes' derivatives over the steps both move
// in: b's parameters begin at row, a's at column.
func (e *equations) couple(b, a *block, row, column, m int) {
	low, high := max(a.low, b.low), min(a.high, b.high)
	for i := low; i < high; i++ {
		p, q := &b.slopes[i-b.low], &a.slopes[i-a.low]
		for c := range m {
			line := e.matrix[(row+c)*e.size+column:]
			v := p[c]
			for d := range m {
				line[d] += v[0]*q[d][0] + v[1]*q[d][1] + v[2]*q[d][2]
			}
		}
	}
}

// floor keeps the diagonal of parameters without effect from being zero, as a
// share of the largest entry.
const floor = 1e-12

// solve returns the step of (JᵀJ + damping·diag(JᵀJ))·δ = Jᵀr by Cholesky
// decomposition, or false where rounding leaves the matrix without one. The
// step is valid until the next call.
func (e *equations) solve(damping float64) ([]float64, bool) {
	n := e.size
	copy(e.factor, e.matrix)
	largest := 0.0
	for i := range n {
		largest = max(largest, e.matrix[i*n+i])
	}
	if largest == 0 {
		return nil, false
	}
	for i := range n {
		e.factor[i*n+i] += damping*e.matrix[i*n+i] + floor*largest
	}
	if !cholesky(e.factor, n) {
		return nil, false
	}
	copy(e.delta, e.descent)
	for i := range n { // forward, then backward
		row := e.factor[i*n : i*n+i]
		for j, l := range row {
			e.delta[i] -= l * e.delta[j]
		}
		e.delta[i] /= e.factor[i*n+i]
	}
	for i := n - 1; i >= 0; i-- {
		e.delta[i] /= e.factor[i*n+i]
		for j, l := range e.factor[i*n : i*n+i] {
			e.delta[j] -= l * e.delta[i]
		}
	}
	return e.delta, true
}

// cholesky replaces the lower triangle of a by its factor, or returns false when
// a is not positive definite. Entries left of a row's first one that is not
// zero stay zero and are skipped: strokes that are apart in time do not meet.
func cholesky(a []float64, n int) bool {
	first := make([]int, n)
	for i := range n {
		row := a[i*n : (i+1)*n]
		for first[i] < i && row[first[i]] == 0 {
			first[i]++
		}
		for j := first[i]; j <= i; j++ {
			other := a[j*n : (j+1)*n]
			from := min(max(first[i], first[j]), j)
			sum := row[j] - inner(row[from:j], other[from:j])
			if j < i {
				row[j] = sum / other[j]
			} else if !(sum > 0) || math.IsInf(sum, 0) {
				return false
			} else {
				row[i] = math.Sqrt(sum)
			}
		}
	}
	return true
}

// inner returns the inner product of two vectors of one size, in four sums that
// do not wait for each other.
func inner(a, b []float64) float64 {
	b = b[:len(a)]
	var s0, s1, s2, s3 float64
	k := 0
	for ; k+4 <= len(a); k += 4 {
		s0 += a[k] * b[k]
		s1 += a[k+1] * b[k+1]
		s2 += a[k+2] * b[k+2]
		s3 += a[k+3] * b[k+3]
	}
	for ; k < len(a); k++ {
		s0 += a[k] * b[k]
	}
	return s0 + s1 + s2 + s3
}

// zeros returns s with n values, all zero.
func zeros(s []float64, n int) []float64 {
	if cap(s) < n {
		return make([]float64, n)
	}
	s = s[:n]
	clear(s)
	return s
}
