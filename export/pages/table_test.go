package pages_test

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"io"
	"math"
	"slices"
	"testing"

	"strandwise/export/pages"
)

// table is the plain form of a file that the tests write and compare with:
// one slice of values per column, each a string, an int32, a float64, a
// float32, a []float32, an []int16 or nil.
type table struct {
	columns []pages.Column
	values  [][]any
	by      pages.Compression
}

func (tb *table) rows() int { return len(tb.values[0]) }

// encode writes the table with row groups ending after the given rows.
func (tb *table) encode(t testing.TB, ends map[int]bool) []byte {
	t.Helper()
	var out bytes.Buffer
	w, err := pages.NewCompressedWriter(&out, tb.columns, tb.by)
	if err != nil {
		t.Fatal(err)
	}
	for row := range tb.rows() {
		for c := range tb.columns {
			put(w, c, tb.columns[c].Kind, tb.values[c][row])
		}
		if err := w.EndRows(1); err != nil {
			t.Fatal(err)
		}
		if ends[row] {
			if _, err := w.Flush(); err != nil {
				t.Fatal(err)
			}
		}
	}
	if err := w.Close([]pages.KeyValue{{Key: "a key", Value: "a value"}}, "pages test"); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

// put appends one value to column c.
func put(w *pages.Writer, c int, kind pages.Kind, value any) {
	switch v := value.(type) {
	case nil:
		w.AppendNull(c, 1)
	case string:
		w.AppendText(c, v, 1)
	case int32:
		w.AppendInt32(c, v)
	case float64:
		w.AppendFloat64(c, v)
	case float32:
		putFloats(w.Fixed(c, 1), v)
	case []float32:
		putFloats(w.List(c, len(v)), v...)
	case []int16:
		for dst := w.List(c, len(v)); len(v) > 0; dst, v = dst[4:], v[1:] {
			binary.LittleEndian.PutUint32(dst, uint32(int32(v[0])))
		}
	default:
		panic(fmt.Sprintf("no column of kind %d holds %T", kind, value))
	}
}

func putFloats(dst []byte, values ...float32) {
	for i, v := range values {
		binary.LittleEndian.PutUint32(dst[4*i:], math.Float32bits(v))
	}
}

// same reports whether two tables hold equal values; it is quicker than cmp.
func same(a, b [][]any) bool {
	return slices.EqualFunc(a, b, func(x, y []any) bool {
		return slices.EqualFunc(x, y, func(v, w any) bool {
			list, ok := v.([]float32)
			other, also := w.([]float32)
			return ok == also && (ok && slices.Equal(list, other) || !ok && v == w)
		})
	})
}

// failing is a writer that takes so many bytes and then fails.
type failing struct{ room int }

func (f *failing) Write(p []byte) (int, error) {
	if len(p) > f.room {
		return 0, io.ErrShortWrite
	}
	f.room -= len(p)
	return len(p), nil
}
