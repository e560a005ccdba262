package pages_test

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"log"
	"math"

	"github.com/parquet-go/parquet-go"

	"strandwise/export/pages"
)

// Two rows of a text and a list, in one row group.
func ExampleWriter() {
	var file bytes.Buffer
	w, err := pages.NewWriter(&file, []pages.Column{{Name: "id", Kind: pages.Text}, {Name: "x", Kind: pages.Float32List}})
	if err != nil {
		log.Fatal(err)
	}
	for row, list := range [][]float32{{1, 2, 3}, {}} {
		w.AppendText(0, fmt.Sprintf("row %d", row), 1)
		dst := w.List(1, len(list))
		for i, v := range list {
			binary.LittleEndian.PutUint32(dst[4*i:], math.Float32bits(v))
		}
		if err := w.EndRows(1); err != nil {
			log.Fatal(err)
		}
	}
	if err := w.Close([]pages.KeyValue{{Key: "made", Value: "for an example"}}, "example"); err != nil {
		log.Fatal(err)
	}

	type row struct {
		ID string    `parquet:"id"`
		X  []float32 `parquet:"x,list"`
	}
	rows, err := parquet.Read[row](bytes.NewReader(file.Bytes()), int64(file.Len()))
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(rows)
	// Output: [{row 0 [1 2 3]} {row 1 []}]
}
