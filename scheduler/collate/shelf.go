package collate

import (
	"math"
	"slices"

	"betaloom/schema"
	"betaloom/schema/column"
)

// memoryWords is how much of a band waits in memory: 16 MiB.
const memoryWords = 2 << 20

// knownTexts bounds the texts that are kept in memory over a whole Run;
// others, such as reasons that name a number, are shelved with their rows.
const knownTexts = 1 << 14

// shelf keeps the rows of a band so that any stretch of them can be
// read in little time, in memory or, beyond its limit, in a file.
//
// A row is words of 64 bits, one for each column that varies in its tile. A
// tile stands as the starts of its points' rows (one word a point and one more), then its
// rows.
type shelf struct {
	columns []column.Column // of a part
	mode    int             // the column mode
	keep    []bool          // columns that a table wants
	texts   *column.Texts
	known   int // the most texts that are kept
	store   words
	base    int // the first tile of the band
	tiles   []shelved
	room    []uint64
	codes   []uint64 // words of a tile's texts
	got     stretch
	rooms   [2][]uint64 // for what is read of a file
}

// shelved is where a tile stands.
type shelved struct {
	at     int64 // word of its starts
	rows   int64 // word of its rows
	width  int   // words of a row
	fields []field
}

// field is one column of a tile: a word of each row, or one value for all.
type field struct {
	offset int // -1: constant
	value  uint64
}

func newShelf(p *schema.Physics, path string, limit int) *shelf {
	s := &shelf{columns: column.Part(p), texts: column.NewTexts(), known: knownTexts, store: words{path: path, limit: limit}}
	at := column.Index(s.columns)
	s.mode = at["mode"]
	s.keep = make([]bool, len(s.columns))
	for _, c := range slices.Concat(column.Points(p), column.Modes(p)) {
		if i, ok := at[c.Name]; ok {
			s.keep[i] = true
		}
	}
	return s
}

// reset empties the shelf for the next band.
func (s *shelf) reset() {
	s.store.reset()
	s.tiles = s.tiles[:0]
}

func (s *shelf) close() { s.store.close() }

// put shelves the tile that follows the last one.
func (s *shelf) put(tile int, b *column.Batch) error {
	if len(s.tiles) == 0 {
		s.base = tile
	}
	s.codes = append(s.codes[:0], make([]uint64, b.Texts.Len())...)
	t := shelved{fields: make([]field, len(s.columns))}
	for i := range s.columns {
		t.fields[i].offset = -1
		if s.keep[i] && !constant(b, i) {
			t.fields[i].offset = t.width
			t.width++
		}
	}
	s.room = s.room[:0]
	s.starts(b)
	starts := int64(len(s.room))
	s.room = append(s.room, make([]uint64, b.Rows*t.width)...)
	if err := s.fill(b, &t, s.room[starts:]); err != nil {
		return err
	}
	at, err := s.store.append(s.room)
	if err != nil {
		return err
	}
	t.at, t.rows = at, at+starts
	s.tiles = append(s.tiles, t)
	return nil
}

// starts appends the row at which each point begins, and the end.
func (s *shelf) starts(b *column.Batch) {
	local := b.Vectors[0].Ints
	for row, point := range local {
		if row == 0 || point != local[row-1] {
			s.room = append(s.room, uint64(row))
		}
	}
	s.room = append(s.room, uint64(b.Rows))
}

// constant reports whether a column has one value in all rows.
func constant(b *column.Batch, i int) bool {
	v := &b.Vectors[i]
	switch b.Columns[i].Type {
	case column.Float64:
		return same(v.Floats, func(a, b float64) bool { return math.Float64bits(a) == math.Float64bits(b) })
	case column.String:
		return same(v.Codes, func(a, b uint32) bool { return a == b })
	}
	return same(v.Ints, func(a, b int64) bool { return a == b })
}

func same[T any](values []T, equal func(a, b T) bool) bool {
	for _, v := range values {
		if !equal(v, values[0]) {
			return false
		}
	}
	return true
}

// fill writes the rows of a tile to dst and its constants to t.
func (s *shelf) fill(b *column.Batch, t *shelved, dst []uint64) error {
	for i := range s.columns {
		f := &t.fields[i]
		if !s.keep[i] || b.Rows == 0 {
			continue
		}
		if f.offset < 0 {
			var one [1]uint64
			if err := s.words(b, i, one[:], 1); err != nil {
				return err
			}
			f.value = one[0]
			continue
		}
		if err := s.words(b, i, dst[f.offset:], t.width); err != nil {
			return err
		}
	}
	return nil
}

// words writes a column to dst, stride words apart, as far as dst reaches.
func (s *shelf) words(b *column.Batch, i int, dst []uint64, stride int) error {
	v := &b.Vectors[i]
	rows := min(b.Rows, (len(dst)+stride-1)/stride)
	switch b.Columns[i].Type {
	case column.Float64:
		for row, x := range v.Floats[:rows] {
			dst[row*stride] = math.Float64bits(x)
		}
	case column.String:
		for row, code := range v.Codes[:rows] {
			w, err := s.text(b.Texts, code)
			if err != nil {
				return err
			}
			dst[row*stride] = w
		}
	default:
		for row, x := range v.Ints[:rows] {
			dst[row*stride] = uint64(x)
		}
	}
	return nil
}

// A text is a word: its code, or shelvedText with where it stands and its length.
const (
	shelvedText = 1 << 63
	lengthBits  = 26
)

// text gives the word of a text of the tile that is being shelved.
func (s *shelf) text(of *column.Texts, code uint32) (uint64, error) {
	if code == 0 || s.codes[code] != 0 {
		return s.codes[code], nil
	}
	text := of.Text(code)
	known, ok := s.texts.Known(text)
	if !ok && s.texts.Len() >= s.known {
		at, err := s.store.append(packText(text))
		s.codes[code] = shelvedText | uint64(at)<<lengthBits | uint64(len(text))
		return s.codes[code], err
	}
	if !ok {
		known = s.texts.Code(text)
	}
	s.codes[code] = uint64(known)
	return s.codes[code], nil
}

// textOf gives the text of a word.
func (s *shelf) textOf(w uint64) (string, error) {
	if w&shelvedText == 0 {
		return s.texts.Text(uint32(w)), nil
	}
	n := int(w & (1<<lengthBits - 1))
	packed, err := s.store.read(int64(w&^shelvedText>>lengthBits), (n+7)/8, nil)
	if err != nil {
		return "", err
	}
	return unpackText(packed, n), nil
}
