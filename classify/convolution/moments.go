package convolution

import (
	"math"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"
)

// moments holds the sums and products of rows, relative to one origin, which
// are all that ridge regression needs to know of them. The origin is one of the
// rows: without it, digits would be lost on features whose mean is large
// against their deviation.
type moments struct {
	rows     []int         // per class
	sums     *mat.Dense    // classes × width
	products *mat.SymDense // width × width, Σ x·xᵀ
}

func newMoments(width, classes int) *moments {
	return &moments{rows: make([]int, classes), sums: mat.NewDense(classes, width, nil), products: mat.NewSymDense(width, nil)}
}

// add counts rows of the given classes, one after the other in data.
func (m *moments) add(classes []int, data []float64) {
	_, width := m.sums.Dims()
	for i, c := range classes {
		m.rows[c]++
		floats.Add(m.sums.RawRowView(c), data[i*width:(i+1)*width])
	}
	x := blas64.General{Rows: len(classes), Cols: width, Stride: width, Data: data}
	blas64.Syrk(blas.Trans, 1, x, 1, m.products.RawSymmetric())
}

// plus returns the moments of the rows of m and, factor times, those of o: 1
// adds them, −1 takes them away.
func (m *moments) plus(factor int, o *moments) *moments {
	classes, width := m.sums.Dims()
	out := newMoments(width, classes)
	for c := range out.rows {
		out.rows[c] = m.rows[c] + factor*o.rows[c]
	}
	out.sums.Apply(func(i, j int, v float64) float64 { return v + float64(factor)*o.sums.At(i, j) }, m.sums)
	a, b, sum := m.products.RawSymmetric().Data, o.products.RawSymmetric().Data, out.products.RawSymmetric().Data
	floats.AddScaledTo(sum, a, float64(factor), b)
	return out
}

// count returns the number of rows.
func (m *moments) count() float64 {
	n := 0
	for _, rows := range m.rows {
		n += rows
	}
	return float64(n)
}

// mean returns the mean row.
func (m *moments) mean() []float64 {
	classes, width := m.sums.Dims()
	mean := make([]float64, width)
	for c := range classes {
		floats.AddScaled(mean, 1/m.count(), m.sums.RawRowView(c))
	}
	return mean
}

// scale returns the factors that bring features of these rows to deviation 1.
func (m *moments) scale(origin []float64) []float64 {
	factors, mean := make([]float64, len(origin)), m.mean()
	for j := range factors {
		variance := m.products.At(j, j)/m.count() - mean[j]*mean[j]
		factors[j] = inverse(variance, origin[j])
	}
	return factors
}

// inverse returns one over the deviation of a feature about as large as
// typical; 0 for one that does not vary but by rounding.
func inverse(variance, typical float64) float64 {
	const rounding = 1e-10
	if sd := math.Sqrt(max(0, variance)); sd > rounding*math.Abs(typical) {
		return 1 / sd
	}
	return 0
}
