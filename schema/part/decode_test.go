package part_test

import (
	"bytes"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/schema/column"
	"betaloom/schema/part"
	"betaloom/schema/part/parttest"
)

// forge writes rows as a part, whatever they say.
func forge(t testing.TB, p *schema.Physics, tile string, change func(b *column.Batch, at map[string]int)) []byte {
	t.Helper()
	source := tileOf(2, 12, 1)
	name, data := partOf(t, source)
	b := column.NewBatch(column.Part(p), nil, 0)
	if err := part.Read(p, name, source.Points(), data, b); err != nil {
		t.Fatal(err)
	}
	change(b, column.Index(b.Columns))
	var out bytes.Buffer
	w, err := column.NewWriter(&out, b.Columns, column.Options{Meta: map[string]string{"betaloom.tile": tile}})
	if err != nil {
		t.Fatal(err)
	}
	if err := w.Write(b); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

func TestDecodeProvesThePart(t *testing.T) {
	p := parttest.Physics()
	points := tileOf(2, 12, 1).Points()
	for _, c := range []struct {
		name, tile string
		change     func(b *column.Batch, at map[string]int)
		says       string
	}{
		{"whole", "x", func(*column.Batch, map[string]int) {}, ""},
		{"another tile", "y", func(*column.Batch, map[string]int) {}, `expected that of "x"`},
		{"a point is missing at the end", "x", func(b *column.Batch, _ map[string]int) { b.Grow(b.Rows - 1) }, "found 23 points, expected 24"},
		{"a point is missing inside", "x", func(b *column.Batch, at map[string]int) {
			for row := 1; row < b.Rows; row++ {
				b.Vectors[at["local"]].Ints[row]++
			}
		}, "found the point 2, expected 1"},
		{"a point without a number", "x", func(b *column.Batch, at map[string]int) { b.Vectors[at["local"]].Ints[3] = column.MissingInt }, "row 3"},
		{"a mode is missing", "x", func(b *column.Batch, at map[string]int) { b.Vectors[at["mode"]].Ints[1] = 1 }, "found the mode 1, expected 0"},
		{"no-mode with a mode", "x", func(b *column.Batch, at map[string]int) { b.Vectors[at["mode"]].Ints[0] = 0 }, "state no-mode"},
		{"an unknown state", "x", func(b *column.Batch, at map[string]int) { b.Vectors[at["state"]].Codes[5] = b.Texts.Code("perhaps") }, `"perhaps"`},
		{"too many rows", "x", func(b *column.Batch, _ map[string]int) { b.Grow(100) }, "expected 24 to 48"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := part.Decode(&p, "x", points, forge(t, &p, c.tile, c.change))
			switch {
			case c.says == "" && err != nil:
				t.Errorf("found %v, expected none", err)
			case c.says != "" && (err == nil || !strings.Contains(err.Error(), c.says)):
				t.Errorf("found %v, expected an error with %q", err, c.says)
			}
		})
	}
	t.Run("another physics", func(t *testing.T) {
		other := parttest.Physics()
		other.Parameters[1].Name = "width"
		_, err := part.Decode(&other, "x", points, forge(t, &p, "x", func(*column.Batch, map[string]int) {}))
		if err == nil || !strings.Contains(err.Error(), `found "height_m"`) {
			t.Errorf("found %v", err)
		}
	})
}

// FuzzDecode finds no bytes that panic, hang or decode to more than a tile may hold.
func FuzzDecode(f *testing.F) {
	p := parttest.Physics()
	points := tileOf(2, 12, 1).Points()
	whole := forge(f, &p, "x", func(*column.Batch, map[string]int) {})
	f.Add(whole)
	f.Add(whole[:len(whole)/2])
	f.Add([]byte("PAR1\x00\x00\x00\x00PAR1"))
	f.Add(forge(f, &p, "x", func(b *column.Batch, at map[string]int) {
		for row := range b.Rows {
			b.Vectors[at["reason"]].Codes[row] = b.Texts.Code(strings.Repeat("z", row))
		}
	}))
	f.Fuzz(func(t *testing.T, b []byte) {
		rec, err := part.Decode(&p, "x", points, b)
		if err != nil {
			return
		}
		defer rec.Release()
		if rec.NumRows() < int64(points) || rec.NumRows() > int64(points*p.Modes) {
			t.Errorf("found %d rows of %d points", rec.NumRows(), points)
		}
	})
}
