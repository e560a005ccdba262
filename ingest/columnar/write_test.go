package columnar_test

import (
	"bytes"
	"io"
	"testing"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/apache/arrow/go/v15/arrow/array"
	"github.com/apache/arrow/go/v15/arrow/ipc"
	"github.com/apache/arrow/go/v15/arrow/memory"
	"github.com/apache/arrow/go/v15/parquet"
	"github.com/apache/arrow/go/v15/parquet/compress"
	"github.com/apache/arrow/go/v15/parquet/pqarrow"

	"strandwise/ingest/columnar"
	"strandwise/ingest/raw"
)

// column is one column of a table that a test writes: a field and its values.
type column struct {
	field arrow.Field
	json  string // its values as arrow/go reads them from JSON
}

// col returns a column without metadata.
func col(name string, typ arrow.DataType, json string) column {
	return column{arrow.Field{Name: name, Type: typ, Nullable: true}, json}
}

// in returns the column with a unit in its metadata.
func (c column) in(unit string) column {
	c.field.Metadata = arrow.NewMetadata([]string{"comment", "Unit"}, []string{"n/a", unit})
	return c
}

var (
	category = &arrow.DictionaryType{IndexType: arrow.PrimitiveTypes.Int8, ValueType: arrow.BinaryTypes.String}
	f32, f64 = arrow.PrimitiveTypes.Float32, arrow.PrimitiveTypes.Float64
	str      = arrow.BinaryTypes.String

	arrowLists = arrow.ListOf(f64)
)

// record makes a batch of columns.
func record(t testing.TB, metadata map[string]string, columns ...column) arrow.Record {
	t.Helper()
	var fields []arrow.Field
	var arrays []arrow.Array
	rows := 0
	for _, c := range columns {
		a, _, err := array.FromJSON(memory.DefaultAllocator, c.field.Type, bytes.NewReader([]byte(c.json)), array.WithUseNumber())
		if err != nil {
			t.Fatalf("%s: %v", c.field.Name, err)
		}
		fields, arrays, rows = append(fields, c.field), append(arrays, a), a.Len()
	}
	m := arrow.MetadataFrom(metadata)
	return array.NewRecord(arrow.NewSchema(fields, &m), arrays, int64(rows))
}

// container is one way to write batches of one schema.
type container struct {
	name  string
	write func(t testing.TB, batches ...arrow.Record) []byte
}

// containers are Arrow streams and files, and Parquet files as arrow/go writes
// them, which is independent of the reader under test.
func containers() []container {
	plain := parquet.NewWriterProperties()
	small := parquet.NewWriterProperties(parquet.WithDictionaryDefault(false), parquet.WithDataPageSize(64),
		parquet.WithBatchSize(3), parquet.WithMaxRowGroupLength(5), parquet.WithDataPageVersion(parquet.DataPageV2), parquet.WithCompression(compress.Codecs.Zstd))
	split := parquet.NewWriterProperties(parquet.WithDictionaryDefault(false), parquet.WithDataPageSize(1),
		parquet.WithBatchSize(2), parquet.WithDataPageVersion(parquet.DataPageV1))
	return []container{
		{"stream", func(t testing.TB, b ...arrow.Record) []byte { return arrowStream(t, nil, b...) }},
		{"stream lz4", func(t testing.TB, b ...arrow.Record) []byte { return arrowStream(t, []ipc.Option{ipc.WithLZ4()}, b...) }},
		{"stream zstd", func(t testing.TB, b ...arrow.Record) []byte {
			return arrowStream(t, []ipc.Option{ipc.WithZstd()}, b...)
		}},
		{"file", arrowFile},
		{"parquet", func(t testing.TB, b ...arrow.Record) []byte { return parquetFile(t, plain, b...) }},
		{"parquet split rows", func(t testing.TB, b ...arrow.Record) []byte { return parquetFile(t, split, b...) }},
		{"parquet small pages", func(t testing.TB, b ...arrow.Record) []byte { return parquetFile(t, small, b...) }},
	}
}

func arrowStream(t testing.TB, options []ipc.Option, batches ...arrow.Record) []byte {
	t.Helper()
	var out bytes.Buffer
	w := ipc.NewWriter(&out, append(options, ipc.WithSchema(batches[0].Schema()))...)
	for _, b := range batches {
		if err := w.Write(b); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

// seekable is a buffer that can tell how much it holds, which is all the
// seeking that arrow/go does.
type seekable struct{ bytes.Buffer }

func (s *seekable) Seek(offset int64, whence int) (int64, error) { return int64(s.Len()), nil }

func arrowFile(t testing.TB, batches ...arrow.Record) []byte {
	t.Helper()
	var out seekable
	w, err := ipc.NewFileWriter(&out, ipc.WithSchema(batches[0].Schema()))
	if err != nil {
		t.Fatal(err)
	}
	for _, b := range batches {
		if err := w.Write(b); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

func parquetFile(t testing.TB, p *parquet.WriterProperties, batches ...arrow.Record) []byte {
	t.Helper()
	var out bytes.Buffer
	w, err := pqarrow.NewFileWriter(batches[0].Schema(), struct{ io.Writer }{&out}, p, pqarrow.NewArrowWriterProperties(pqarrow.WithStoreSchema()))
	if err != nil {
		t.Fatal(err)
	}
	for _, b := range batches {
		if err := w.Write(b); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

// readAll reads takes until the end or an error, and the notices.
func readAll(r io.Reader, in raw.Input) (takes []*raw.Take, notices []string, err error) {
	if in.Name == "" {
		in.Name = "f"
	}
	in.Notice = func(text, evidence string) {
		if evidence != "" {
			text += " (" + evidence + ")"
		}
		notices = append(notices, text)
	}
	for t, err := range (columnar.Format{}).Read(r, in) {
		if err != nil {
			return takes, notices, err
		}
		takes = append(takes, t)
	}
	return takes, notices, nil
}
