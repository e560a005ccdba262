package puppets_test

import (
	"fmt"
	"os"
	"path/filepath"

	"strandwise/ingest/puppets"
)

func ExampleTakes() {
	for take, err := range puppets.Takes(1) {
		if err != nil {
			fmt.Println(err)
			return
		}
		fmt.Printf("%s: %d frames of %d channels, %.1f s at %.0f Hz\n",
			take.ID, take.Frames(), take.Width(), take.Duration(), take.Rate())
		break
	}
	// Output: bobbin/drop-curtain_evening_4: 111 frames of 12 channels, 2.2 s at 50 Hz
}

func ExampleWriteCSV() {
	dir, err := os.MkdirTemp("", "lantern-street")
	if err != nil {
		fmt.Println(err)
		return
	}
	defer os.RemoveAll(dir)
	paths, err := puppets.WriteCSV(dir, 1)
	if err != nil {
		fmt.Println(err)
		return
	}
	first, _ := filepath.Rel(dir, paths[0])
	fmt.Println(len(paths), "recordings, the first is", filepath.ToSlash(first))
	// Output: 120 recordings, the first is bobbin/drop-curtain_evening_4.csv
}
