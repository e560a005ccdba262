package columnar

import (
	"strings"

	"github.com/apache/arrow/go/v15/arrow"
)

// arrowLeaves lists the columns of a schema.
func arrowLeaves(schema *arrow.Schema) []arrowColumn {
	var out []arrowColumn
	for i, f := range schema.Fields() {
		out = appendArrow(out, f, arrowColumn{leaf: leaf{name: f.Name}, path: []int{i}})
	}
	return out
}

// appendArrow appends the leaves of a field, which c leads to.
func appendArrow(out []arrowColumn, f arrow.Field, c arrowColumn) []arrowColumn {
	switch t := plain(f.Type).(type) {
	case *arrow.StructType:
		for i, child := range t.Fields() {
			inner := c
			inner.name = join(c.name, child.Name)
			inner.path = append(append([]int{}, c.path...), i)
			out = appendArrow(out, child, inner)
		}
		return out
	case *arrow.ListType, *arrow.LargeListType, *arrow.FixedSizeListType:
		if c.list {
			c.what = "lists within lists"
			return append(out, c)
		}
		c.list = true
		c.path = append(append([]int{}, c.path...), elements)
		element := t.(arrow.ListLikeType).ElemField()
		if len(unitOf(element)) == 0 {
			element.Metadata = f.Metadata
		}
		return appendArrow(out, element, c)
	}
	l := arrowLeaf(f.Type)
	c.kind, c.what, c.unit = l.kind, l.what, l.unit
	if c.kind == number || c.kind == integer {
		c.unit = unitOf(f)
	}
	return append(out, c)
}

// unitOf returns the unit that the metadata of a field state.
func unitOf(f arrow.Field) string {
	for i, key := range f.Metadata.Keys() {
		if strings.EqualFold(key, "unit") || strings.EqualFold(key, "units") {
			return strings.TrimSpace(f.Metadata.Values()[i])
		}
	}
	return ""
}

// plain returns the type in which an extension type is stored, and any other
// type itself.
func plain(t arrow.DataType) arrow.DataType {
	if e, ok := t.(arrow.ExtensionType); ok {
		return e.StorageType()
	}
	return t
}

// arrowLeaf says what values of a type are.
func arrowLeaf(t arrow.DataType) leaf {
	t = plain(t)
	if d, ok := t.(*arrow.DictionaryType); ok {
		t = plain(d.ValueType)
	}
	switch t.ID() {
	case arrow.FLOAT16, arrow.FLOAT32, arrow.FLOAT64:
		return leaf{kind: number}
	case arrow.INT8, arrow.INT16, arrow.INT32, arrow.INT64, arrow.UINT8, arrow.UINT16, arrow.UINT32, arrow.UINT64:
		return leaf{kind: integer}
	case arrow.STRING, arrow.LARGE_STRING, arrow.STRING_VIEW:
		return leaf{kind: text}
	case arrow.TIMESTAMP, arrow.DURATION, arrow.TIME32, arrow.TIME64:
		return leaf{kind: instant, unit: t.(arrow.TemporalWithUnit).TimeUnit().String()}
	case arrow.BOOL:
		return leaf{what: "true and false"}
	}
	return leaf{what: "values of type " + t.Name()}
}
