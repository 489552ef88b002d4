package column

import (
	"fmt"
	"math"
	"unsafe"

	"github.com/apache/arrow/go/v17/arrow"
	"github.com/apache/arrow/go/v17/arrow/array"
	"github.com/apache/arrow/go/v17/arrow/memory"
)

// MissingInt is a missing integer in memory.
const MissingInt = math.MinInt64

// Vector is the values of one column of a Batch: the slice of its type has
// one entry a row (SignatureBytes bytes a row for Bytes), the others are nil.
type Vector struct {
	Floats []float64 // Float64: SI times the column's scale; NaN where missing
	Ints   []int64   // Int64 and Int32; MissingInt where missing
	Codes  []uint32  // String: codes of the Batch's Texts; 0 where missing
	Blobs  []byte    // Bytes; all zero where missing
}

// Batch is rows of a table in memory. Its slices are kept and used again
// after Reset.
type Batch struct {
	Columns []Column
	Vectors []Vector
	Texts   *Texts
	Rows    int
}

// NewBatch makes a batch of rows that hold zeros. Batches that share texts
// share codes; nil makes texts of the batch's own.
func NewBatch(columns []Column, texts *Texts, rows int) *Batch {
	if texts == nil {
		texts = NewTexts()
	}
	b := &Batch{Columns: columns, Vectors: make([]Vector, len(columns)), Texts: texts}
	b.Grow(rows)
	return b
}

// Reset drops the rows and keeps the room, and the texts.
func (b *Batch) Reset() { b.Grow(0) }

// Grow sets the number of rows. Rows that are new hold whatever stood
// there: the caller writes every column of them.
func (b *Batch) Grow(rows int) {
	b.Rows = rows
	for i := range b.Columns {
		v := &b.Vectors[i]
		switch b.Columns[i].Type {
		case Float64:
			v.Floats = sized(v.Floats, rows)
		case Int64, Int32:
			v.Ints = sized(v.Ints, rows)
		case String:
			v.Codes = sized(v.Codes, rows)
		case Bytes:
			v.Blobs = sized(v.Blobs, rows*SignatureBytes)
		}
	}
}

// sized gives s the length n and keeps what it holds.
func sized[T any](s []T, n int) []T {
	if n <= cap(s) {
		return s[:n]
	}
	grown := make([]T, n, max(n, 2*cap(s)))
	copy(grown, s)
	return grown
}

// Float reports the value of a Float64 column in a row; ok is false where it
// is missing.
func (b *Batch) Float(column, row int) (v float64, ok bool) {
	v = b.Vectors[column].Floats[row]
	return v, finite(v)
}

// finite is false for NaN and infinities: v - v is 0 for every other number.
func finite(v float64) bool { return v-v == 0 }

// Text gives the value of a String column in a row, empty where missing.
func (b *Batch) Text(column, row int) string {
	return b.Texts.Text(b.Vectors[column].Codes[row])
}

// Record copies the batch to an Arrow record of Schema(b.Columns, nil).
func (b *Batch) Record(s *arrow.Schema) (arrow.Record, error) {
	if s.NumFields() != len(b.Columns) {
		return nil, fmt.Errorf("column: found a schema of %d fields, expected %d", s.NumFields(), len(b.Columns))
	}
	arrays := make([]arrow.Array, len(b.Columns))
	for i, c := range b.Columns {
		arrays[i] = b.array(i, c)
	}
	rec := array.NewRecord(s, arrays, int64(b.Rows))
	for _, a := range arrays {
		a.Release()
	}
	return rec, nil
}

func (b *Batch) array(i int, c Column) arrow.Array {
	v := b.Vectors[i]
	switch c.Type {
	case Float64:
		return fixed(arrow.PrimitiveTypes.Float64, append([]float64(nil), v.Floats...), b.Rows, func(row int) bool { return finite(v.Floats[row]) })
	case Int64:
		return fixed(arrow.PrimitiveTypes.Int64, append([]int64(nil), v.Ints...), b.Rows, func(row int) bool { return v.Ints[row] != MissingInt })
	case Int32:
		short := make([]int32, b.Rows)
		for row, n := range v.Ints {
			short[row] = int32(n)
		}
		return fixed(arrow.PrimitiveTypes.Int32, short, b.Rows, func(row int) bool { return v.Ints[row] != MissingInt })
	case Bytes:
		return fixed(signatureType, append([]byte(nil), v.Blobs...), b.Rows, func(row int) bool { return !empty(blob(v.Blobs, row)) })
	}
	return b.texts(v.Codes)
}

// fixed wraps values of fixed width as an Arrow array.
func fixed[T any](t arrow.DataType, values []T, rows int, valid func(row int) bool) arrow.Array {
	bits, nulls := make([]byte, (rows+7)/8), 0
	for row := range rows {
		if valid(row) {
			bits[row>>3] |= 1 << (row & 7)
		} else {
			nulls++
		}
	}
	var raw []byte
	if len(values) > 0 {
		raw = unsafe.Slice((*byte)(unsafe.Pointer(&values[0])), len(values)*int(unsafe.Sizeof(values[0])))
	}
	buffers := []*memory.Buffer{memory.NewBufferBytes(bits), memory.NewBufferBytes(raw)}
	data := array.NewData(t, rows, buffers, nil, nulls, 0)
	defer data.Release()
	return array.MakeFromData(data)
}

func (b *Batch) texts(codes []uint32) arrow.Array {
	builder := array.NewStringBuilder(memory.DefaultAllocator)
	defer builder.Release()
	builder.Reserve(len(codes))
	for _, code := range codes {
		if code == 0 {
			builder.AppendNull()
			continue
		}
		builder.Append(b.Texts.Text(code))
	}
	return builder.NewArray()
}

func blob(blobs []byte, row int) []byte {
	return blobs[row*SignatureBytes : (row+1)*SignatureBytes]
}

func empty(blob []byte) bool {
	for _, c := range blob {
		if c != 0 {
			return false
		}
	}
	return true
}
