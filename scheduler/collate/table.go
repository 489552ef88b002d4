package collate

import (
	"math"

	"betaloom/schema/column"
)

// rowGroup is the rows of a row group.
const rowGroup = 128 << 10

// table is one of the tables while it is written.
type table struct {
	out    *output
	writer *column.Writer
	shelf  *shelf
	source []int         // column of a part for each of the table's; -1: the point
	batch  *column.Batch // the next row group, or as much as the table can have; n rows are filled
	n      int
	codes  []uint32                    // codes in the batch for those of the shelf
	also   func(b *column.Batch) error // sees each row group
}

// createTable begins a table of at most so many rows.
func createTable(dir, name string, columns []column.Column, rows int, s *shelf, meta map[string]string) (*table, error) {
	out, err := create(dir, name)
	if err != nil {
		return nil, err
	}
	w, err := column.NewWriter(out.buffer, columns, column.Options{Meta: meta, Statistics: true})
	if err != nil {
		out.discard()
		return nil, err
	}
	t := &table{out: out, writer: w, shelf: s, batch: column.NewBatch(columns, nil, min(rows, rowGroup))}
	at := column.Index(s.columns)
	for _, c := range columns {
		i, ok := at[c.Name]
		if !ok {
			i = -1
		}
		t.source = append(t.source, i)
	}
	return t, nil
}

// append copies rows of a stretch.
func (t *table) append(g *stretch, places []place) error {
	for len(places) > 0 {
		k := min(len(places), t.batch.Rows-t.n)
		for i := range t.source {
			if err := t.copy(g, i, places[:k]); err != nil {
				return err
			}
		}
		t.n += k
		places = places[k:]
		if t.n == t.batch.Rows {
			if err := t.flush(); err != nil {
				return err
			}
		}
	}
	return nil
}

// copy fills column i of the next rows.
func (t *table) copy(g *stretch, i int, places []place) error {
	v, from := &t.batch.Vectors[i], t.source[i]
	if from < 0 {
		for j, p := range places {
			v.Ints[t.n+j] = p.point
		}
		return nil
	}
	f := g.tile.fields[from]
	switch t.batch.Columns[i].Type {
	case column.Float64:
		dst := v.Floats[t.n : t.n+len(places)]
		if f.offset < 0 {
			fillWith(dst, math.Float64frombits(f.value))
			return nil
		}
		for j, p := range places {
			dst[j] = math.Float64frombits(g.rows[p.row*g.tile.width+f.offset])
		}
	case column.String:
		return t.texts(v.Codes[t.n:t.n+len(places)], g, from, places)
	default:
		dst := v.Ints[t.n : t.n+len(places)]
		for j, p := range places {
			dst[j] = int64(g.word(from, p.row))
		}
	}
	return nil
}

func fillWith(dst []float64, v float64) {
	for j := range dst {
		dst[j] = v
	}
}

func (t *table) texts(dst []uint32, g *stretch, from int, places []place) error {
	for j, p := range places {
		w := g.word(from, p.row)
		if w < uint64(len(t.codes)) && (w == 0 || t.codes[w] != 0) {
			dst[j] = t.codes[w]
			continue
		}
		text, err := t.shelf.textOf(w)
		if err != nil {
			return err
		}
		dst[j] = t.batch.Texts.Code(text)
		if w&shelvedText == 0 {
			t.codes = append(t.codes, make([]uint32, max(0, t.shelf.texts.Len()-len(t.codes)))...)
			t.codes[w] = dst[j]
		}
	}
	return nil
}

// flush writes the batch as a row group.
func (t *table) flush() error {
	if t.n == 0 {
		return nil
	}
	room := t.batch.Rows
	t.batch.Grow(t.n)
	if err := t.writer.Write(t.batch); err != nil {
		return err
	}
	if err := t.also(t.batch); err != nil {
		return err
	}
	t.batch.Grow(room)
	t.batch.Texts.Truncate(1)
	t.codes = t.codes[:0]
	t.n = 0
	return nil
}

// finish writes what is left and makes the file durable.
func (t *table) finish() error {
	if err := t.flush(); err != nil {
		return err
	}
	if err := t.writer.Close(); err != nil {
		return err
	}
	return t.out.sync()
}

func (t *table) publish() error { return t.out.publish() }

func (t *table) discard() { t.out.discard() }
