package look

import (
	"errors"
	"fmt"
	"io"

	"github.com/parquet-go/parquet-go"
)

// columns reads columns of one row group. After the first failure, err, it reads
// nothing more.
type columns struct {
	group parquet.RowGroup
	rows  int
	err   error
}

// texts reads a text column. A null is nil.
func (c *columns) texts(name string) [][]byte {
	out := make([][]byte, 0, c.rows)
	c.each(name, parquet.ByteArray, func(v parquet.Value) {
		if v.IsNull() {
			out = append(out, nil)
			return
		}
		out = append(out, append([]byte{}, v.ByteArray()...))
	})
	return out
}

// int32s reads a column of whole numbers. A null is -1.
func (c *columns) int32s(name string) []int32 {
	out := make([]int32, 0, c.rows)
	c.each(name, parquet.Int32, func(v parquet.Value) {
		if v.IsNull() {
			out = append(out, -1)
			return
		}
		out = append(out, v.Int32())
	})
	return out
}

// float64s reads a column of numbers without nulls.
func (c *columns) float64s(name string) []float64 {
	out := make([]float64, 0, c.rows)
	c.each(name, parquet.Double, func(v parquet.Value) { out = append(out, v.Double()) })
	return out
}

// each calls do with every value of a flat column. The value is valid until do
// returns.
func (c *columns) each(name string, kind parquet.Kind, do func(parquet.Value)) {
	if c.err != nil {
		return
	}
	leaf, ok := c.group.Schema().Lookup(name)
	if !ok || !leaf.Node.Leaf() || leaf.Node.Repeated() || leaf.Node.Type().Kind() != kind {
		c.err = fmt.Errorf("no column %s of type %s", name, kind)
		return
	}
	n := 0
	pages := c.group.ColumnChunks()[leaf.ColumnIndex].Pages()
	err := errors.Join(eachPage(pages, func(p parquet.Page) error {
		values := make([]parquet.Value, p.NumValues())
		got, err := p.Values().ReadValues(values)
		if err != nil && !errors.Is(err, io.EOF) {
			return err
		}
		for _, v := range values[:got] {
			do(v)
		}
		n += got
		return nil
	}), pages.Close())
	if err == nil && n != c.rows {
		err = fmt.Errorf("%d values for %d rows", n, c.rows)
	}
	if err != nil {
		c.err = fmt.Errorf("column %s: %w", name, err)
	}
}

// eachPage calls do with every page until it fails, and gives the page back.
func eachPage(pages parquet.Pages, do func(parquet.Page) error) error {
	for {
		p, err := pages.ReadPage()
		if errors.Is(err, io.EOF) {
			return nil
		}
		if err != nil {
			return err
		}
		err = do(p)
		parquet.Release(p)
		if err != nil {
			return err
		}
	}
}

// floats reads n values of a column of lists from a value on, whichever row it
// belongs to.
func floats(group parquet.RowGroup, name string, from, n int) ([]float32, error) {
	leaf, ok := group.Schema().Lookup(name, "list", "element")
	if !ok || leaf.Node.Type().Kind() != parquet.Float {
		return nil, fmt.Errorf("no column %s of lists of floats", name)
	}
	out := make([]float32, 0, n)
	pages := group.ColumnChunks()[leaf.ColumnIndex].Pages()
	err := eachPage(pages, func(p parquet.Page) error {
		data := p.Data()
		values := data.Float()
		skip := min(from, len(values))
		from -= skip
		values = values[skip:]
		out = append(out, values[:min(len(values), n-len(out))]...)
		if len(out) == n {
			return errEnough
		}
		return nil
	})
	if errors.Is(err, errEnough) {
		err = nil
	} else if err == nil {
		err = fmt.Errorf("ends after %d of %d values", len(out), n)
	}
	if err = errors.Join(err, pages.Close()); err != nil {
		return nil, fmt.Errorf("column %s: %w", name, err)
	}
	return out, nil
}

// errEnough ends the reading of pages.
var errEnough = errors.New("enough")
