package pages_test

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"hash/crc32"
	"io"
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/parquet-go/parquet-go"
	"github.com/parquet-go/parquet-go/encoding/thrift"
	"github.com/parquet-go/parquet-go/format"

	"strandwise/export/pages"
)

// open reads the footer of a file.
func open(t testing.TB, data []byte) *parquet.File {
	t.Helper()
	f, err := parquet.OpenFile(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func TestSchema(t *testing.T) {
	tb := &table{
		columns: []pages.Column{
			{Name: "id", Kind: pages.Text},
			{Name: "source", Kind: pages.Text, Optional: true},
			{Name: "draw", Kind: pages.Int32, Optional: true},
			{Name: "start_s", Kind: pages.Float64},
			{Name: "left.x", Kind: pages.Float32},
			{Name: "left.y", Kind: pages.Float32List},
		},
		values: [][]any{{"a"}, {nil}, {nil}, {1.5}, {float32(2)}, {[]float32{3}}},
	}
	f := open(t, tb.encode(t, nil))
	want := `message schema {
	required binary id (STRING);
	optional binary source (STRING);
	optional int32 draw (INT(32,true));
	required double start_s;
	required float left.x;
	required group left.y (LIST) {
		repeated group list {
			required float element;
		}
	}
}`
	if diff := cmp.Diff(want, f.Schema().String()); diff != "" {
		t.Errorf("schema (-want +got):\n%s", diff)
	}
	if value, ok := f.Lookup("a key"); !ok || value != "a value" {
		t.Errorf("metadata: %q, %v", value, ok)
	}
	if got := f.Metadata().CreatedBy; got != "pages test" {
		t.Errorf("created by %q", got)
	}
}

func TestStatistics(t *testing.T) {
	i32 := func(v int32) []byte { return binary.LittleEndian.AppendUint32(nil, uint32(v)) }
	f64 := func(v float64) []byte { return binary.LittleEndian.AppendUint64(nil, math.Float64bits(v)) }
	negativeZero := math.Copysign(0, -1)
	for _, tc := range []struct {
		name     string
		kind     pages.Kind
		values   []any
		low, top []byte
		nulls    int64
	}{
		{"text", pages.Text, []any{"b", "a", nil, "b"}, []byte("a"), []byte("b"), 1},
		{"text by bytes", pages.Text, []any{"é", "z", "Z"}, []byte("Z"), []byte("é"), 0},
		{"long text", pages.Text, []any{"a", strings.Repeat("x", 65)}, nil, nil, 0},
		{"nulls only", pages.Text, []any{nil, nil}, nil, nil, 2},
		{"whole", pages.Int32, []any{int32(5), int32(math.MinInt32), nil, int32(math.MaxInt32)}, i32(math.MinInt32), i32(math.MaxInt32), 1},
		{"whole nulls", pages.Int32, []any{nil}, nil, nil, 1},
		{"double", pages.Float64, []any{2.5, -1.0, 1e300}, f64(-1), f64(1e300), 0},
		{"infinite", pages.Float64, []any{math.Inf(1), math.Inf(-1)}, f64(math.Inf(-1)), f64(math.Inf(1)), 0},
		{"not a number", pages.Float64, []any{math.NaN(), 3.0, math.NaN()}, f64(3), f64(3), 0},
		{"only not a number", pages.Float64, []any{math.NaN()}, nil, nil, 0},
		// Parquet format, ColumnOrder: a lower bound of zero is written as −0, an upper one as +0.
		{"zeros", pages.Float64, []any{0.0, negativeZero}, f64(negativeZero), f64(0), 0},
		{"float", pages.Float32, []any{float32(1), float32(2)}, nil, nil, 0},
	} {
		t.Run(tc.name, func(t *testing.T) {
			tb := &table{columns: []pages.Column{{Name: "c", Kind: tc.kind, Optional: true}}, values: [][]any{tc.values}}
			got := open(t, tb.encode(t, nil)).Metadata().RowGroups[0].Columns[0].MetaData.Statistics
			if diff := cmp.Diff(format.Statistics{NullCount: tc.nulls, MinValue: tc.low, MaxValue: tc.top}, got); diff != "" {
				t.Errorf("statistics (-want +got):\n%s", diff)
			}
		})
	}
}

// TestListStatistics: the format counts an empty list among the nulls of its
// elements, and states no bounds of floats.
func TestListStatistics(t *testing.T) {
	tb := &table{columns: []pages.Column{{Name: "x", Kind: pages.Float32List}}, values: [][]any{{[]float32{1, 2}, []float32{}, []float32{3}, []float32{}}}}
	got := open(t, tb.encode(t, nil)).Metadata().RowGroups[0].Columns[0].MetaData
	if diff := cmp.Diff(format.Statistics{NullCount: 2}, got.Statistics); diff != "" {
		t.Errorf("statistics (-want +got):\n%s", diff)
	}
	if got.NumValues != 5 {
		t.Errorf("%d entries, want 3 elements and 2 empty lists", got.NumValues)
	}
}

func TestStatisticsArePerRowGroup(t *testing.T) {
	tb := &table{
		columns: []pages.Column{{Name: "label", Kind: pages.Text}, {Name: "n", Kind: pages.Int32}},
		values:  [][]any{{"b", "c", "a"}, {int32(7), int32(9), int32(8)}},
	}
	var got []string
	for _, g := range open(t, tb.encode(t, map[int]bool{1: true})).Metadata().RowGroups {
		text, number := g.Columns[0].MetaData.Statistics, g.Columns[1].MetaData.Statistics
		got = append(got, fmt.Sprintf("%s..%s %d..%d", text.MinValue, text.MaxValue, number.MinValue[0], number.MaxValue[0]))
	}
	if diff := cmp.Diff([]string{"b..c 7..9", "a..a 8..8"}, got); diff != "" {
		t.Errorf("bounds (-want +got):\n%s", diff)
	}
}

// TestPagesTileTheFile walks the pages from the first byte to the footer: they
// follow one another without gaps, carry the checksum of their bytes, and add
// up to what the footer and Flush say.
func TestPagesTileTheFile(t *testing.T) {
	var out bytes.Buffer
	w, err := pages.NewWriter(&out, []pages.Column{{Name: "id", Kind: pages.Text}, {Name: "x", Kind: pages.Float32List}})
	if err != nil {
		t.Fatal(err)
	}
	var groups []pages.Group
	for g := range 3 {
		for r := range 40 {
			w.AppendText(0, fmt.Sprintf("take %d of group %d", r, g), 1)
			w.List(1, 10_000)
			if err := w.EndRows(1); err != nil {
				t.Fatal(err)
			}
		}
		group, err := w.Flush()
		if err != nil {
			t.Fatal(err)
		}
		groups = append(groups, group)
	}
	if err := w.Close(nil, ""); err != nil {
		t.Fatal(err)
	}
	at := int64(4)
	for i, g := range open(t, out.Bytes()).Metadata().RowGroups {
		if want := (pages.Group{Rows: g.NumRows, Offset: at, Bytes: g.TotalCompressedSize}); groups[i] != want {
			t.Errorf("row group %d: Flush returned %+v, want %+v", i, groups[i], want)
		}
		for _, c := range g.Columns {
			end := at + c.MetaData.TotalCompressedSize
			if first := max(c.MetaData.DictionaryPageOffset, 0); first != 0 && first != at || first == 0 && c.MetaData.DataPageOffset != at {
				t.Errorf("row group %d: column %v does not begin at %d", i, c.MetaData.PathInSchema, at)
			}
			if n := walkPages(t, out.Bytes()[at:end]); n < 2 {
				t.Errorf("column %v has %d pages; the test means to see several", c.MetaData.PathInSchema, n)
			}
			at = end
		}
	}
}

// walkPages reads page headers and checks each page's checksum, and returns
// the number of pages.
func walkPages(t *testing.T, data []byte) int {
	t.Helper()
	n := 0
	for r := bytes.NewReader(data); r.Len() > 0; n++ {
		var header format.PageHeader
		if err := thrift.NewDecoder(new(thrift.CompactProtocol).NewReader(r)).Decode(&header); err != nil {
			t.Fatalf("page %d: %v", n, err)
		}
		body := make([]byte, header.CompressedPageSize)
		if _, err := io.ReadFull(r, body); err != nil {
			t.Fatalf("page %d: %v", n, err)
		}
		if sum := crc32.ChecksumIEEE(body); uint32(header.CRC) != sum {
			t.Errorf("page %d: checksum %08x stated, %08x found", n, uint32(header.CRC), sum)
		}
	}
	return n
}

func TestFlushWithoutRows(t *testing.T) {
	var out bytes.Buffer
	w, err := pages.NewWriter(&out, []pages.Column{{Name: "x", Kind: pages.Float32}})
	if err != nil {
		t.Fatal(err)
	}
	if g, err := w.Flush(); g != (pages.Group{}) || err != nil {
		t.Errorf("Flush without rows: %+v, %v", g, err)
	}
	if err := w.Close(nil, ""); err != nil {
		t.Fatal(err)
	}
	if f := open(t, out.Bytes()); f.NumRows() != 0 || len(f.RowGroups()) != 0 {
		t.Errorf("%d rows in %d row groups, want none", f.NumRows(), len(f.RowGroups()))
	}
}

func TestTooManyRowGroups(t *testing.T) {
	w, err := pages.NewWriter(io.Discard, []pages.Column{{Name: "x", Kind: pages.Float32}})
	if err != nil {
		t.Fatal(err)
	}
	for i := range 1 << 15 {
		w.Fixed(0, 1)
		if err := w.EndRows(1); err != nil {
			t.Fatal(err)
		}
		if _, err := w.Flush(); err != nil {
			t.Fatalf("row group %d: %v", i, err)
		}
	}
	w.Fixed(0, 1)
	if err := w.EndRows(1); err != nil {
		t.Fatal(err)
	}
	if _, err := w.Flush(); err == nil || !strings.Contains(err.Error(), "row groups") {
		t.Errorf("row group 32768: error %v, want one about row groups", err)
	}
}

func TestOptionalListIsRefused(t *testing.T) {
	_, err := pages.NewWriter(io.Discard, []pages.Column{{Name: "x", Kind: pages.Float32List, Optional: true}})
	if err == nil || !strings.Contains(err.Error(), "column x") {
		t.Errorf("error %v, want one that names the column", err)
	}
}

// TestFailedWriteStays writes to sinks that fail after so many bytes: the
// failure is returned at once and from then on.
func TestFailedWriteStays(t *testing.T) {
	for room := 0; room < 600; room += 7 {
		w, err := pages.NewWriter(&failing{room}, []pages.Column{{Name: "id", Kind: pages.Text}, {Name: "x", Kind: pages.Float32}})
		for i := 0; i < 4 && err == nil; i++ {
			w.AppendText(0, fmt.Sprint("take ", i), 1)
			w.Fixed(1, 1)
			if err = w.EndRows(1); err == nil {
				_, err = w.Flush()
			}
		}
		if err == nil {
			err = w.Close(nil, "")
		}
		if !errors.Is(err, io.ErrShortWrite) {
			t.Fatalf("room for %d bytes: error %v, want the sink's", room, err)
		}
		if err := w.Close(nil, ""); !errors.Is(err, io.ErrShortWrite) {
			t.Errorf("room for %d bytes: a second Close returns %v", room, err)
		}
	}
}

func TestMisusePanics(t *testing.T) {
	for name, misuse := range map[string]func(*pages.Writer){
		"null in a required column": func(w *pages.Writer) { w.AppendNull(0, 1) },
		"text in a number column":   func(w *pages.Writer) { w.AppendText(1, "a", 1) },
		"number in a text column":   func(w *pages.Writer) { w.AppendInt32(0, 1) },
		"flat values in a list":     func(w *pages.Writer) { w.Fixed(2, 1) },
		"bytes of a text column":    func(w *pages.Writer) { w.Fixed(0, 1) },
		"a column left out":         func(w *pages.Writer) { w.AppendText(0, "a", 1); _ = w.EndRows(1) },
	} {
		t.Run(name, func(t *testing.T) {
			w, err := pages.NewWriter(io.Discard, []pages.Column{
				{Name: "id", Kind: pages.Text}, {Name: "n", Kind: pages.Int32}, {Name: "x", Kind: pages.Float32List},
			})
			if err != nil {
				t.Fatal(err)
			}
			defer func() {
				if text, ok := recover().(string); !ok || !strings.HasPrefix(text, "pages: ") {
					t.Errorf("panic %v, want a text that begins with the package", text)
				}
			}()
			misuse(w)
		})
	}
}
