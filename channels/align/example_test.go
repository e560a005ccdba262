package align_test

import (
	"fmt"

	"strandwise/channels/align"
)

// A stroke, and the same stroke recorded one frame later.
func ExampleAlign() {
	a := []float64{0, 0, 1, 4, 9, 7, 3, 1, 0, 2}
	b := []float64{5, 0, 0, 1, 4, 9, 7, 3, 1, 0}
	o := align.Default()
	o.Open = 1.0 / 5
	al := align.Align(a, b, 1, o)
	for i, at := range al.At {
		fmt.Printf("frame %d of a is frame %.0f of b\n", i, at)
	}
	fmt.Println("begins within b by", al.Begin, "frame, goes on after it by", al.End)
	// Output:
	// frame 0 of a is frame 1 of b
	// frame 1 of a is frame 2 of b
	// frame 2 of a is frame 3 of b
	// frame 3 of a is frame 4 of b
	// frame 4 of a is frame 5 of b
	// frame 5 of a is frame 6 of b
	// frame 6 of a is frame 7 of b
	// frame 7 of a is frame 8 of b
	// frame 8 of a is frame 9 of b
	// frame 9 of a is frame 9 of b
	// begins within b by 1 frame, goes on after it by 1
}
