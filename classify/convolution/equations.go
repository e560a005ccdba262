package convolution

import (
	"fmt"

	"gonum.org/v1/gonum/mat"
)

// equations are the equations of ridge regression, (gram + strength·I)·X =
// right, one column of X per class.
type equations struct {
	gram     *mat.SymDense
	diagonal []float64 // of gram, before any strength was added
	right    *mat.Dense
}

func newEquations(gram *mat.SymDense, right *mat.Dense) *equations {
	e := &equations{gram: gram, right: right, diagonal: make([]float64, gram.SymmetricDim())}
	for i := range e.diagonal {
		e.diagonal[i] = gram.At(i, i)
	}
	return e
}

// factor returns the Cholesky decomposition of the left side.
func (e *equations) factor(strength float64) (*mat.Cholesky, error) {
	for i, d := range e.diagonal {
		e.gram.SetSym(i, i, d+strength)
	}
	var c mat.Cholesky
	if ok := c.Factorize(e.gram); !ok || c.Cond() > mat.ConditionTolerance {
		return nil, fmt.Errorf("ridge strength %g is lost in rounding; take a greater one", strength)
	}
	return &c, nil
}

// solve returns X.
func (e *equations) solve(strength float64) (*mat.Dense, error) {
	c, err := e.factor(strength)
	if err != nil {
		return nil, err
	}
	var x mat.Dense
	if err := c.SolveTo(&x, e.right); err != nil {
		return nil, fmt.Errorf("solve for ridge strength %g: %w", strength, err)
	}
	return &x, nil
}
