package jsonlines_test

import (
	"fmt"
	"log"
	"strings"

	"strandwise/ingest/jsonlines"
	"strandwise/ingest/raw"
)

// A log of two sensors, each with times of its own.
func ExampleFormat_Read() {
	const file = `{"label":"curtain","subject":"ada"}
{"sensor":"accelerometer","time_ms":0,"x":9.81}
{"sensor":"gyroscope","time_ms":5,"x":0.25}
{"sensor":"accelerometer","time_ms":20,"x":9.79}
`
	for take, err := range (jsonlines.Format{}).Read(strings.NewReader(file), raw.Input{Name: "cue.jsonl"}) {
		if err != nil {
			log.Fatal(err)
		}
		for _, c := range take.Layout.Columns {
			fmt.Println(c.Channel.Name, "is", c.Channel.Quantity)
		}
		for i, at := range take.Time {
			fmt.Println(at, "s:", take.Data[2*i:2*i+2])
		}
	}
	// Output:
	// accelerometer.x is ACCEL
	// gyroscope.x is GYRO
	// 0 s: [9.81 NaN]
	// 0.005 s: [NaN 0.25]
	// 0.02 s: [9.79 NaN]
}
