package export_test

import (
	"context"
	"fmt"
	"path/filepath"
	"slices"
	"testing"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/apache/arrow/go/v15/arrow/array"
	"github.com/apache/arrow/go/v15/arrow/memory"
	"github.com/apache/arrow/go/v15/parquet/file"
	"github.com/apache/arrow/go/v15/parquet/pqarrow"

	"strandwise/export"
)

// rows is a table read back by arrow/go, whose Parquet reader shares nothing
// with what wrote it.
type rows struct {
	fields []string // "name: type"
	values []map[string]any
	layout []string // the file metadata under export.LayoutKey, one per file
}

// readTable reads all parts of one table and split, in the order of the names.
// arrow/go's reader of records may return no rows and no error where it cannot
// read an encoding, so the rows are counted against the footer.
func readTable(t testing.TB, dir string, table export.Table, split string) rows {
	t.Helper()
	parts, err := filepath.Glob(filepath.Join(dir, string(table), "split="+split, "part-*.parquet"))
	if err != nil {
		t.Fatal(err)
	}
	slices.Sort(parts)
	var out rows
	for _, path := range parts {
		readPart(t, path, &out)
	}
	return out
}

func readPart(t testing.TB, path string, out *rows) {
	t.Helper()
	f, err := file.OpenParquetFile(path, false)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	r, err := pqarrow.NewFileReader(f, pqarrow.ArrowReadProperties{}, memory.DefaultAllocator)
	if err != nil {
		t.Fatal(err)
	}
	table, err := r.ReadTable(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	defer table.Release()
	if table.NumRows() != f.NumRows() {
		t.Fatalf("%s: %d rows read, the footer says %d", path, table.NumRows(), f.NumRows())
	}
	if text := f.MetaData().KeyValueMetadata().FindValue(export.LayoutKey); text != nil {
		out.layout = append(out.layout, *text)
	}
	out.fields = nil
	from := len(out.values)
	for range table.NumRows() {
		out.values = append(out.values, map[string]any{})
	}
	for c := range int(table.NumCols()) {
		field := table.Schema().Field(c)
		kind := field.Type.String()
		switch list := field.Type.(type) { // arrow/go gives elements names of its own
		case *arrow.ListType:
			kind = fmt.Sprintf("list<%s>", list.Elem())
		case *arrow.FixedSizeListType:
			kind = fmt.Sprintf("list<%s>[%d]", list.Elem(), list.Len())
		}
		out.fields = append(out.fields, field.Name+": "+kind)
		row := from
		for _, chunk := range table.Column(c).Data().Chunks() {
			for i := range chunk.Len() {
				out.values[row][field.Name] = value(chunk, i)
				row++
			}
		}
	}
}

// value returns one value of a column in its plain form, nil for a null.
func value(column arrow.Array, i int) any {
	if column.IsNull(i) {
		return nil
	}
	switch a := column.(type) {
	case *array.String:
		return a.Value(i)
	case *array.Int32:
		return a.Value(i)
	case *array.Float64:
		return a.Value(i)
	case *array.Float32:
		return a.Value(i)
	case array.ListLike:
		from, to := a.ValueOffsets(i)
		switch values := a.ListValues().(type) {
		case *array.Float32:
			return slices.Clone(values.Float32Values()[from:to])
		case *array.Int16:
			return slices.Clone(values.Int16Values()[from:to])
		}
	}
	panic(fmt.Sprintf("arrow made a %T", column))
}

// firstPart returns the path of a table's first file.
func firstPart(t testing.TB, dir string, table export.Table, split string) string {
	t.Helper()
	parts, err := filepath.Glob(filepath.Join(dir, string(table), "split="+split, "*.parquet"))
	if err != nil || len(parts) == 0 {
		t.Fatalf("no files of table %s: %v", table, err)
	}
	return slices.Min(parts)
}
