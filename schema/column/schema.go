package column

import (
	"encoding/json"
	"fmt"

	"github.com/apache/arrow/go/v17/arrow"
)

// MetaColumns is the key of a file's metadata under which its columns stand
// as JSON, with units and descriptions.
const MetaColumns = "betaloom.columns"

var signatureType arrow.DataType = &arrow.FixedSizeBinaryType{ByteWidth: SignatureBytes}

// Schema is the Arrow schema of a table of these columns, with unit and
// description in each field's metadata. meta adds to the schema's own
// metadata, in order of its keys.
func Schema(columns []Column, meta map[string]string) *arrow.Schema {
	fields := make([]arrow.Field, len(columns))
	for i, c := range columns {
		fields[i] = arrow.Field{Name: c.Name, Type: arrowType(c.Type), Nullable: true, Metadata: arrow.NewMetadata(
			[]string{"description", "unit"}, []string{c.Description, c.Unit})}
	}
	all := arrow.MetadataFrom(withColumns(columns, meta))
	return arrow.NewSchema(fields, &all)
}

func arrowType(t Type) arrow.DataType {
	switch t {
	case Int64:
		return arrow.PrimitiveTypes.Int64
	case Int32:
		return arrow.PrimitiveTypes.Int32
	case Float64:
		return arrow.PrimitiveTypes.Float64
	case Bytes:
		return signatureType
	}
	return arrow.BinaryTypes.String
}

func withColumns(columns []Column, meta map[string]string) map[string]string {
	all := map[string]string{MetaColumns: describe(columns)}
	for k, v := range meta {
		all[k] = v
	}
	return all
}

// describe writes columns as JSON; strings cannot fail to marshal.
func describe(columns []Column) string {
	b, err := json.Marshal(columns)
	if err != nil {
		panic(fmt.Sprintf("column: %v", err))
	}
	return string(b)
}
