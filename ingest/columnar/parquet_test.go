package columnar_test

import (
	"bytes"
	"encoding/base64"
	"io"
	"testing"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/apache/arrow/go/v15/arrow/ipc"
	"github.com/apache/arrow/go/v15/parquet"
	"github.com/apache/arrow/go/v15/parquet/file"
	"github.com/apache/arrow/go/v15/parquet/schema"
	"github.com/google/go-cmp/cmp"

	"strandwise/ingest/raw"
)

// chunk is the values of one column with their levels.
type chunk struct {
	values    any
	def, reps []int16
}

// parquetOf writes one row group level by level.
func parquetOf(t testing.TB, rows int, root *schema.GroupNode, chunks ...chunk) []byte {
	t.Helper()
	var out bytes.Buffer
	w := file.NewParquetWriter(struct{ io.Writer }{&out}, root)
	g := w.AppendRowGroup()
	for _, c := range chunks {
		cw, err := g.NextColumn()
		if err == nil {
			switch cw := cw.(type) {
			case *file.Float32ColumnChunkWriter:
				_, err = cw.WriteBatch(c.values.([]float32), c.def, c.reps)
			case *file.Int64ColumnChunkWriter:
				_, err = cw.WriteBatch(c.values.([]int64), c.def, c.reps)
			case *file.Int96ColumnChunkWriter:
				_, err = cw.WriteBatch(c.values.([]parquet.Int96), c.def, c.reps)
			case *file.ByteArrayColumnChunkWriter:
				_, err = cw.WriteBatch(c.values.([]parquet.ByteArray), c.def, c.reps)
			default:
				t.Fatalf("no writer for %T", cw)
			}
		}
		if err == nil {
			err = cw.Close()
		}
		if err != nil {
			t.Fatal(err)
		}
	}
	if err := g.Close(); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

func group(t testing.TB, name string, r parquet.Repetition, converted schema.ConvertedType, fields ...schema.Node) *schema.GroupNode {
	t.Helper()
	n, err := schema.NewGroupNodeConverted(name, r, fields, converted, -1)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// TestLegacyLists reads lists in each form that the Parquet specification
// tells readers to expect (LogicalTypes.md, "Backward-compatibility rules").
func TestLegacyLists(t *testing.T) {
	req, opt, rep := parquet.Repetitions.Required, parquet.Repetitions.Optional, parquet.Repetitions.Repeated
	list, none := schema.ConvertedTypes.List, schema.ConvertedTypes.None
	f := func(name string, r parquet.Repetition) schema.Node { return schema.NewFloat32Node(name, r, -1) }
	cases := []struct {
		name    string
		field   schema.Node
		columns []string
		defs    []int16 // of two rows [1, 2], [3]
	}{
		{"three levels", group(t, "ax", opt, list, group(t, "list", rep, none, f("element", opt))), []string{"ax"}, []int16{3, 3, 3}},
		{"other names", group(t, "ax", req, list, group(t, "bag", rep, none, f("array_element", opt))), []string{"ax"}, []int16{2, 2, 2}},
		{"repeated leaf", f("ax", rep), []string{"ax"}, []int16{1, 1, 1}},
		{"list of repeated leaf", group(t, "ax", opt, list, f("array", rep)), []string{"ax"}, []int16{2, 2, 2}},
		{"structure named array", group(t, "a", opt, list, group(t, "array", rep, none, f("x", req))), []string{"a.x"}, []int16{2, 2, 2}},
		{"structure named tuple", group(t, "a", opt, list, group(t, "a_tuple", rep, none, f("x", req))), []string{"a.x"}, []int16{2, 2, 2}},
		{"structure of several", group(t, "a", opt, list, group(t, "element", rep, none, f("x", req), f("y", opt))), []string{"a.x", "a.y"}, []int16{2, 2, 2}},
		{"structure in three levels", group(t, "a", opt, list, group(t, "list", rep, none, group(t, "element", req, none, f("x", req), f("y", req)))), []string{"a.x", "a.y"}, []int16{2, 2, 2}},
		{"repeated structure", group(t, "a", rep, none, f("x", req), f("y", req)), []string{"a.x", "a.y"}, []int16{1, 1, 1}},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			values := chunk{[]float32{1, 2, 3}, c.defs, []int16{0, 1, 0}}
			chunks := []chunk{values}
			want := []float64{1, 2}
			layout := &raw.Layout{Columns: []raw.Column{header(c.columns[0])}}
			if len(c.columns) == 2 {
				last := values
				last.def = append([]int16{}, c.defs...)
				if c.name == "structure of several" {
					last.def = []int16{3, 3, 3}
				}
				chunks, want = append(chunks, last), []float64{1, 1, 2, 2}
				layout.Columns = append(layout.Columns, header(c.columns[1]))
			}
			data := parquetOf(t, 2, group(t, "schema", req, none, c.field), chunks...)
			got, _, err := readAll(bytes.NewReader(data), raw.Input{})
			if err != nil || len(got) != 2 {
				t.Fatal(len(got), err)
			}
			if diff := cmp.Diff(want, got[0].Data); diff != "" || len(got[1].Time) != 1 {
				t.Errorf("%v %s", got[1].Time, diff)
			}
			if diff := cmp.Diff(layout, got[0].Layout); diff != "" {
				t.Error(diff)
			}
		})
	}
}

