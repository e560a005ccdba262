package pages_test

import (
	"bytes"
	"fmt"
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/export/pages"
)

// drawTable draws a table of every kind of column with rows of every shape.
func drawTable(t *rapid.T) *table {
	tb := &table{}
	rows := rapid.IntRange(1, 60).Draw(t, "rows")
	for c := range rapid.IntRange(1, 7).Draw(t, "columns") {
		kind := pages.Kind(rapid.IntRange(0, int(pages.Int16List)).Draw(t, "kind"))
		column := pages.Column{Name: fmt.Sprintf("column.%d", c), Kind: kind}
		column.Optional = kind < pages.Float32List && rapid.Bool().Draw(t, "optional")
		values := make([]any, rows)
		for i := range values {
			if !column.Optional || rapid.IntRange(0, 3).Draw(t, "null") > 0 {
				values[i] = drawValue(t, kind)
			}
		}
		tb.columns, tb.values = append(tb.columns, column), append(tb.values, values)
	}
	return tb
}

func drawValue(t *rapid.T, kind pages.Kind) any {
	switch kind {
	case pages.Text:
		// Few distinct ones, so that the dictionary is used, and any others.
		return rapid.OneOf(rapid.SampledFrom([]string{"", "curtain", "spotlight"}), rapid.String()).Draw(t, "text")
	case pages.Int32:
		return rapid.Int32().Draw(t, "int32")
	case pages.Float64:
		return rapid.Float64().Draw(t, "float64")
	case pages.Float32:
		return rapid.Float32().Draw(t, "float32")
	case pages.Int16List:
		return append([]int16{}, rapid.SliceOfN(rapid.Int16(), 0, 9).Draw(t, "list")...)
	}
	return append([]float32{}, rapid.SliceOfN(rapid.Float32(), 0, 9).Draw(t, "list")...)
}

func TestReadersAgree(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		tb := drawTable(rt)
		tb.by = rapid.SampledFrom(pages.Compressions()).Draw(rt, "compression")
		ends := map[int]bool{}
		for range rapid.IntRange(0, 3).Draw(rt, "groups") {
			ends[rapid.IntRange(0, tb.rows()-1).Draw(rt, "end")] = true
		}
		data := tb.encode(t, ends)
		if diff := cmp.Diff(tb.values, readWithParquetGo(t, data, tb.columns)); diff != "" {
			rt.Errorf("parquet-go reads (-written +read):\n%s", diff)
		}
		if diff := cmp.Diff(tb.values, readWithArrow(t, data, len(tb.columns))); diff != "" {
			rt.Errorf("arrow/go reads (-written +read):\n%s", diff)
		}
		if again := tb.encode(t, ends); !bytes.Equal(data, again) {
			rt.Error("the same rows give other bytes the second time")
		}
	})
}

// TestSizesAroundPages writes enough for several pages, and lists around the
// sizes at which encodings change.
func TestSizesAroundPages(t *testing.T) {
	for _, n := range []int{0, 1, 2, 3, 63, 64, 65, 127, 128, 129, 1 << 14, pages.PageBytes / 4, pages.PageBytes} {
		t.Run(fmt.Sprint(n), func(t *testing.T) {
			list := make([]float32, n)
			for i := range list {
				list[i] = float32(math.Sin(float64(i)))
			}
			tb := &table{
				columns: []pages.Column{{Name: "id", Kind: pages.Text}, {Name: "x", Kind: pages.Float32List}},
				values:  [][]any{{"a", "b", "c"}, {list, []float32{}, list}},
			}
			data := tb.encode(t, nil)
			if got := readWithArrow(t, data, 2); !same(tb.values, got) {
				t.Error("arrow/go reads other values")
			}
			if got := readWithParquetGo(t, data, tb.columns); !same(tb.values, got) {
				t.Error("parquet-go reads other values")
			}
		})
	}
}

// TestManyDictionaryEntries passes the sizes at which an index takes another
// byte.
func TestManyDictionaryEntries(t *testing.T) {
	for _, n := range []int{1, 2, 3, 255, 256, 257, 65535, 65536, 65537} {
		tb := &table{columns: []pages.Column{{Name: "id", Kind: pages.Text}}, values: make([][]any, 1)}
		for i := range n {
			tb.values[0] = append(tb.values[0], fmt.Sprintf("take %d", i))
		}
		data := tb.encode(t, nil)
		if !same(tb.values, readWithArrow(t, data, 1)) || !same(tb.values, readWithParquetGo(t, data, tb.columns)) {
			t.Errorf("%d texts: the readers read others", n)
		}
	}
}

// TestBlocks fills flat columns many rows at a time, across pages.
func TestBlocks(t *testing.T) {
	const block, blocks = 40_000, 8
	columns := []pages.Column{{Name: "take", Kind: pages.Text}, {Name: "x", Kind: pages.Float32}}
	want := make([][]any, 2)
	var out bytes.Buffer
	w, err := pages.NewWriter(&out, columns)
	if err != nil {
		t.Fatal(err)
	}
	for b := range blocks {
		take := strings.Repeat("t", b+1)
		w.AppendText(0, take, block)
		dst := w.Fixed(1, block)
		for i := range block {
			v := float32(b*block + i)
			putFloats(dst[4*i:], v)
			want[0], want[1] = append(want[0], take), append(want[1], v)
		}
		if err := w.EndRows(block); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(nil, ""); err != nil {
		t.Fatal(err)
	}
	if !same(want, readWithArrow(t, out.Bytes(), 2)) {
		t.Error("arrow/go reads other values")
	}
	if !same(want, readWithParquetGo(t, out.Bytes(), columns)) {
		t.Error("parquet-go reads other values")
	}
}
