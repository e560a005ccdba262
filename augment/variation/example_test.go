package variation_test

import (
	"context"
	"fmt"
	"math"

	"strandwise/augment/variation"
	"strandwise/channels"
)

// Four takes of one gesture that differ in nothing but their size.
func ExampleMeasure() {
	layout := &channels.Layout{
		Channels: []channels.Channel{{Name: "wrist.accel.x", Quantity: channels.Acceleration, Unit: "m/s^2"}},
		Groups:   []channels.Group{{Name: "wrist.accel", Limb: "wrist", Channels: []int{0}}},
	}
	var takes []*channels.Take
	scales := &channels.Scales{}
	for k, size := range []float64{0.8, 0.9, 1.1, 1.25} {
		t := &channels.Take{ID: fmt.Sprint(k), Label: "wave", Layout: layout}
		for i := range 80 {
			t.Time = append(t.Time, float64(i)/50)
			t.Data = append(t.Data, size*math.Sin(float64(i)/8))
		}
		takes = append(takes, t)
		scales.Add(t)
	}
	m, err := variation.Measure(context.Background(), takes, scales, variation.Default())
	if err != nil {
		fmt.Println(err)
		return
	}
	f, _ := m.Find(variation.Amplitude, "", "")
	fmt.Printf("%s %.2f, 95 %% from %.2f to %.2f, %d pairs of %d takes; %.2f is used\n", f.Part, f.Measured, f.Low, f.High, f.Pairs, f.Takes, f.Used)
	// Output:
	// amplitude 0.18, 95 % from 0.04 to 0.67, 12 pairs of 4 takes; 0.14 is used
}
