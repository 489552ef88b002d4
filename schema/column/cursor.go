package column

import (
	"encoding/binary"
	"fmt"
	"math"
)

// cursor is the place in one column: page and row.
type cursor struct {
	f           *File
	column      int
	left        int    // rows of the row group that no page has brought yet
	bytes, room []byte // of the row group's column; of the decompressed page
	pages       compact
	dictionary  []uint32 // codes
	plain       []byte   // values of the page that are not read yet
	present     []uint32 // 1 or 0 for each row of the page
	codes       []uint32 // of the present rows of a text page
	at, coded   int      // rows and texts of the page that are read
}

// fill reads n rows into v.
func (c *cursor) fill(v *Vector, texts *Texts, n int) error {
	for done := 0; done < n; {
		if c.at == len(c.present) {
			if err := c.next(texts); err != nil {
				return err
			}
			continue
		}
		rows := min(n-done, len(c.present)-c.at)
		if err := c.copy(v, done, rows); err != nil {
			return err
		}
		c.at += rows
		done += rows
	}
	return nil
}

// begin goes to a row group of some rows.
func (c *cursor) begin(group, rows int) (err error) {
	c.bytes, err = c.f.chunk(group, c.column, c.bytes)
	c.left, c.pages, c.dictionary = rows, compact{b: c.bytes}, c.dictionary[:0]
	c.present, c.at = c.present[:0], 0
	return err
}

// next reads the next page.
func (c *cursor) next(texts *Texts) error {
	p, err := c.pages.head()
	if err != nil {
		return err
	}
	if err := p.check(c.left, len(c.bytes)-c.pages.at); err != nil {
		return err
	}
	c.room, err = p.read(c.f.zstd, c.bytes[c.pages.at:], c.room)
	if err != nil {
		return err
	}
	c.pages.at += p.squeezed
	if p.kind == pageDictionary {
		return c.readDictionary(&p, texts)
	}
	return c.readData(&p, texts)
}

// readData makes p the page that rows are copied from.
func (c *cursor) readData(p *page, texts *Texts) error {
	c.present, c.at, c.coded = sized(c.present[:0], p.values), 0, 0
	if err := hybrid(c.present, 1, p.levels); err != nil {
		c.present = c.present[:0]
		return fmt.Errorf("levels: %w", err)
	}
	c.left -= p.values
	there := 0
	for _, v := range c.present {
		there += int(v)
	}
	c.plain = p.contents
	if c.f.Columns[c.column].Type == String {
		return c.readTexts(p, texts, there)
	}
	if want := there * c.width(); p.encoding != encodingPlain || len(c.plain) != want {
		return fmt.Errorf("found %d bytes of values in encoding %d, expected %d in encoding %d", len(c.plain), p.encoding, want, encodingPlain)
	}
	return nil
}

func (c *cursor) width() int {
	switch c.f.Columns[c.column].Type {
	case Int32:
		return 4
	case Bytes:
		return SignatureBytes
	}
	return 8
}

// readDictionary numbers the texts of a dictionary.
func (c *cursor) readDictionary(p *page, texts *Texts) (err error) {
	if c.f.Columns[c.column].Type != String || p.encoding != encodingPlain && p.encoding != encodingPlainDictionary {
		return fmt.Errorf("found a dictionary in encoding %d, expected one of texts in encoding %d", p.encoding, encodingPlain)
	}
	c.dictionary, err = plainTexts(c.dictionary[:0], texts, p.contents, p.values)
	return err
}

// readTexts numbers the texts of a page that are there.
func (c *cursor) readTexts(p *page, texts *Texts, there int) (err error) {
	if p.encoding == encodingPlain {
		c.codes, err = plainTexts(c.codes[:0], texts, p.contents, there)
		return err
	}
	c.codes = sized(c.codes[:0], there)
	if there == 0 {
		return nil
	}
	if p.encoding != encodingRLEDictionary && p.encoding != encodingPlainDictionary || len(p.contents) == 0 || p.contents[0] > 32 {
		return fmt.Errorf("found %d bytes of texts in encoding %d, expected dictionary indices", len(p.contents), p.encoding)
	}
	if err := hybrid(c.codes, int(p.contents[0]), p.contents[1:]); err != nil {
		return fmt.Errorf("dictionary indices: %w", err)
	}
	for i, k := range c.codes {
		if int(k) >= len(c.dictionary) {
			return fmt.Errorf("found the dictionary index %d, expected 0 to %d", k, len(c.dictionary)-1)
		}
		c.codes[i] = c.dictionary[k]
	}
	return nil
}

// plainTexts numbers n texts, each after its length.
func plainTexts(codes []uint32, texts *Texts, b []byte, n int) ([]uint32, error) {
	for range n {
		if len(b) < 4 || uint64(binary.LittleEndian.Uint32(b)) > uint64(len(b)-4) {
			return codes, fmt.Errorf("found texts that end early")
		}
		end := 4 + binary.LittleEndian.Uint32(b)
		codes = append(codes, texts.CodeOf(b[4:end]))
		b = b[end:]
	}
	return codes, nil
}

// copy moves rows of the page to v from row done on.
func (c *cursor) copy(v *Vector, done, rows int) error {
	present := c.present[c.at : c.at+rows]
	switch c.f.Columns[c.column].Type {
	case Float64:
		return c.floats(v.Floats[done:done+rows], present)
	case Int64, Int32:
		c.integers(v.Ints[done:done+rows], present)
	case String:
		for i, there := range present {
			code := uint32(0)
			if there == 1 {
				code = c.codes[c.coded]
				c.coded++
			}
			v.Codes[done+i] = code
		}
	case Bytes:
		for i, there := range present {
			dst := blob(v.Blobs, done+i)
			clear(dst)
			if there == 1 {
				c.plain = c.plain[copy(dst, c.plain[:SignatureBytes]):]
			}
		}
	}
	return nil
}

func (c *cursor) floats(dst []float64, present []uint32) error {
	b := c.plain
	for i, there := range present {
		if there == 0 {
			dst[i] = math.NaN()
			continue
		}
		v := math.Float64frombits(binary.LittleEndian.Uint64(b))
		if !finite(v) {
			return fmt.Errorf("found %v, expected finite numbers and nulls", v)
		}
		dst[i] = v
		b = b[8:]
	}
	c.plain = b
	return nil
}

func (c *cursor) integers(dst []int64, present []uint32) {
	long := c.f.Columns[c.column].Type == Int64
	for i, there := range present {
		switch {
		case there == 0:
			dst[i] = MissingInt
		case long:
			dst[i] = int64(binary.LittleEndian.Uint64(c.plain))
			c.plain = c.plain[8:]
		default:
			dst[i] = int64(int32(binary.LittleEndian.Uint32(c.plain)))
			c.plain = c.plain[4:]
		}
	}
}
