package export

import (
	"errors"
	"fmt"
	"io"

	"github.com/parquet-go/parquet-go"
)

// readColumn returns the values of a flat column in one row group, one per row.
func readColumn(g parquet.RowGroup, name string, kind parquet.Kind) ([]parquet.Value, error) {
	leaf, ok := g.Schema().Lookup(name)
	if !ok || leaf.Node.Type().Kind() != kind {
		return nil, fmt.Errorf("no column %s of type %s", name, kind)
	}
	pages := g.ColumnChunks()[leaf.ColumnIndex].Pages()
	defer pages.Close()
	var out []parquet.Value
	for {
		page, err := pages.ReadPage()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			return nil, fmt.Errorf("column %s: %w", name, err)
		}
		if out, err = appendPage(out, page); err != nil {
			return nil, fmt.Errorf("column %s: %w", name, err)
		}
	}
	if int64(len(out)) != g.NumRows() {
		return nil, fmt.Errorf("column %s: %d values for %d rows", name, len(out), g.NumRows())
	}
	return out, nil
}

// appendPage appends copies of a page's values to dst and gives the page back.
func appendPage(dst []parquet.Value, page parquet.Page) ([]parquet.Value, error) {
	defer parquet.Release(page)
	values := make([]parquet.Value, page.NumValues())
	n, err := page.Values().ReadValues(values)
	if err != nil && !errors.Is(err, io.EOF) {
		return dst, err
	}
	for _, v := range values[:n] {
		dst = append(dst, v.Clone())
	}
	return dst, nil
}
