package surface

import (
	"fmt"
	"math"

	"github.com/apache/arrow/go/v17/arrow"
	"github.com/apache/arrow/go/v17/arrow/array"

	"betaloom/schema/column"
)

// source gives the rows of a record or a batch to a Writer.
type source struct {
	points []int64
	family func(i int) (name string, ok bool)
	values []floats
}

// floats is one column; nulls is nil where none is null, and raw is nil where
// all are.
type floats struct {
	raw   []float64
	nulls *array.Float64
}

// at gives the value of row i, NaN where it is missing or not finite.
func (f *floats) at(i int) float64 {
	if f.raw == nil || f.nulls != nil && f.nulls.IsNull(i) {
		return math.NaN()
	}
	v := f.raw[i]
	if v-v != 0 {
		return math.NaN()
	}
	return v
}

func (s *source) bind(rec arrow.Record, columns []column.Column) error {
	at := map[string]arrow.Array{}
	for i, f := range rec.Schema().Fields() {
		at[f.Name] = rec.Column(i)
	}
	points, ok := at["point"].(*array.Int64)
	if !ok || points.NullN() > 0 {
		return fmt.Errorf("surface: column point: found %s, expected int64 without nulls", typeName(at["point"]))
	}
	s.points = points.Int64Values()
	if s.family = texts(at["family"]); s.family == nil {
		return fmt.Errorf("surface: column family: found %s, expected text", typeName(at["family"]))
	}
	s.values = s.values[:0]
	for _, c := range columns {
		a, ok := at[c.Name].(*array.Float64)
		if !ok {
			return fmt.Errorf("surface: column %s: found %s, expected float64", c.Name, typeName(at[c.Name]))
		}
		s.values = append(s.values, bindFloats(a))
	}
	return nil
}

// bindBatch is bind for a batch.
func (s *source) bindBatch(b *column.Batch, columns []column.Column) error {
	at := column.Index(b.Columns)
	find := func(name string, t column.Type) (column.Vector, error) {
		i, ok := at[name]
		if !ok || b.Columns[i].Type != t {
			return column.Vector{}, fmt.Errorf("surface: column %s: expected it in the batch with its type", name)
		}
		return b.Vectors[i], nil
	}
	points, err := find("point", column.Int64)
	if err != nil {
		return err
	}
	family, err := find("family", column.String)
	if err != nil {
		return err
	}
	s.points = points.Ints
	s.family = func(i int) (string, bool) {
		return b.Texts.Text(family.Codes[i]), family.Codes[i] != 0
	}
	s.values = s.values[:0]
	for _, c := range columns {
		v, err := find(c.Name, column.Float64)
		if err != nil {
			return err
		}
		s.values = append(s.values, floats{raw: v.Floats})
	}
	return nil
}

func bindFloats(a *array.Float64) floats {
	switch a.NullN() {
	case 0:
		return floats{raw: a.Float64Values()}
	case a.Len():
		return floats{}
	}
	return floats{raw: a.Float64Values(), nulls: a}
}

func typeName(a arrow.Array) string {
	if a == nil {
		return "none"
	}
	return a.DataType().String()
}

type stringColumn interface {
	arrow.Array
	Value(i int) string
}

// texts reads a text column; nil if it is none.
func texts(a arrow.Array) func(i int) (string, bool) {
	switch a := a.(type) {
	case *array.String, *array.LargeString:
		plain := a.(stringColumn)
		return func(i int) (string, bool) {
			if plain.IsNull(i) {
				return "", false
			}
			return plain.Value(i), true
		}
	case *array.Dictionary:
		of := texts(a.Dictionary())
		if of == nil {
			return nil
		}
		return func(i int) (string, bool) {
			if a.IsNull(i) {
				return "", false
			}
			return of(a.GetValueIndex(i))
		}
	}
	return nil
}
