package recording

import (
	"encoding/binary"
	"math"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/apache/arrow/go/v15/arrow/array"
	"github.com/apache/arrow/go/v15/arrow/memory"

	"strandwise/export"
	"strandwise/export/pages"
)

// batch is the columns of a record batch in the making.
type batch []batchColumn

var _ export.Rows = batch{}

// batchColumn is one column: a builder for a flat one, else lists whose bytes
// the caller fills in.
type batchColumn interface {
	array() arrow.Array // of what was added, which it then forgets
}

type flatColumn struct{ array.Builder }

func (c flatColumn) array() arrow.Array { return c.NewArray() }

// listColumn is a column of lists of 32-bit floats.
type listColumn struct {
	ends  []int32 // 0, and where each list ends
	bytes []byte  // of all values, little-endian
}

// newBatch returns an empty batch of these columns, and its schema.
func newBatch(columns []pages.Column, metadata []pages.KeyValue) (batch, *arrow.Schema) {
	var out batch
	var fields []arrow.Field
	for _, c := range columns {
		typ := typeOf(c.Kind)
		fields = append(fields, arrow.Field{Name: c.Name, Type: typ, Nullable: c.Optional})
		if c.Kind == pages.Float32List {
			out = append(out, &listColumn{ends: []int32{0}})
		} else {
			out = append(out, flatColumn{array.NewBuilder(memory.DefaultAllocator, typ)})
		}
	}
	var keys, values []string
	for _, kv := range metadata {
		keys, values = append(keys, kv.Key), append(values, kv.Value)
	}
	m := arrow.NewMetadata(keys, values)
	return out, arrow.NewSchema(fields, &m)
}

func typeOf(k pages.Kind) arrow.DataType {
	switch k {
	case pages.Text:
		return arrow.BinaryTypes.String
	case pages.Int32:
		return arrow.PrimitiveTypes.Int32
	case pages.Float64:
		return arrow.PrimitiveTypes.Float64
	case pages.Float32List:
		return arrow.ListOfNonNullable(arrow.PrimitiveTypes.Float32)
	}
	panic("recording: a kind of column that no row of takes has")
}

// record returns what was added as one record batch and empties the columns.
func (b batch) record(s *arrow.Schema) arrow.Record {
	arrays := make([]arrow.Array, len(b))
	for i, c := range b {
		arrays[i] = c.array()
	}
	return array.NewRecord(s, arrays, int64(arrays[0].Len()))
}

func builder[B array.Builder](b batch, c int) B { return b[c].(flatColumn).Builder.(B) }

// AppendText adds n rows of the same text.
func (b batch) AppendText(c int, s string, n int) {
	for range n {
		builder[*array.StringBuilder](b, c).Append(s)
	}
}

// AppendNull adds n nulls.
func (b batch) AppendNull(c, n int) { b[c].(flatColumn).AppendNulls(n) }

// AppendInt32 adds one number.
func (b batch) AppendInt32(c int, v int32) { builder[*array.Int32Builder](b, c).Append(v) }

// AppendFloat64 adds one number.
func (b batch) AppendFloat64(c int, v float64) { builder[*array.Float64Builder](b, c).Append(v) }

// List adds one list of n floats and returns their bytes to be filled in.
func (b batch) List(c, n int) []byte {
	l := b[c].(*listColumn)
	from := len(l.bytes)
	l.bytes = append(l.bytes, make([]byte, 4*n)...)
	l.ends = append(l.ends, int32(len(l.bytes)/4))
	return l.bytes[from:]
}

func (l *listColumn) array() arrow.Array {
	floats := make([]float32, len(l.bytes)/4) // in the byte order of this machine
	for i := range floats {
		floats[i] = math.Float32frombits(binary.LittleEndian.Uint32(l.bytes[4*i:]))
	}
	values := array.NewData(arrow.PrimitiveTypes.Float32, len(floats), []*memory.Buffer{nil, memory.NewBufferBytes(arrow.Float32Traits.CastToBytes(floats))}, nil, 0, 0)
	ends := memory.NewBufferBytes(arrow.Int32Traits.CastToBytes(l.ends))
	lists := array.NewData(typeOf(pages.Float32List), len(l.ends)-1, []*memory.Buffer{nil, ends}, []arrow.ArrayData{values}, 0, 0)
	l.ends, l.bytes = []int32{0}, l.bytes[:0]
	return array.NewListData(lists)
}
