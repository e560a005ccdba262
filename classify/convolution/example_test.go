package convolution_test

import (
	"fmt"
	"math"
	"math/rand/v2"

	"strandwise/channels"
	"strandwise/classify/convolution"
)

// Two puppeteers wave or raise a hand; of each recorded take a slower one was
// made. A third puppeteer, who does both in a lower place, is told by what was
// learnt.
func Example() {
	layout := &channels.Layout{Channels: []channels.Channel{{Name: "hand.pos.z", Quantity: channels.Position, Unit: "m"}}}
	gesture := func(label string, height, seconds float64) *channels.Take {
		t := &channels.Take{ID: label, Label: label, Layout: layout}
		for at := 0.0; at <= seconds; at += 0.02 {
			z := height * at / seconds
			if label == "wave" {
				z = height * math.Sin(6*math.Pi*at/seconds)
			}
			t.Time, t.Data = append(t.Time, at), append(t.Data, 1+z)
		}
		return t
	}
	names := []string{"raise", "wave"}
	kernels, err := convolution.New(convolution.Options{Kernels: 100}, 1, rand.New(rand.NewPCG(1, 1)))
	if err != nil {
		fmt.Println(err)
		return
	}
	worker := kernels.Worker()
	describe := func(t *channels.Take) []float64 {
		f, err := worker.Features(nil, t)
		if err != nil {
			panic(err)
		}
		return f
	}

	trainer := convolution.Ridge{Choose: true}.Trainer(kernels.Width(), []int{0, 1, 0, 1})
	for source, height := range []float64{0.3, 0.2, 0.5, 0.25} {
		recorded := gesture(names[source%2], height, 0.8)
		made := gesture(names[source%2], height, 1.1)
		trainer.Offer(source, append(describe(recorded), describe(made)...))
	}
	model, err := trainer.Train()
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(names[model.Predict(describe(gesture("raise", 0.1, 0.9)))])
	fmt.Println(names[model.Predict(describe(gesture("wave", 0.1, 0.9)))])
	// Output:
	// raise
	// wave
}
