package path_test

import (
	"fmt"
	"math/rand/v2"

	"strandwise/augment/path"
)

// A stroke of a fingertip 30 cm to the right and 10 cm up, resampled at five
// points: every step of the new stroke is 10 cm long.
func ExampleArc_Resample() {
	stroke := path.NewArc([]float64{0, 0, 0.3, 0, 0.3, 0.1}, 2) // metres
	rng := rand.New(rand.NewPCG(1, 2))
	intervals := path.Intervals(make([]float64, 4), 0.25, rng)
	points := stroke.Resample(nil, intervals)
	fmt.Printf("source length %.2f m, regression asks for %.0f points\n", stroke.Length(), stroke.Knots())
	for k := 0; k < len(points); k += 2 {
		fmt.Printf("x %.3f m  y %.3f m\n", points[k], points[k+1])
	}
	// Output:
	// source length 0.40 m, regression asks for 8 points
	// x 0.000 m  y 0.000 m
	// x 0.100 m  y 0.000 m
	// x 0.200 m  y 0.000 m
	// x 0.298 m  y 0.018 m
	// x 0.298 m  y 0.118 m
}

// A wrist moves for one second, rests for two and moves for another. The
// more the parameter follows time, the longer a stretch the rest has on it.
func ExampleClock() {
	seconds := []float64{0, 1, 3, 4}
	moved := []float64{0, 0.2, 0.2, 0.4} // metres along the path
	for _, share := range []float64{0, 0.5, 1} {
		clock := path.NewClock(seconds, moved, share)
		rest := clock.Parameter(0.75) - clock.Parameter(0.25)
		fmt.Printf("time share %.1f: the rest spans %.0f %% of the path's parameter\n", share, 100*rest)
	}
	// Output:
	// time share 0.0: the rest spans 0 % of the path's parameter
	// time share 0.5: the rest spans 25 % of the path's parameter
	// time share 1.0: the rest spans 50 % of the path's parameter
}

// A take at 10 Hz, read half-way between two frames.
func ExampleSamples_At() {
	take := path.Samples{Time: []float64{0, 0.1, 0.2, 0.3}, Values: []float64{0, 1, 4, 9}, Width: 1} // m/s²
	value := make([]float64, 1)
	take.At(value, 0.15, []int{0})
	fmt.Printf("%.2f m/s² at 0.15 s\n", value[0])
	// Output: 2.25 m/s² at 0.15 s
}
