package convolution

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"
)

// byRows is the form with one equation per row: with X the centred and scaled
// rows and Y the centred targets, the weights are Xᵀ·(X·Xᵀ + strength·I)⁻¹·Y.
type byRows struct {
	*Trainer
	*equations
	x     *mat.Dense // rows × width
	mean  []float64
	scale []float64
	rows  []int // per class
}

func (t *Trainer) byRows() *byRows {
	n := len(t.source)
	f := &byRows{Trainer: t, x: mat.NewDense(n, t.width, nil), mean: make([]float64, t.width), rows: make([]int, len(t.labels))}
	for i, s := range t.source {
		f.rows[t.classes[s]]++
		floats.AddScaled(f.mean, 1/float64(n), t.row(i))
	}
	f.standardise()
	right := mat.NewDense(n, len(t.labels), nil)
	right.Apply(func(i, c int, _ float64) float64 {
		return target(c, t.classes[t.source[i]]) - meanTarget(f.rows[c], n)
	}, right)
	gram := mat.NewSymDense(n, nil)
	gram.SymOuterK(1, f.x)
	f.equations = newEquations(gram, right)
	return f
}

// row returns row i held, relative to the origin.
func (t *Trainer) row(i int) []float64 { return t.held[i*t.width : (i+1)*t.width] }

// standardise fills x and scale.
func (f *byRows) standardise() {
	n := len(f.source)
	f.scale = make([]float64, f.width) // sums of squares at first
	for i := range n {
		for j, v := range floats.SubTo(f.x.RawRowView(i), f.row(i), f.mean) {
			f.scale[j] += v * v
		}
	}
	for j, squares := range f.scale {
		f.scale[j] = inverse(squares/float64(n), f.origin[j])
	}
	for i := range n {
		floats.Mul(f.x.RawRowView(i), f.scale)
	}
}

func (f *byRows) fit(strength float64) (*Model, error) {
	a, err := f.solve(strength)
	if err != nil {
		return nil, err
	}
	var weights mat.Dense
	weights.Mul(f.x.T(), a)
	return f.model(&weights, f.scale, f.mean, f.rows, strength), nil
}

// validate needs no fit without each part. The errors made on rows left out
// follow from the fit to all: they are [C]⁻¹·(C·Y), where [C] is the block of
// those rows in C, see cut. It is the formula of leaving out one row (G. H.
// Golub, M. Heath, G. Wahba, "Generalized cross-validation as a method for
// choosing a good ridge parameter", Technometrics 21 (1979) 215–223) with a
// block in place of the diagonal element.
func (f *byRows) validate(strengths []float64) ([]float64, error) {
	sums := make([]float64, len(strengths))
	blocks := f.blocks()
	for i, strength := range strengths {
		c, err := f.cut(strength)
		if err != nil {
			return nil, err
		}
		var all mat.Dense
		all.Mul(c, f.right)
		for _, block := range blocks {
			sums[i] += f.leaveOut(block, c, &all)
		}
	}
	return sums, nil
}

// cut returns C = (X·Xᵀ + strength·I)⁻¹ − 1·1ᵀ/(rows·strength), which turns
// targets into what the fit leaves of them, divided by the strength. The last
// term stands for the constant, which is fitted as well.
func (f *byRows) cut(strength float64) (*mat.SymDense, error) {
	chol, err := f.factor(strength)
	if err != nil {
		return nil, err
	}
	var c mat.SymDense
	if err := chol.InverseTo(&c); err != nil {
		return nil, fmt.Errorf("invert for ridge strength %g: %w", strength, err)
	}
	n := c.SymmetricDim()
	constant := 1 / (float64(n) * strength)
	for i := range n {
		for j := i; j < n; j++ {
			c.SetSym(i, j, c.At(i, j)-constant)
		}
	}
	return &c, nil
}

// blocks returns the rows of each part that is left out.
func (f *byRows) blocks() [][]int {
	blocks := make([][]int, 1+slices.Max(f.parts))
	for i, s := range f.source {
		blocks[f.parts[s]] = append(blocks[f.parts[s]], i)
	}
	return blocks[1:]
}

// leaveOut returns the squared error of the recorded takes among the rows
// left out, infinite where it is lost in rounding.
func (f *byRows) leaveOut(rows []int, c *mat.SymDense, all *mat.Dense) float64 {
	block, right := mat.NewSymDense(len(rows), nil), mat.NewDense(len(rows), len(f.labels), nil)
	for i, r := range rows {
		for j, s := range rows[i:] {
			block.SetSym(i, i+j, c.At(r, s))
		}
		right.SetRow(i, all.RawRowView(r))
	}
	var chol mat.Cholesky
	var e mat.Dense
	if !chol.Factorize(block) || chol.SolveTo(&e, right) != nil {
		return math.Inf(1)
	}
	sum := 0.0
	for i, r := range rows {
		if r == 0 || f.source[r-1] != f.source[r] { // the recorded take leads its block
			sum += floats.Dot(e.RawRowView(i), e.RawRowView(i))
		}
	}
	return sum
}
