package bids_test

import (
	"fmt"
	"log"
	"math"
	"os"
	"path/filepath"

	"strandwise/ingest/bids"
	"strandwise/ingest/raw"
)

func ExampleFormat() {
	const name = "testdata/theatre/sub-crocodile/motion/sub-crocodile_task-chase_tracksys-strings_motion.tsv"
	r, err := os.Open(name)
	if err != nil {
		log.Fatal(err)
	}
	defer r.Close()
	in := raw.Input{
		Name: filepath.Base(name), Path: name,
		Beside: func(other string) ([]byte, error) { return os.ReadFile(filepath.Join(filepath.Dir(name), other)) },
		Notice: func(text, evidence string) { fmt.Printf("note: %s (%s)\n", text, evidence) },
	}
	for take, err := range (bids.Format{}).Read(r, in) {
		if err != nil {
			log.Fatal(err)
		}
		first, missing := take.Layout.Columns[0], 0
		for _, v := range take.Data {
			if math.IsNaN(v) {
				missing++
			}
		}
		fmt.Printf("%s by %s: %d frames in %.3f s\n", take.Take, take.Subject, len(take.Time), take.Time[len(take.Time)-1])
		fmt.Printf("%s begins at %g %s; %d values are missing\n", first.Channel.Name, take.Data[0], first.Unit, missing)
		for _, a := range take.Annotations {
			fmt.Printf("%s from %.2f s\n", a.Label, a.Start)
		}
	}
	// Output:
	// note: has several channels of one tracked point, type and component; a number tells them apart (jaw_x_raw is jaw_2.pos.x)
	// note: has channels in vm, a unit that is not known; their numbers stay as recorded, unless --unit states theirs (jaw_x_raw)
	// note: has events without a trial_type, which are left out (the first is at sub-crocodile_task-chase_events.tsv:5)
	// sub-crocodile_task-chase_tracksys-strings by crocodile: 20 frames in 0.192 s
	// jaw.pos.x begins at 0.5 mm; 3 values are missing
	// crawl from 0.02 s
	// snap from 0.10 s
	// bell from 0.15 s
}
