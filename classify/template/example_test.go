package template_test

import (
	"fmt"

	"strandwise/channels"
	"strandwise/classify/template"
)

// A take of a raised hand is held against a recorded wave, a recorded raise
// and a synthetic raise.
func ExampleSearch() {
	layout := &channels.Layout{Channels: []channels.Channel{{Name: "hand.pos.z", Quantity: channels.Position, Unit: "m"}}}
	record := func(id string, heights ...float64) *channels.Take {
		t := &channels.Take{ID: id, Layout: layout, Data: heights}
		for i := range heights {
			t.Time = append(t.Time, float64(i)/50)
		}
		return t
	}
	wave := record("wave", 1.0, 1.3, 1.0, 1.3, 1.0)
	raise := record("raise", 1.0, 1.0, 1.2, 1.5, 1.6)
	made := record("raise, made", 1.0, 1.2, 1.4, 1.6, 1.6)
	query := record("query", 1.0, 1.2, 1.3, 1.6)

	metric := template.Metric{Distance: template.DTWDependent, Band: 0.5}
	search, err := template.NewSearch(metric, []*channels.Take{wave, raise}, []*channels.Take{query})
	if err != nil {
		fmt.Println(err)
		return
	}
	err = search.Worker().Offer([]template.Template{
		{Take: wave, Order: 0},
		{Take: raise, Order: 1},
		{Take: made, Order: 2, Synthetic: true},
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	recorded, all := search.Nearest(0)
	fmt.Printf("nearest recorded: template %d at %.3f m²\n", recorded.Order, recorded.Distance)
	fmt.Printf("nearest of all: template %d at %.3f m²\n", all.Order, all.Distance)
	// Output:
	// nearest recorded: template 1 at 0.020 m²
	// nearest of all: template 2 at 0.010 m²
}
