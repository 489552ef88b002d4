package column_test

import (
	"bytes"
	"encoding/binary"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"strings"
	"testing"

	"github.com/parquet-go/parquet-go"

	"betaloom/schema/column"
)

var everyType = []column.Column{
	{Name: "i64", Description: "a long", Type: column.Int64},
	{Name: "i32", Description: "a short", Type: column.Int32},
	{Name: "f64", Unit: "ps^2/km", Description: "a number", Type: column.Float64},
	{Name: "none", Unit: "m", Description: "always missing", Type: column.Float64},
	{Name: "few", Description: "a text of few", Type: column.String},
	{Name: "many", Description: "a text of its own", Type: column.String},
	{Name: "blob", Description: "bytes", Type: column.Bytes},
}

// sample fills rows of every type; step decides how often a value is missing.
// The texts of many outgrow a dictionary page of 1 MiB.
func sample(rows, step int) *column.Batch {
	b := column.NewBatch(everyType, nil, rows)
	for r := range rows {
		b.Vectors[0].Ints[r] = int64(r) << 33
		b.Vectors[1].Ints[r] = int64(-r)
		b.Vectors[2].Floats[r] = math.Sin(float64(r)) * 1e-30
		b.Vectors[3].Floats[r] = math.NaN()
		b.Vectors[4].Codes[r] = b.Texts.Code([]string{"TE0", "TM0", ""}[r%3])
		b.Vectors[5].Codes[r] = b.Texts.Code(fmt.Sprintf("point %d: %s", r, strings.Repeat("x", r%300)))
		binary.LittleEndian.PutUint64(b.Vectors[6].Blobs[r*column.SignatureBytes:], uint64(r+1))
		if r%step == step-1 {
			b.Vectors[0].Ints[r], b.Vectors[1].Ints[r] = column.MissingInt, column.MissingInt
			b.Vectors[2].Floats[r] = []float64{math.NaN(), math.Inf(1), math.Inf(-1)}[r%3]
			b.Vectors[5].Codes[r] = 0
			clear(b.Vectors[6].Blobs[r*column.SignatureBytes : (r+1)*column.SignatureBytes])
		}
	}
	return b
}

