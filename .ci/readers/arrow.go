package main

import (
	"context"
	"fmt"
	"path/filepath"
	"strings"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/apache/arrow/go/v15/arrow/array"
	"github.com/apache/arrow/go/v15/arrow/memory"
	"github.com/apache/arrow/go/v15/parquet/file"
	"github.com/apache/arrow/go/v15/parquet/pqarrow"
)

// readArrow finds the facts with the Parquet reader of arrow/go, version 15.
func readArrow(set string) (*facts, error) {
	out := &facts{Reader: "arrow/go v15", Tables: map[string]*table{}, Metadata: map[string]map[string]string{}}
	for _, name := range tables() {
		parts, err := filepath.Glob(filepath.Join(set, name, "*", "*.parquet"))
		if err != nil {
			return nil, err
		}
		if len(parts) == 0 {
			return nil, fmt.Errorf("no files of table %s", name)
		}
		t := newTable()
		out.Tables[name] = t
		for i, path := range parts {
			metadata, err := t.readFile(path)
			if err != nil {
				return nil, fmt.Errorf("%s: %w", path, err)
			}
			if i == 0 {
				out.Metadata[name] = metadata
			}
		}
	}
	// What Parquet cannot say: the lists of windows have one length.
	for name, typ := range out.Tables["windows"].Types {
		if strings.Contains(typ, "list") && !strings.HasPrefix(typ, "fixed_size_list") {
			return nil, fmt.Errorf("column %s of windows is read as %s, not as a list of fixed size", name, typ)
		}
	}
	return out, nil
}

func (t *table) readFile(path string) (map[string]string, error) {
	f, err := file.OpenParquetFile(path, false)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	metadata := map[string]string{}
	for _, key := range compared() {
		if text := f.MetaData().KeyValueMetadata().FindValue(key); text != nil {
			metadata[key] = *text
		}
	}
	r, err := pqarrow.NewFileReader(f, pqarrow.ArrowReadProperties{}, memory.DefaultAllocator)
	if err != nil {
		return nil, err
	}
	read, err := r.ReadTable(context.Background())
	if err != nil {
		return nil, err
	}
	defer read.Release()
	if read.NumRows() != f.NumRows() {
		return nil, fmt.Errorf("%d rows read, the footer says %d", read.NumRows(), f.NumRows())
	}
	split := strings.TrimPrefix(filepath.Base(filepath.Dir(path)), "split=")
	t.add(read, split)
	return metadata, nil
}

func (t *table) add(read arrow.Table, split string) {
	t.Rows += read.NumRows()
	keys := make([]string, read.NumRows())
	for i := range keys {
		keys[i] = split
	}
	for c := range int(read.NumCols()) {
		field := read.Schema().Field(c)
		t.Types[field.Name] = field.Type.String()
		row := 0
		for _, chunk := range read.Column(c).Data().Chunks() {
			switch a := chunk.(type) {
			case *array.String:
				if field.Name == "label" || field.Name == "origin" {
					for i := range a.Len() {
						keys[row+i] += "|" + a.Value(i)
					}
				}
			case array.ListLike:
				t.sum(field.Name, a.ListValues())
			default:
				t.sum(field.Name, a)
			}
			row += chunk.Len()
		}
	}
	for _, key := range keys {
		t.Counts[key]++
	}
}

// sum adds the values of a column that are no nulls.
func (t *table) sum(name string, values arrow.Array) {
	for i := range values.Len() {
		if values.IsNull(i) {
			continue
		}
		t.Numbers[name]++
		switch a := values.(type) {
		case *array.Float32:
			t.Sums[name] += float64(a.Value(i))
		case *array.Float64:
			t.Sums[name] += a.Value(i)
		case *array.Int32:
			t.Sums[name] += float64(a.Value(i))
		case *array.Int16:
			t.Sums[name] += float64(a.Value(i))
		}
	}
}
