package augment_test

import (
	"context"
	"fmt"

	"strandwise/augment"
	"strandwise/channels"
)

// swing is a recorded take of half a second: a wrist that swings out 20 cm and
// back, seen from the side.
func swing() *channels.Take {
	l := &channels.Layout{Channels: []channels.Channel{
		{Name: "left_wrist.pos.x", TrackedPoint: "left_wrist", Quantity: channels.Position, Component: "x", Unit: "m"},
		{Name: "left_wrist.pos.y", TrackedPoint: "left_wrist", Quantity: channels.Position, Component: "y", Unit: "m"},
	}}
	l, err := l.WithGroups([]channels.Group{{Name: "left_wrist.pos", Limb: "left_arm", Channels: []int{0, 1}}})
	if err != nil {
		panic(err)
	}
	return &channels.Take{
		ID: "swing 1", Label: "swing", Layout: l,
		Time: []float64{0, 0.1, 0.2, 0.3, 0.4, 0.5},
		Data: []float64{0, 0, 0.07, 0.02, 0.2, 0.1, 0.2, 0.1, 0.1, 0.03, 0, 0},
	}
}

// Three synthetic takes from one recorded one, by the recipe.
func ExampleMaker() {
	take := swing()
	training := augment.Training{Scales: new(channels.Scales), Takes: []*channels.Take{take}}
	training.Scales.Add(take)
	maker, err := augment.NewMaker(augment.Default(), training, 1)
	if err != nil {
		fmt.Println(err)
		return
	}
	source, err := maker.Source(take)
	if err != nil {
		fmt.Println(err)
		return
	}
	for k := range 3 {
		made := source.Draw(k)
		fmt.Printf("%s, %s, from %s:", made.ID, made.Origin(), made.Made.Source)
		for i := range made.Frames() {
			fmt.Printf(" %5.2f", made.Frame(i)[0])
		}
		fmt.Println(" m")
	}
	// Output:
	// swing 1~0, synthetic, from swing 1:  0.03  0.05  0.18  0.18  0.09  0.00 m
	// swing 1~1, synthetic, from swing 1: -0.06  0.04  0.33  0.24  0.06 -0.01 m
	// swing 1~2, synthetic, from swing 1:  0.00  0.08  0.16  0.19  0.11  0.03 m
}

// A stream of recordings grows by two synthetic takes each, made on two
// workers; the order is the same with any number.
func ExampleGrow() {
	take := swing()
	training := augment.Training{Scales: new(channels.Scales), Takes: []*channels.Take{take}}
	training.Scales.Add(take)
	maker, err := augment.NewMaker(augment.Default(), training, 1)
	if err != nil {
		fmt.Println(err)
		return
	}
	recorded := func(yield func(*channels.Take, error) bool) { yield(take, nil) }
	for t, err := range augment.Grow(context.Background(), recorded, maker, augment.GrowOptions{PerTake: 2, Workers: 2}) {
		if err != nil {
			fmt.Println(err)
			return
		}
		fmt.Printf("%s: %s, %d frames, %.1f s\n", t.ID, t.Origin(), t.Frames(), t.Duration())
	}
	// Output:
	// swing 1: recorded, 6 frames, 0.5 s
	// swing 1~1: synthetic, 6 frames, 0.5 s
	// swing 1~0: synthetic, 6 frames, 0.5 s
}
