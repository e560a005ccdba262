package export

import (
	"bytes"
	"encoding/base64"
	"fmt"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/apache/arrow/go/v15/arrow/ipc"

	"strandwise/export/pages"
)

// arrowSchemaKey is the key under which writers of Apache Arrow keep the schema
// that a Parquet file was made from: base64 of the schema's IPC message. Parquet
// has no list of fixed size; with this key readers of Arrow give one.
const arrowSchemaKey = "ARROW:schema"

// arrowSchema returns the schema of these columns, whose lists all have this
// length.
func arrowSchema(columns []pages.Column, length int) (string, error) {
	var fields []arrow.Field
	for _, c := range columns {
		fields = append(fields, arrow.Field{Name: c.Name, Type: arrowType(c.Kind, length), Nullable: c.Optional})
	}
	var b bytes.Buffer
	if err := ipc.NewWriter(&b, ipc.WithSchema(arrow.NewSchema(fields, nil))).Close(); err != nil {
		return "", fmt.Errorf("encode Arrow schema: %w", err)
	}
	return base64.StdEncoding.EncodeToString(b.Bytes()), nil
}

func arrowType(k pages.Kind, length int) arrow.DataType {
	switch k {
	case pages.Text:
		return arrow.BinaryTypes.String
	case pages.Int32:
		return arrow.PrimitiveTypes.Int32
	case pages.Float64:
		return arrow.PrimitiveTypes.Float64
	case pages.Float32:
		return arrow.PrimitiveTypes.Float32
	case pages.Int16List:
		return fixedList(length, arrow.PrimitiveTypes.Int16)
	}
	return fixedList(length, arrow.PrimitiveTypes.Float32)
}

func fixedList(length int, of arrow.DataType) arrow.DataType {
	return arrow.FixedSizeListOfField(int32(length), arrow.Field{Name: "element", Type: of})
}