func write(t testing.TB, o column.Options, batches ...*column.Batch) []byte {
	t.Helper()
	var out bytes.Buffer
	w, err := column.NewWriter(&out, everyType, o)
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

// want gives a value of a batch as the independent reader should.
func want(b *column.Batch, i, row int) parquet.Value {
	v := &b.Vectors[i]
	switch b.Columns[i].Type {
	case column.Float64:
		if x, ok := b.Float(i, row); ok {
			return parquet.ValueOf(x)
		}
	case column.Int64:
		if v.Ints[row] != column.MissingInt {
			return parquet.ValueOf(v.Ints[row])
		}
	case column.Int32:
		if v.Ints[row] != column.MissingInt {
			return parquet.ValueOf(int32(v.Ints[row]))
		}
	case column.String:
		if v.Codes[row] != 0 {
			return parquet.ValueOf(b.Text(i, row))
		}
	case column.Bytes:
		blob := v.Blobs[row*column.SignatureBytes : (row+1)*column.SignatureBytes]
		if !bytes.Equal(blob, make([]byte, column.SignatureBytes)) {
			return parquet.FixedLenByteArrayValue(blob)
		}
	}
	return parquet.Value{}
}

// Independent reader: parquet-go, which shares no code with the writer.
func TestIndependentReaderFindsEveryValue(t *testing.T) {
	for _, statistics := range []bool{false, true} {
		t.Run(fmt.Sprintf("statistics=%v", statistics), func(t *testing.T) {
			batches := []*column.Batch{sample(20000, 7), sample(1, 2), sample(5000, 1)}
			data := write(t, column.Options{Meta: map[string]string{"key": "value"}, Statistics: statistics}, batches...)
			f, err := parquet.OpenFile(bytes.NewReader(data), int64(len(data)))
			if err != nil {
				t.Fatal(err)
			}
			if v, ok := f.Lookup("key"); !ok || v != "value" {
				t.Errorf("metadata key: found %q", v)
			}
			groups := f.RowGroups()
			if len(groups) != len(batches) {
				t.Fatalf("found %d row groups, expected %d", len(groups), len(batches))
			}
			for g, b := range batches {
				compareGroup(t, groups[g], b)
			}
		})
	}
}

func compareGroup(t *testing.T, group parquet.RowGroup, b *column.Batch) {
	t.Helper()
	if group.NumRows() != int64(b.Rows) {
		t.Fatalf("found %d rows, expected %d", group.NumRows(), b.Rows)
	}
	rows := group.Rows()
	defer rows.Close()
	buffer := make([]parquet.Row, 100)
	for at := 0; at < b.Rows; {
		n, err := rows.ReadRows(buffer)
		if err != nil && err != io.EOF || n == 0 {
			t.Fatalf("row %d: %v", at, err)
		}
		for _, row := range buffer[:n] {
			for i := range b.Columns {
				w := want(b, i, at)
				if row[i].IsNull() != w.IsNull() || !w.IsNull() && !parquet.Equal(row[i], w) {
					t.Fatalf("row %d, column %s: found %v, expected %v", at, b.Columns[i].Name, row[i], w)
				}
			}
			at++
		}
	}
}

func TestIndependentReaderFindsUnits(t *testing.T) {
	data := write(t, column.Options{}, sample(3, 2))
	f, err := parquet.OpenFile(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		t.Fatal(err)
	}
	text, ok := f.Lookup(column.MetaColumns)
	if !ok {
		t.Fatalf("no key %s", column.MetaColumns)
	}
	var found []struct{ Name, Unit, Description string }
	if err := json.Unmarshal([]byte(text), &found); err != nil {
		t.Fatal(err)
	}
	if len(found) != len(everyType) {
		t.Fatalf("found %d columns, expected %d", len(found), len(everyType))
	}
	for i, c := range everyType {
		if found[i].Name != c.Name || found[i].Unit != c.Unit || found[i].Description != c.Description {
			t.Errorf("found %+v, expected %+v", found[i], c)
		}
		if leaf := f.Schema().Columns()[i]; leaf[0] != c.Name {
			t.Errorf("found the parquet column %v, expected %s", leaf, c.Name)
		}
	}
}

func TestScan(t *testing.T) {
	batches := []*column.Batch{sample(20000, 7), sample(1, 2), sample(5000, 1), sample(140000, 5)}
	data := write(t, column.Options{}, batches...)
	for _, step := range []int{1000, 4096, 1 << 20} {
		t.Run(fmt.Sprint(step), func(t *testing.T) {
			f, err := column.Open(bytes.NewReader(data), int64(len(data)))
			if err != nil {
				t.Fatal(err)
			}
			defer f.Close()
			picked := []int{5, 0, 3, 6, 2, 4, 1}
			var columns []column.Column
			for _, i := range picked {
				columns = append(columns, f.Columns[i])
			}
			s, err := f.Scan(picked)
			if err != nil {
				t.Fatal(err)
			}
			got := column.NewBatch(columns, nil, 0)
			for _, b := range batches {
				for at := 0; at < b.Rows; {
					n, err := s.Next(got, step)
					if err != nil || n == 0 {
						t.Fatalf("row %d: found %d rows and %v", at, n, err)
					}
					compareBatches(t, got, b, picked, at)
					at += n
				}
			}
			if n, err := s.Next(got, step); n != 0 || err != nil {
				t.Errorf("at the end: found %d rows and %v", n, err)
			}
		})
	}
}

func compareBatches(t *testing.T, got, b *column.Batch, picked []int, at int) {
	t.Helper()
	for place, i := range picked {
		for row := range got.Rows {
			if g, w := plain(got, place, row), plain(b, i, at+row); g != w {
				t.Fatalf("row %d, column %s: found %v, expected %v", at+row, b.Columns[i].Name, g, w)
			}
		}
	}
}

// plain gives a value as something that == compares; a missing float is NaN's text.
func plain(b *column.Batch, i, row int) any {
	v := &b.Vectors[i]
	switch b.Columns[i].Type {
	case column.Float64:
		if x, ok := b.Float(i, row); ok {
			return x
		}
		return "missing"
	case column.String:
		return b.Text(i, row)
	case column.Bytes:
		return string(v.Blobs[row*column.SignatureBytes : (row+1)*column.SignatureBytes])
	}
	return v.Ints[row]
}

func TestRecordHasTheBatch(t *testing.T) {
	b := sample(100, 3)
	s := column.Schema(everyType, nil)
	rec, err := b.Record(s)
	if err != nil {
		t.Fatal(err)
	}
	defer rec.Release()
	for i := range everyType {
		for row := range b.Rows {
			if rec.Column(i).IsNull(row) != want(b, i, row).IsNull() {
				t.Fatalf("column %s, row %d: found null %v", everyType[i].Name, row, rec.Column(i).IsNull(row))
			}
			w := want(b, i, row)
			if text := rec.Column(i).ValueStr(row); everyType[i].Type == column.String && !w.IsNull() && text != w.String() {
				t.Fatalf("column %s, row %d: found %q, expected %q", everyType[i].Name, row, text, w.String())
			}
		}
		unit, _ := s.Field(i).Metadata.GetValue("unit")
		if unit != everyType[i].Unit {
			t.Errorf("column %s: found the unit %q, expected %q", everyType[i].Name, unit, everyType[i].Unit)
		}
	}
}

func TestDamagedFilesAreErrors(t *testing.T) {
	data := write(t, column.Options{}, sample(2000, 7))
	read := func(b []byte) error {
		f, err := column.Open(bytes.NewReader(b), int64(len(b)))
		if err != nil {
			return err
		}
		defer f.Close()
		s, err := f.Scan([]int{0, 1, 2, 3, 4, 5, 6})
		if err != nil {
			return err
		}
		for batch := column.NewBatch(f.Columns, nil, 0); ; {
			if n, err := s.Next(batch, 1<<20); n == 0 || err != nil {
				return err
			}
		}
	}
	if err := read(data); err != nil {
		t.Fatalf("the undamaged file: %v", err)
	}
	t.Run("cut short", func(t *testing.T) {
		for n := 0; n < len(data); n += 997 {
			if read(data[:n]) == nil {
				t.Errorf("%d bytes of %d: no error", n, len(data))
			}
		}
	})
	t.Run("a page changed", func(t *testing.T) {
		found := 0
		for at := 4; at < len(data)/2; at += 331 {
			b := bytes.Clone(data)
			b[at] ^= 0x10
			if read(b) != nil {
				found++
			}
		}
		if tried := (len(data)/2 - 4 + 330) / 331; found < tried*9/10 {
			t.Errorf("found %d of %d changes, expected nine in ten: pages carry a checksum, some bits of their heads mean nothing", found, tried)
		}
	})
}
