package c3d_test

import (
	"fmt"
	"log"
	"os"

	"strandwise/ingest/c3d"
)

func ExampleRead() {
	r, err := os.Open("testdata/cue.c3d")
	if err != nil {
		log.Fatal(err)
	}
	defer r.Close()
	f, err := c3d.Read(r, c3d.Options{Name: "cue.c3d"})
	if err != nil {
		log.Fatal(err)
	}
	p := f.Points
	fmt.Printf("%d frames at %g Hz, order %v\n", f.Frames, p.Rate, f.Order)
	for i, label := range p.Labels {
		xyz := p.Data[3*i : 3*i+3]
		fmt.Printf("%s begins at %g %s, missing in %d frames\n", label, xyz, p.Unit, p.Missing[i])
	}
	for _, e := range f.Events {
		fmt.Printf("%s at %.2f s\n", e.Label, e.Time)
	}
	// Output:
	// 3 frames at 100 Hz, order DEC
	// LWRI begins at [5 10 15] mm, missing in 0 frames
	// RWRI begins at [20 25 30] mm, missing in 1 frames
	// GO at 0.01 s
	// Grip at 0.02 s
}