// TestLegacyTimeStamps reads time stamps of 96 bits. That day 2440588 is 1
// January 1970 is the definition of the Julian day number.
func TestLegacyTimeStamps(t *testing.T) {
	stamp := func(day uint32, ns uint64) (v parquet.Int96) {
		for i := range 8 {
			v[i] = byte(ns >> (8 * i))
		}
		for i := range 4 {
			v[8+i] = byte(day >> (8 * i))
		}
		return v
	}
	req := parquet.Repetitions.Required
	root := group(t, "schema", req, schema.ConvertedTypes.None, schema.NewInt96Node("when", req, -1), schema.NewFloat32Node("ax", req, -1), schema.NewByteArrayNode("label", req, -1))
	for _, c := range []struct {
		day  uint32
		want []float64
	}{
		{2440588, []float64{86399.5, 86400, 86400.25}},
		{2460312, []float64{0, 0.5, 0.75}}, // counts from 1970, and from the take's start
	} {
		data := parquetOf(t, 3, root,
			chunk{values: []parquet.Int96{stamp(c.day, 86399_500_000_000), stamp(c.day+1, 0), stamp(c.day+1, 250_000_000)}},
			chunk{values: []float32{1, 2, 3}},
			chunk{values: []parquet.ByteArray{[]byte("wave"), []byte("wave"), []byte("wave")}})
		got, _, err := readAll(bytes.NewReader(data), raw.Input{})
		if err != nil || got[0].Label != "wave" {
			t.Fatal(got, err)
		}
		if diff := cmp.Diff(c.want, got[0].Time); diff != "" {
			t.Error(diff)
		}
	}
}

// TestDurationInParquet reads durations, for which Parquet has no type: they
// are known by the Arrow schema in the metadata.
func TestDurationInParquet(t *testing.T) {
	was := arrow.NewSchema([]arrow.Field{{Name: "since", Type: arrow.FixedWidthTypes.Duration_us}, {Name: "ax", Type: f32, Metadata: arrow.NewMetadata([]string{"units"}, []string{"m/s^2"})}}, nil)
	var about bytes.Buffer
	w := ipc.NewWriter(&about, ipc.WithSchema(was))
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	metadata := map[string]string{"ARROW:schema": base64.StdEncoding.EncodeToString(about.Bytes())}
	rec := record(t, metadata, col("since", arrow.PrimitiveTypes.Int64, `[0,20000,45000]`), col("ax", f32, `[1,2,3]`))
	data := parquetFile(t, parquet.NewWriterProperties(), rec)
	got, _, err := readAll(bytes.NewReader(data), raw.Input{})
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff([]float64{0, 0.02, 0.045}, got[0].Time); diff != "" || got[0].Layout.Columns[0].Unit != "m/s^2" {
		t.Errorf("unit %q %s", got[0].Layout.Columns[0].Unit, diff)
	}
}

// TestNumbers reads the extremes of each type of number, as a channel and as a
// name of a take.
func TestNumbers(t *testing.T) {
	cases := []struct {
		typ   arrow.DataType
		json  string
		want  float64
		named string
	}{
		{arrow.PrimitiveTypes.Int8, "-128", -128, "-128"},
		{arrow.PrimitiveTypes.Uint8, "255", 255, "255"},
		{arrow.PrimitiveTypes.Int16, "-32768", -32768, "-32768"},
		{arrow.PrimitiveTypes.Uint16, "65535", 65535, "65535"},
		{arrow.PrimitiveTypes.Int32, "-2147483648", -2147483648, "-2147483648"},
		{arrow.PrimitiveTypes.Uint32, "4294967295", 4294967295, "4294967295"},
		{arrow.PrimitiveTypes.Int64, "-9007199254740993", -9007199254740992, "-9007199254740993"},
		{arrow.PrimitiveTypes.Uint64, "18446744073709551615", 1 << 64, "18446744073709551615"},
		{arrow.FixedWidthTypes.Float16, "65504", 65504, "65504"},
		{f32, "0.1", float64(float32(0.1)), "0.1"},
		{f64, "0.1", 0.1, "0.1"},
	}
	for _, c := range cases {
		for _, w := range containers() {
			t.Run(c.typ.Name()+"/"+w.name, func(t *testing.T) {
				values := "[" + c.json + "," + c.json + "]"
				rec := record(t, nil, col("take", c.typ, values), col("ax", c.typ, values))
				got, _, err := readAll(bytes.NewReader(w.write(t, rec)), raw.Input{})
				if err != nil {
					t.Fatal(err)
				}
				if got[0].Data[0] != c.want || got[0].Take != c.named {
					t.Errorf("%v named %q, want %v named %q", got[0].Data[0], got[0].Take, c.want, c.named)
				}
			})
		}
	}
}
