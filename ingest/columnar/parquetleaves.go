package columnar

import (
	"bytes"
	"encoding/base64"
	"fmt"
	"math/bits"
	"strings"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/parquet-go/parquet-go"
	"github.com/parquet-go/parquet-go/format"
)

// arrowSchemaKey is the metadata key under which Arrow's own writers keep the
// schema that a file was written from, a base64 encoded IPC message.
const arrowSchemaKey = "ARROW:schema"

// findLeaves lists the columns of the file.
func (s *parquetSource) findLeaves() error {
	s.walk(s.file.Root(), "", 0, 0)
	schema, err := s.arrowSchema()
	if schema == nil || err != nil {
		return err
	}
	stated := map[string]leaf{}
	for _, a := range arrowLeaves(schema) {
		stated[a.name] = a.leaf
	}
	for i := range s.list {
		l, a := &s.list[i], stated[s.list[i].name]
		switch {
		case a.kind == instant && l.kind == integer: // a duration, which Parquet has no type for
			l.kind, l.unit = instant, a.unit
		case l.kind == number || l.kind == integer:
			l.unit = a.unit
		}
	}
	return nil
}

func (s *parquetSource) arrowSchema() (*arrow.Schema, error) {
	text := s.metadata(arrowSchemaKey)
	if text == "" {
		return nil, nil
	}
	data, err := base64.StdEncoding.DecodeString(text)
	if err != nil {
		return nil, fmt.Errorf("metadata %s: %w", arrowSchemaKey, err)
	}
	r, err := newArrowReader(&messages{r: bytes.NewReader(data)})
	if err != nil {
		return nil, fmt.Errorf("metadata %s: %w", arrowSchemaKey, err)
	}
	defer r.Release()
	return r.Schema(), nil
}

// walk lists the leaves below a node of this name, which lists so many lists
// deep within lists, the last of them repeated at this definition level.
func (s *parquetSource) walk(node *parquet.Column, name string, lists, listed int) {
	for _, child := range node.Columns() {
		s.visit(child, join(name, child.Name()), lists, listed)
	}
}

func (s *parquetSource) visit(node *parquet.Column, name string, lists, listed int) {
	if node.Repeated() {
		lists, listed = lists+1, node.MaxDefinitionLevel()
	}
	switch {
	case node.Leaf():
		s.add(node, name, lists, listed)
	case !isList(node):
		s.walk(node, name, lists, listed)
	default:
		s.visitList(node, name, lists)
	}
}

// isList tells whether a node is a group annotated as a list that holds the
// repeated node such a list must hold.
func isList(node *parquet.Column) bool {
	logical := node.Type().LogicalType()
	if logical == nil {
		return false
	}
	_, list := logical.Value.(*format.ListType)
	return list && len(node.Columns()) == 1 && node.Columns()[0].Repeated()
}

// visitList goes on with the elements of a list, by the rules of the Parquet
// specification for lists in three levels and for its legacy forms
// (LogicalTypes.md, "Backward-compatibility rules").
func (s *parquetSource) visitList(node *parquet.Column, name string, lists int) {
	repeated := node.Columns()[0]
	listed := repeated.MaxDefinitionLevel()
	inner := repeated.Columns()
	switch {
	case repeated.Leaf(): // the repeated node is the element
		s.add(repeated, name, lists+1, listed)
	case len(inner) != 1 || repeated.Name() == "array" || repeated.Name() == last(node)+"_tuple":
		s.walk(repeated, name, lists+1, listed)
	default:
		s.visit(inner[0], name, lists+1, listed)
	}
}

func last(node *parquet.Column) string { return node.Path()[len(node.Path())-1] }

func join(name, part string) string {
	if name == "" {
		return part
	}
	return name + "." + part
}

func (s *parquetSource) add(node *parquet.Column, name string, lists, listed int) {
	l := parquetLeaf(node.Type())
	if s.isHalf(node.Index()) {
		l = leaf{kind: number}
	}
	c := &parquetColumn{
		index: node.Index(), max: byte(node.MaxDefinitionLevel()), listed: byte(listed), list: lists == 1,
		kind: node.Type().Kind(), unsigned: isUnsigned(node.Type()),
	}
	l.name, l.list = name, lists == 1
	c.pages.rep, c.pages.def = min(lists, 1), bits.Len8(c.max)
	if lists > 1 {
		l.kind, l.what = other, "lists within lists"
	}
	s.list = append(s.list, l)
	s.columns = append(s.columns, c)
}

// isHalf tells whether the leaf at this position holds 16-bit floats, which
// the library knows as bytes. Leaves are numbered as they stand in the schema.
func (s *parquetSource) isHalf(index int) bool {
	for _, e := range s.file.Metadata().Schema {
		if !e.Type.Valid {
			continue
		}
		if index == 0 {
			_, half := e.LogicalType.Value.(*format.Float16Type)
			return half && e.Type.V == format.FixedLenByteArray && e.TypeLength.V == 2
		}
		index--
	}
	return false
}

// parquetLeaf says what values of a type are.
func parquetLeaf(t parquet.Type) leaf {
	if logical := t.LogicalType(); logical != nil {
		switch l := logical.Value.(type) {
		case *format.TimestampType:
			return leaf{kind: instant, unit: timeUnit(l.Unit)}
		case *format.TimeType:
			return leaf{kind: instant, unit: timeUnit(l.Unit)}
		case *format.StringType, *format.EnumType:
			return leaf{kind: text}
		case *format.IntType:
			return leaf{kind: integer}
		case nil:
		default:
			return leaf{what: fmt.Sprintf("values of type %s", strings.ToLower(logical.String()))}
		}
	}
	switch t.Kind() {
	case parquet.Float, parquet.Double:
		return leaf{kind: number}
	case parquet.Int32, parquet.Int64:
		return leaf{kind: integer}
	case parquet.Int96: // what time stamps were before there was a type for them
		return leaf{kind: instant, unit: "ns"}
	case parquet.ByteArray: // text, by many old writers
		return leaf{kind: text}
	case parquet.Boolean:
		return leaf{what: "true and false"}
	}
	return leaf{what: "bytes"}
}

func timeUnit(u format.TimeUnit) string {
	switch u.Value.(type) {
	case *format.MilliSeconds:
		return "ms"
	case *format.MicroSeconds:
		return "us"
	}
	return "ns"
}

func isUnsigned(t parquet.Type) bool {
	logical := t.LogicalType()
	if logical == nil {
		return false
	}
	i, ok := logical.Value.(*format.IntType)
	return ok && !i.IsSigned
}
