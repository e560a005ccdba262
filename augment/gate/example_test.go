package gate_test

import (
	"fmt"

	"strandwise/augment/gate"
	"strandwise/channels"
)

// A puppet bows, and a synthetic take of the bow goes far beyond where its hand
// was ever recorded.
func ExampleSource_Check() {
	l := &channels.Layout{
		Channels: []channels.Channel{{Name: "hand.pos.z", Quantity: channels.Position, Unit: "m"}},
		Groups:   []channels.Group{{Name: "hand.pos", Limb: "hand", Channels: []int{0}}},
	}
	bow := func(id string, depth float64) *channels.Take {
		t := &channels.Take{ID: id, Label: "bow", Layout: l}
		for i := range 40 {
			u := float64(i) / 39
			t.Time = append(t.Time, u)
			t.Data = append(t.Data, 1-depth*u*u*(3-2*u))
		}
		return t
	}
	recorded := []*channels.Take{bow("bow1", 0.5), bow("bow2", 0.6)}
	scales := new(channels.Scales)
	for _, t := range recorded {
		scales.Add(t)
	}
	gates, err := gate.Fit(recorded, scales, gate.Default())
	if err != nil {
		fmt.Println(err)
		return
	}
	source := gates.Source(recorded[0])
	for _, depth := range []float64{0.55, 1.8} {
		r := source.Check(bow("made", depth))
		fmt.Printf("%.2f m deep: passes %v, %.1f of the recorded range outside it\n", depth, r.OK(), r.Value(gate.Range))
	}
	// Output:
	// 0.55 m deep: passes true, 0.0 of the recorded range outside it
	// 1.80 m deep: passes false, 2.0 of the recorded range outside it
}
