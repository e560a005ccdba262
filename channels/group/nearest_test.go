package group_test

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"

	"strandwise/channels/group"
)

// Higham's example (2002; the figures from memory), and by hand: the nearest matrix has
// a and b off the diagonal and no third eigenvalue, so that b = 2a² − 1, and is
// nearest where 4a³ − a − 1 = 0.
func TestNearestCorrelationOfHighamsExample(t *testing.T) {
	const tolerance = 5e-5 // the paper gives four places
	got, err := group.NearestCorrelation(mat.NewSymDense(3, []float64{1, 1, 0, 1, 1, 1, 0, 1, 1}))
	if err != nil {
		t.Fatal(err)
	}
	want := mat.NewSymDense(3, []float64{1, 0.7607, 0.1573, 0.7607, 1, 0.7607, 0.1573, 0.7607, 1})
	if !mat.EqualApprox(got, want, tolerance) {
		t.Errorf("got\n%.6f", mat.Formatted(got))
	}
	a, b := got.At(0, 1), got.At(0, 2)
	if math.Abs(4*a*a*a-a-1) > 1e-6 || math.Abs(b-(2*a*a-1)) > 1e-6 {
		t.Errorf("a = %.9f, b = %.9f are off the exact answer", a, b)
	}
}

func TestNearestCorrelationRefusesWhatIsNoNumber(t *testing.T) {
	for _, v := range []float64{math.NaN(), math.Inf(1)} {
		if _, err := group.NearestCorrelation(mat.NewSymDense(2, []float64{1, v, v, 1})); err == nil {
			t.Errorf("%g is accepted", v)
		}
	}
}

// drawSymmetric draws a matrix of pairwise correlations that need not go
// together.
func drawSymmetric(t *rapid.T, n int) *mat.SymDense {
	a := mat.NewSymDense(n, nil)
	for i := range n {
		a.SetSym(i, i, 1)
		for j := i + 1; j < n; j++ {
			a.SetSym(i, j, rapid.Float64Range(-1, 1).Draw(t, "correlation"))
		}
	}
	return a
}

func smallestEigenvalue(a mat.Symmetric) float64 {
	var e mat.EigenSym
	e.Factorize(a, false)
	return e.Values(nil)[0]
}

// distance is the Frobenius distance.
func distance(a, b mat.Matrix) float64 {
	var d mat.Dense
	d.Sub(a, b)
	return mat.Norm(&d, 2)
}

func TestNearestCorrelationProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 6).Draw(t, "n")
		a := drawSymmetric(t, n)
		x, err := group.NearestCorrelation(a)
		if err != nil {
			t.Fatal(err)
		}
		for i := range n {
			if x.At(i, i) != 1 {
				t.Fatalf("the diagonal holds %g", x.At(i, i))
			}
		}
		if e := smallestEigenvalue(x); e < -1e-12 {
			t.Fatalf("smallest eigenvalue %g", e)
		}
		if smallestEigenvalue(a) > 1e-9 && distance(a, x) > 1e-9 {
			t.Fatalf("a correlation matrix is changed by %g", distance(a, x))
		}
		// No correlation matrix is nearer: not the identity, nor any on the way
		// from x to another one.
		other := unit(t, n)
		for _, share := range []float64{1e-3, 1e-2, 0.1, 1} {
			var y mat.SymDense
			y.ScaleSym(1-share, x)
			var z mat.SymDense
			z.ScaleSym(share, other)
			y.AddSym(&y, &z)
			if distance(a, &y) < distance(a, x)-1e-6 {
				t.Fatalf("%g of the way to another is nearer: %g, not %g", share, distance(a, &y), distance(a, x))
			}
		}
		root, err := group.SquareRoot(x)
		if err != nil {
			t.Fatal(err)
		}
		var back mat.Dense
		back.Mul(root, root)
		if d := distance(&back, x); d > 1e-9 {
			t.Fatalf("the square of the root is off by %g", d)
		}
		if e := smallestEigenvalue(root); e < -1e-7 {
			t.Fatalf("the root has the eigenvalue %g", e)
		}
	})
}

// unit draws a correlation matrix: the products of n directions.
func unit(t *rapid.T, n int) *mat.SymDense {
	directions := mat.NewDense(n, n, nil)
	for i := range n {
		norm := 0.0
		for j := range n {
			v := rapid.Float64Range(-1, 1).Draw(t, "direction")
			directions.Set(i, j, v)
			norm += v * v
		}
		if norm < 1e-6 {
			directions.Set(i, i, 1)
			norm = mat.Dot(directions.RowView(i), directions.RowView(i))
		}
		for j := range n {
			directions.Set(i, j, directions.At(i, j)/math.Sqrt(norm))
		}
	}
	var out mat.SymDense
	out.SymOuterK(1, directions)
	return &out
}

func ExampleNearestCorrelation() {
	// Left and right go together, and so do right and head, but not left and
	// head: three correlations that cannot all be.
	x, _ := group.NearestCorrelation(mat.NewSymDense(3, []float64{1, 1, 0, 1, 1, 1, 0, 1, 1}))
	fmt.Printf("%.4f\n", mat.Formatted(x))
	// Output:
	// ⎡1.0000  0.7607  0.1573⎤
	// ⎢0.7607  1.0000  0.7607⎥
	// ⎣0.1573  0.7607  1.0000⎦
}
