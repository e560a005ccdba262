package lognormal_test

import (
	"errors"
	"fmt"
	"math/rand/v2"

	"strandwise/augment/lognormal"
)

// A hand draws a hook in the plane: two strokes, 30 and 20 cm long, that
// overlap. The extraction finds them; a draw with other parameters is a new
// hook.
func Example() {
	hook := lognormal.Model{Width: 2, Strokes: []lognormal.Stroke{
		lognormal.Planar(0.30, 0.00, -1.4, 0.25, 0.0, 0.3), // metres, seconds, radians
		lognormal.Planar(0.20, 0.20, -1.5, 0.25, 2.0, 1.5),
	}}
	clock := make([]float64, 80)
	for i := range clock {
		clock[i] = float64(i) / 100
	}
	recorded := hook.Path(nil, clock)

	model, err := lognormal.Extract(recorded, 2, clock, lognormal.Default())
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%d strokes, better than 25 dB: %v\n", len(model.Strokes), model.SNR > 25)
	for _, k := range model.Strokes {
		start, end := k.Angles()
		fmt.Printf("%.2f m from %.1f to %.1f rad, fastest at %.2f s\n", k.D, start, end, k.PeakTime())
	}
	made := lognormal.Published().Synthesise(nil, model, clock, rand.New(rand.NewPCG(1, 2)))
	last := len(made) - 2
	fmt.Printf("the source ends at %.2f, %.2f m, the new path at %.2f, %.2f m\n",
		recorded[last], recorded[last+1], made[last], made[last+1])
	// Output:
	// 2 strokes, better than 25 dB: true
	// 0.30 m from 0.0 to 0.3 rad, fastest at 0.23 s
	// 0.20 m from 2.0 to 1.5 rad, fastest at 0.41 s
	// the source ends at 0.26, 0.24 m, the new path at 0.28, 0.24 m
}

// A path that jumps about is refused, with the signal-to-noise ratio reached.
func ExampleExtract_refused() {
	rng := rand.New(rand.NewPCG(1, 2))
	path, clock := make([]float64, 60), make([]float64, 60)
	for i := range path {
		path[i], clock[i] = rng.NormFloat64(), float64(i)/50
	}
	_, err := lognormal.Extract(path, 1, clock, lognormal.Default())
	var poor *lognormal.PoorFitError
	fmt.Println(errors.As(err, &poor), poor.SNR < poor.Floor)
	// Output: true true
}
