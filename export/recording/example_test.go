package recording_test

import (
	"log"
	"os"

	"strandwise/channels"
	"strandwise/export/recording"
)

// Two takes of an invented wristband in the long form.
func Example() {
	x, _ := channels.ParseHeader("left wrist accel x [g]")
	layout := &channels.Layout{Channels: []channels.Channel{x}} // held in m/s^2
	takes := []*channels.Take{
		{ID: "1", Label: "bow", Subject: "ember", Layout: layout, Time: []float64{0, 0.02}, Data: []float64{9.80665, 9.5}},
		{ID: "2", Label: "bow", Subject: "pim", Layout: layout, Time: []float64{0, 0.02}, Data: []float64{9.75, 10}},
	}
	var contents recording.Contents
	for _, t := range takes {
		if err := contents.Note(t); err != nil {
			log.Fatal(err)
		}
	}
	w, err := recording.NewCSV(os.Stdout, &contents)
	if err != nil {
		log.Fatal(err)
	}
	for _, t := range takes {
		if err := w.Add(t); err != nil {
			log.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		log.Fatal(err)
	}
	// Output:
	// take,label,subject,session,frame,time_s,left wrist.accel.x
	// 1,bow,ember,,0,0,9.80665
	// 1,bow,ember,,1,0.02,9.5
	// 2,bow,pim,,0,0,9.75
	// 2,bow,pim,,1,0.02,10
}
