package columnar_test

import (
	"bytes"
	"fmt"
	"log"

	"github.com/parquet-go/parquet-go"

	"strandwise/ingest/columnar"
	"strandwise/ingest/raw"
)

// A Parquet file of one row per take, read take by take.
func ExampleFormat_Read() {
	type row struct {
		Label string    `parquet:"label"`
		Time  []float32 `parquet:"time_ms,list"`
		X     []float32 `parquet:"left_wrist.accel.x [g],list"`
	}
	var file bytes.Buffer
	err := parquet.Write(&file, []row{
		{"curtain", []float32{0, 20, 40}, []float32{0.1, 0.4, 0.2}},
		{"thunder", []float32{0, 20}, []float32{0.9, 1.3}},
	})
	if err != nil {
		log.Fatal(err)
	}
	in := raw.Input{Name: "cues.parquet", Notice: func(text, _ string) { fmt.Println("notice:", text) }}
	for take, err := range (columnar.Format{}).Read(bytes.NewReader(file.Bytes()), in) {
		if err != nil {
			log.Fatal(err)
		}
		column := take.Layout.Columns[0]
		fmt.Printf("take %s, label %s, at %v s: %s in %s is %.1f\n", take.Take, take.Label, take.Time, column.Channel.Name, column.Unit, take.Data)
	}
	// Output:
	// notice: has no take column, so the takes are named by their rows
	// take 1, label curtain, at [0 0.02 0.04] s: left_wrist.accel.x in g is [0.1 0.4 0.2]
	// take 2, label thunder, at [0 0.02] s: left_wrist.accel.x in g is [0.9 1.3]
}
