package export_test

import (
	"fmt"
	"log"
	"os"
	"path/filepath"

	"strandwise/channels"
	"strandwise/export"
)

// A set of one recorded take and one made from it, written, sealed, verified,
// then damaged.
func Example() {
	parent, err := os.MkdirTemp("", "example")
	if err != nil {
		log.Fatal(err)
	}
	defer os.RemoveAll(parent)
	dir := filepath.Join(parent, "set")

	layout := &channels.Layout{Channels: []channels.Channel{
		{Name: "left_wrist.accel.x", Quantity: channels.Acceleration, Unit: "m/s^2"},
	}}
	recorded := &channels.Take{ID: "ada-1", Label: "curtain", Subject: "ada", Layout: layout, Time: []float64{0, 0.02}, Data: []float64{9.8, 9.9}}
	made := &channels.Take{ID: "ada-1~0", Label: "curtain", Subject: "ada", Layout: layout, Time: []float64{0, 0.02}, Data: []float64{9.7, 9.9}}
	made.Made = &channels.Making{Source: "ada-1", Method: "combined", Parameters: map[string]float64{"amplitude": 1.1}}

	w, err := export.Create(dir, layout, export.Options{Version: "0.1.0", Seed: 1})
	if err != nil {
		log.Fatal(err)
	}
	defer w.Discard() // does nothing once the set is sealed
	for _, t := range []*channels.Take{recorded, made} {
		if err := w.Add(t); err != nil {
			log.Fatal(err)
		}
	}
	m, err := w.Seal()
	if err != nil {
		log.Fatal(err)
	}
	table := m.Files[len(m.Files)-1] // after CARD.md and croissant.json
	fmt.Println(table.Path, "holds", table.Rows, "takes")

	v, err := export.Verify(dir)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println("sound:", v.Sound())

	if err := os.WriteFile(filepath.Join(dir, "notes.txt"), nil, 0o666); err != nil {
		log.Fatal(err)
	}
	if v, err = export.Verify(dir); err != nil {
		log.Fatal(err)
	}
	fmt.Println(v.Problems[0])
	// Output:
	// takes/split=train/part-00000.parquet holds 2 takes
	// sound: true
	// notes.txt: nobody sealed this file
}
