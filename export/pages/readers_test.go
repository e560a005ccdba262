package pages_test

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"testing"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/apache/arrow/go/v15/arrow/array"
	"github.com/apache/arrow/go/v15/arrow/memory"
	arrowfile "github.com/apache/arrow/go/v15/parquet/file"
	"github.com/apache/arrow/go/v15/parquet/pqarrow"
	"github.com/parquet-go/parquet-go"

	"strandwise/export/pages"
)

// readWithParquetGo reads a file back with the library whose structures wrote
// it, level by level.
func readWithParquetGo(t testing.TB, data []byte, columns []pages.Column) [][]any {
	t.Helper()
	f, err := parquet.OpenFile(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		t.Fatalf("open: %v", err)
	}
	out := make([][]any, len(columns))
	for _, g := range f.RowGroups() {
		rows := g.Rows()
		buffer := make([]parquet.Row, 7)
		for {
			n, err := rows.ReadRows(buffer)
			for _, row := range buffer[:n] {
				row.Range(func(c int, values []parquet.Value) bool {
					out[c] = append(out[c], goValue(columns[c].Kind, values))
					return true
				})
			}
			if errors.Is(err, io.EOF) {
				break
			}
			if err != nil {
				t.Fatalf("read rows: %v", err)
			}
		}
		if err := rows.Close(); err != nil {
			t.Fatal(err)
		}
	}
	return out
}

// goValue turns the values of one column in one row into their plain form.
func goValue(kind pages.Kind, values []parquet.Value) any {
	if kind == pages.Float32List {
		list := []float32{}
		for _, v := range values {
			if v.DefinitionLevel() == 1 {
				list = append(list, v.Float())
			}
		}
		return list
	}
	if kind == pages.Int16List {
		list := []int16{}
		for _, v := range values {
			if v.DefinitionLevel() == 1 {
				list = append(list, int16(v.Int32()))
			}
		}
		return list
	}
	v := values[0]
	if v.IsNull() {
		return nil
	}
	switch kind {
	case pages.Text:
		return string(v.ByteArray())
	case pages.Int32:
		return v.Int32()
	case pages.Float64:
		return v.Double()
	}
	return v.Float()
}

// readWithArrow reads a file back with the independent reader of arrow/go. Its
// reader of records may return no rows and only io.EOF where it cannot read an
// encoding, so the caller must compare the number of rows.
func readWithArrow(t testing.TB, data []byte, columns int) [][]any {
	t.Helper()
	f, err := arrowfile.NewParquetReader(bytes.NewReader(data))
	if err != nil {
		t.Fatalf("arrow: open: %v", err)
	}
	defer f.Close()
	r, err := pqarrow.NewFileReader(f, pqarrow.ArrowReadProperties{}, memory.DefaultAllocator)
	if err != nil {
		t.Fatalf("arrow: read schema: %v", err)
	}
	read, err := r.ReadTable(context.Background())
	if err != nil {
		t.Fatalf("arrow: read: %v", err)
	}
	defer read.Release()
	out := make([][]any, columns)
	for c := range out {
		for _, chunk := range read.Column(c).Data().Chunks() {
			out[c] = append(out[c], arrowValues(chunk)...)
		}
	}
	return out
}

// arrowValues turns a chunk into plain values.
func arrowValues(chunk arrow.Array) []any {
	out := make([]any, chunk.Len())
	for i := range out {
		if chunk.IsNull(i) {
			continue
		}
		switch a := chunk.(type) {
		case *array.String:
			out[i] = a.Value(i)
		case *array.Int32:
			out[i] = a.Value(i)
		case *array.Float64:
			out[i] = a.Value(i)
		case *array.Float32:
			out[i] = a.Value(i)
		case *array.List:
			from, to := a.ValueOffsets(i)
			switch list := a.ListValues().(type) {
			case *array.Float32:
				out[i] = append([]float32{}, list.Float32Values()[from:to]...)
			case *array.Int16:
				out[i] = append([]int16{}, list.Int16Values()[from:to]...)
			}
		default:
			panic(fmt.Sprintf("arrow made a %T", a))
		}
	}
	return out
}
