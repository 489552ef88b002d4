package column

import (
	"math/rand/v2"
	"slices"
	"testing"
)

// Source of the examples: Encodings.md of the Apache Parquet format: the numbers 0 to
// 7 in three bits are packed as 10001000 11000110 11111010; a run is its length times
// two and its value in whole bytes.
func TestHybrid(t *testing.T) {
	for _, c := range []struct {
		name string
		bits int
		b    []byte
		want []uint32
	}{
		{"packed", 3, []byte{1<<1 | 1, 0b10001000, 0b11000110, 0b11111010}, []uint32{0, 1, 2, 3, 4, 5, 6, 7}},
		{"packed, the last group in part", 3, []byte{1<<1 | 1, 0b10001000, 0b11000110, 0b11111010}, []uint32{0, 1, 2, 3, 4}},
		{"run", 9, []byte{5 << 1, 0x2c, 0x01}, []uint32{300, 300, 300, 300, 300}},
		{"run, then packed", 1, []byte{3 << 1, 1, 1<<1 | 1, 0b00000101}, []uint32{1, 1, 1, 1, 0, 1, 0, 0}},
		{"a dictionary of one", 0, []byte{4 << 1}, []uint32{0, 0, 0, 0}},
		{"packed in no bits", 0, []byte{1<<1 | 1}, []uint32{0, 0, 0, 0}},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := make([]uint32, len(c.want))
			if err := hybrid(got, c.bits, c.b); err != nil || !slices.Equal(got, c.want) {
				t.Errorf("found %v and %v, expected %v", got, err, c.want)
			}
		})
	}
	for _, c := range []struct {
		name string
		bits int
		b    []byte
	}{
		{"nothing", 1, nil},
		{"a run of none", 1, []byte{0, 1}},
		{"a group of none", 1, []byte{1, 1}},
		{"a run without a value", 9, []byte{5 << 1, 1}},
		{"a long run", 1, []byte{0xfe, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0x7f, 1}},
		{"many groups", 32, []byte{0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0x7f, 1}},
		{"an endless number", 1, []byte{0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff}},
	} {
		t.Run(c.name, func(t *testing.T) {
			if err := hybrid(make([]uint32, 5), c.bits, c.b); err == nil {
				t.Error("found no error")
			}
		})
	}
}

// FuzzPage finds no page, past its checksum, that panics, hangs or fills rows
// that it does not have.
func FuzzPage(f *testing.F) {
	r := rand.New(rand.NewPCG(7, 8))
	for kind := range 5 {
		b := make([]byte, 40)
		for i := range b {
			b[i] = byte(r.Uint32())
		}
		f.Add(kind, 0, 8, []byte{8 << 1, 1}, b)
		f.Add(kind, 8, 8, []byte{3, 0xff}, []byte{1, 8 << 1, 0})
	}
	f.Fuzz(func(t *testing.T, kind, encoding, values int, levels, contents []byte) {
		types := []Type{Int64, Int32, Float64, String, Bytes}
		c := Column{Name: "x", Type: types[((kind%5)+5)%5]}
		values = ((values % 100) + 100) % 100
		cur := cursor{f: &File{Columns: []Column{c}}, left: 100, dictionary: []uint32{0, 1}}
		texts := NewTexts()
		p := page{encoding: encoding, values: values, levels: levels, contents: contents}
		if cur.readData(&p, texts) != nil {
			return
		}
		b := NewBatch(cur.f.Columns, texts, values)
		if err := cur.fill(&b.Vectors[0], texts, values); err == nil && cur.at != values {
			t.Errorf("found %d rows, expected %d", cur.at, values)
		}
	})
}

// FuzzThrift finds no metadata that panics or that the walk leaves before its end.
func FuzzThrift(f *testing.F) {
	f.Add([]byte{0x15, 0, 0x15, 2, 0x15, 2, 0x2c, 0x15, 2, 0x15, 0, 0, 0})
	f.Add([]byte{0x19, 0xf5, 0xff, 0xff, 0x03, 0})
	f.Fuzz(func(t *testing.T, b []byte) {
		c := compact{b: b}
		if p, err := c.head(); err == nil && p.check(10, 10) == nil && (p.values > 10 || p.squeezed > 10 || p.plain > maxPage) {
			t.Errorf("found %+v", p)
		}
		if c.at > len(b) {
			t.Errorf("found the walk at %d of %d bytes", c.at, len(b))
		}
	})
}
