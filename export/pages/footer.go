package pages

import (
	"encoding/binary"
	"fmt"

	"github.com/parquet-go/parquet-go/deprecated"
	"github.com/parquet-go/parquet-go/encoding/thrift"
	"github.com/parquet-go/parquet-go/format"
)

// KeyValue is one entry of a file's own metadata.
type KeyValue struct{ Key, Value string }

// physical maps kinds to the types of the format.
func (k Kind) physical() format.Type {
	switch k {
	case Text:
		return format.ByteArray
	case Int32, Int16List: // the format knows no shorter numbers
		return format.Int32
	case Float64:
		return format.Double
	}
	return format.Float
}

// path returns the column's path in the schema.
func (c *column) path() []string {
	if c.Kind.list() {
		return []string{c.Name, "list", "element"}
	}
	return []string{c.Name}
}

// metadata returns what the footer says of the column's row group, offsets
// and the dictionary's sizes left to the caller.
func (c *column) metadata() format.ColumnMetaData {
	m := format.ColumnMetaData{
		Type:                  c.Kind.physical(),
		Encoding:              []format.Encoding{format.Plain, format.RLE},
		PathInSchema:          c.path(),
		NumValues:             c.numValues,
		TotalUncompressedSize: c.plainSize,
		Statistics:            c.statistics(),
	}
	if c.Kind == Text {
		m.Encoding = append(m.Encoding, format.RLEDictionary)
	}
	return m
}

// elements returns the column's part of the schema.
func (c *column) elements() []format.SchemaElement {
	repetition := format.Required
	if c.Optional {
		repetition = format.Optional
	}
	leaf := format.SchemaElement{
		Name:           c.Name,
		Type:           thrift.New(c.Kind.physical()),
		RepetitionType: thrift.New(repetition),
	}
	if c.Kind == Text {
		leaf.ConvertedType = thrift.New(deprecated.UTF8)
		leaf.LogicalType.Value = &format.StringType{}
	}
	if c.Kind == Int16List {
		leaf.ConvertedType = thrift.New(deprecated.Int16)
		leaf.LogicalType.Value = &format.IntType{BitWidth: 16, IsSigned: true}
	}
	if !c.Kind.list() {
		return []format.SchemaElement{leaf}
	}
	leaf.Name = "element"
	return []format.SchemaElement{
		{
			Name:           c.Name,
			RepetitionType: thrift.New(format.Required),
			NumChildren:    thrift.New[int32](1),
			ConvertedType:  thrift.New(deprecated.List),
			LogicalType:    format.LogicalType{Value: &format.ListType{}},
		},
		{Name: "list", RepetitionType: thrift.New(format.Repeated), NumChildren: thrift.New[int32](1)},
		leaf,
	}
}

// footer returns the end of the file: its metadata, their length, the magic.
func (w *Writer) footer(metadata []KeyValue, createdBy string) ([]byte, error) {
	meta := format.FileMetaData{
		Version:   1,
		Schema:    []format.SchemaElement{{Name: "schema", NumChildren: thrift.New(int32(len(w.columns)))}},
		RowGroups: w.groups,
		CreatedBy: createdBy,
	}
	for _, c := range w.columns {
		meta.Schema = append(meta.Schema, c.elements()...)
		meta.ColumnOrders = append(meta.ColumnOrders, format.ColumnOrder{Value: &format.TypeDefinedOrder{}})
	}
	for _, g := range w.groups {
		meta.NumRows += g.NumRows
	}
	for _, kv := range metadata {
		meta.KeyValueMetadata = append(meta.KeyValueMetadata, format.KeyValue{Key: kv.Key, Value: kv.Value})
	}
	out, err := thrift.Marshal(&w.press.protocol, &meta)
	if err != nil {
		return nil, fmt.Errorf("encode footer: %w", err)
	}
	out = binary.LittleEndian.AppendUint32(out, uint32(len(out)))
	return append(out, magic...), nil
}
