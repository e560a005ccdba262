package method_test

import (
	"fmt"
	"math/rand/v2"

	"strandwise/augment/method"
)

// A wrist moves 40 cm to the right in half a second, at 10 Hz.
var (
	seconds = []float64{0, 0.1, 0.2, 0.3, 0.4, 0.5}
	metres  = []float64{0, 0.02, 0.12, 0.28, 0.38, 0.4}
)

func show(name string, values []float64) {
	fmt.Printf("%-10s", name)
	for _, v := range values {
		fmt.Printf(" %5.2f", v)
	}
	fmt.Println(" m")
}

func Example() {
	rng := rand.New(rand.NewPCG(1, 2))
	show("source", metres)
	show("jitter", method.Jitter{Deviation: 0.01}.Apply(nil, metres, 1, seconds, rng))
	show("scaling", method.PublishedScaling().Apply(nil, metres, 1, seconds, rng))
	show("magnitude", method.PublishedMagnitudeWarp().Apply(nil, metres, 1, seconds, rng))
	show("time warp", method.PublishedTimeWarp().Apply(nil, metres, 1, seconds, rng))
	show("slice", method.PublishedSlice().Apply(nil, metres, 1, seconds, rng))
	// Output:
	// source      0.00  0.02  0.12  0.28  0.38  0.40 m
	// jitter      0.00  0.02  0.12  0.27  0.38  0.37 m
	// scaling     0.00  0.02  0.14  0.33  0.45  0.48 m
	// magnitude   0.00  0.02  0.10  0.28  0.40  0.25 m
	// time warp   0.00  0.03  0.12  0.25  0.38  0.40 m
	// slice       0.00  0.03  0.13  0.27  0.37  0.40 m
}

func ExampleRotation() {
	rng := rand.New(rand.NewPCG(1, 2))
	gravity := []float64{0, 0, 9.81, 0, 0, 9.81} // m/s², two frames
	turned := method.Rotation{Limit: 0.3}.Apply(nil, gravity, 3, []float64{0, 0.02}, rng)
	fmt.Printf("%.2f m/s²\n", turned[:3])
	// Output:
	// [0.18 -0.08 9.81] m/s²
}

func ExampleNoise_At() {
	noise := method.NewNoise(1, rand.New(rand.NewPCG(1, 2)))
	for _, cells := range []float64{0, 0.5, 1, 1.5, 2} {
		fmt.Printf("%.2f ", noise.At(cells))
	}
	// Output:
	// 0.00 1.27 0.00 0.49 0.00
}

func ExampleNoiseField() {
	field := method.NoiseField{Size: 0.02, Cells: 2, Octaves: 2, Persistence: 0.5} // 2 cm
	show("displaced", field.Apply(nil, metres, 1, seconds, rand.New(rand.NewPCG(1, 2))))
	// Output:
	// displaced   0.02  0.01  0.14  0.28  0.38  0.40 m
}

// An L of two straight legs, its legs turned and scaled apart from each other.
func ExampleParts() {
	legs := []float64{0, 0, 0.1, 0, 0.2, 0, 0.2, 0.1, 0.2, 0.2} // x, y in metres
	parts := method.Parts{Count: 2, Angle: 0.2, Scale: 0.2, AtBends: true}
	made := parts.Apply(nil, legs, 2, []float64{0, 1, 2, 3, 4}, rand.New(rand.NewPCG(1, 2)))
	for i := 0; i < len(made); i += 2 {
		fmt.Printf("(%.3f, %.3f) ", made[i], made[i+1])
	}
	// Output:
	// (-0.004, 0.017) (0.097, 0.025) (0.198, 0.032) (0.202, 0.086) (0.207, 0.140)
}

// The same bump, early and late: their average under time warping is a bump,
// where the plain mean would be two.
func ExampleBarycentre_Average() {
	early, late := []float64{0, 4, 0, 0, 0, 0}, []float64{0, 0, 0, 0, 2, 0}
	average := method.Barycentre{Iterations: 10, Band: 1}
	fmt.Println(average.Average(nil, early, [][]float64{early, late}, []float64{1, 1}, 1))
	// Output:
	// [0 3 0 0 0 0]
}
