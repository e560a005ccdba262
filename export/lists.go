package export

import (
	"errors"
	"fmt"
	"io"

	"github.com/parquet-go/parquet-go"
)

// readLists appends to dst the floats of a list column in one row group, row
// after row, and returns it. Lists are cut by the numbers of frames.
func readLists(dst []float32, g parquet.RowGroup, name string) ([]float32, error) {
	leaf, ok := g.Schema().Lookup(name, "list", "element")
	if !ok || leaf.Node.Type().Kind() != parquet.Float {
		return dst, fmt.Errorf("no column %s of lists of floats", name)
	}
	pages := g.ColumnChunks()[leaf.ColumnIndex].Pages()
	defer pages.Close()
	for {
		page, err := pages.ReadPage()
		if errors.Is(err, io.EOF) {
			return dst, nil
		}
		if err != nil {
			return dst, fmt.Errorf("column %s: %w", name, err)
		}
		values := page.Data()
		dst = append(dst, values.Float()...)
		parquet.Release(page)
	}
}

// pathPoints is the number of points at which takes are compared, spread evenly
// over their frames.
const pathPoints = 32

// takePath is one row of the table takes with its channels read at pathPoints.
type takePath struct {
	id     string
	origin string
	values []float32 // points × channels, channel by channel
}

// eachPath reads the takes of one row group. The path is valid until the next
// call of do.
func eachPath(g parquet.RowGroup, columns []string, do func(takePath)) error {
	var texts [2][]parquet.Value
	for i, name := range []string{"id", "origin"} {
		var err error
		if texts[i], err = readColumn(g, name, parquet.ByteArray); err != nil {
			return err
		}
	}
	frames, err := readColumn(g, "frames", parquet.Int32)
	if err != nil {
		return err
	}
	lists := make([][]float32, len(columns))
	for c, name := range columns {
		if lists[c], err = readLists(nil, g, name); err != nil {
			return err
		}
	}
	values := make([]float32, pathPoints*len(columns))
	for i := range frames {
		n := int(frames[i].Int32())
		for c := range columns {
			if n < 1 || n > len(lists[c]) {
				return fmt.Errorf("column %s: fewer values than frames", columns[c])
			}
			readAt(values[c*pathPoints:(c+1)*pathPoints], lists[c][:n])
			lists[c] = lists[c][n:]
		}
		do(takePath{texts[0][i].String(), texts[1][i].String(), values})
	}
	return nil
}

// readAt fills dst with the values of a channel at evenly spread points of its
// frames, the first and the last among them, by linear interpolation.
func readAt(dst, values []float32) {
	step := float64(len(values)-1) / float64(len(dst)-1)
	for i := range dst {
		at := float64(i) * step
		from := min(int(at), len(values)-1)
		to := min(from+1, len(values)-1)
		part := float32(at - float64(from))
		dst[i] = values[from] + part*(values[to]-values[from])
	}
}
