package realism_test

import (
	"fmt"
	"math"

	"strandwise/classify/realism"
)

func ExampleWasserstein() {
	recorded, synthetic := []float64{0.8, 1.0, 1.5}, []float64{0.1, 0.2, 0.3}
	fmt.Printf("%.2f\n", realism.Wasserstein(recorded, synthetic))
	// Output: 0.90
}

func ExampleExponent() {
	var x, y []float64
	for i := range 60 {
		at := 2 * math.Pi * float64(i) / 60
		x, y = append(x, 2*math.Cos(at)), append(y, math.Sin(at))
	}
	e, _ := realism.Exponent(x, y)
	fmt.Printf("%.3f\n", e)
	// Output: -0.333
}
