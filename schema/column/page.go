package column

import (
	"encoding/binary"
	"fmt"

	"github.com/klauspost/compress/zstd"
)

// maxPage is the largest page that is read; a Writer's pages hold 1 MiB and
// at most one batch of texts more.
const maxPage = 32 << 20

// maxPageRows bounds the rows of a page: one of a column without values holds
// its whole row group.
const maxPageRows = 4 << 20

// The kinds and encodings of page that a Writer makes.
const (
	pageData       = 0
	pageDictionary = 2

	encodingPlain           = 0
	encodingPlainDictionary = 2
	encodingRLEDictionary   = 8
)

// page is the head of a page and, once read, its bytes.
type page struct {
	kind, encoding   int
	values           int // rows of a data page, entries of a dictionary
	plain, squeezed  int // bytes, and bytes in the file
	levels, contents []byte
}

// head reads a page's head.
//
// Source: parquet.thrift of the Apache Parquet format, PageHeader.
func (c *compact) head() (p page, err error) {
	p.kind, p.values = -1, -1
	ints := map[int]*int{1: &p.kind, 2: &p.plain, 3: &p.squeezed}
	err = c.structure(0, func(id int, kind byte) (bool, error) {
		if kind == thriftStruct && (id == 5 || id == 7) {
			return true, c.structure(1, c.into(map[int]*int{1: &p.values, 2: &p.encoding}))
		}
		return c.into(ints)(id, kind)
	})
	return p, err
}

// into stores the 32-bit fields with the given ids.
func (c *compact) into(fields map[int]*int) func(id int, kind byte) (bool, error) {
	return func(id int, kind byte) (bool, error) {
		dst, ok := fields[id]
		if !ok || kind != thriftI32 {
			return false, nil
		}
		n, err := c.integer()
		*dst = int(n)
		return true, err
	}
}

// check bounds what a head claims: at most rows values and left bytes.
func (p *page) check(rows, left int) error {
	switch {
	case p.kind != pageData && p.kind != pageDictionary:
		return fmt.Errorf("found a page of kind %d, expected %d or %d", p.kind, pageData, pageDictionary)
	case p.values < 0 || p.values > min(rows, maxPageRows):
		return fmt.Errorf("found a page of %d values, expected 0 to %d", p.values, min(rows, maxPageRows))
	case p.squeezed < 0 || p.squeezed > left:
		return fmt.Errorf("found a page of %d bytes, expected 0 to %d", p.squeezed, left)
	case p.plain < 0 || p.plain > maxPage:
		return fmt.Errorf("found a page of %d bytes decompressed, expected 0 to %d", p.plain, maxPage)
	}
	return nil
}

// read decompresses a page from b into room, which it may replace.
func (p *page) read(d *zstd.Decoder, b, room []byte) ([]byte, error) {
	room = sized(room[:0], p.plain)
	plain, err := d.DecodeAll(b[:p.squeezed], room[:0:p.plain])
	if err != nil {
		return room, fmt.Errorf("page: %w", err)
	}
	if len(plain) != p.plain {
		return room, fmt.Errorf("page: found %d bytes decompressed, expected %d", len(plain), p.plain)
	}
	p.contents = plain
	if p.kind == pageDictionary {
		return room, nil
	}
	if len(plain) < 4 {
		return room, fmt.Errorf("page: found %d bytes, expected its levels", len(plain))
	}
	n := binary.LittleEndian.Uint32(plain)
	if uint64(n) > uint64(len(plain)-4) {
		return room, fmt.Errorf("page: found levels of %d bytes in %d", n, len(plain)-4)
	}
	p.levels, p.contents = plain[4:4+n], plain[4+n:]
	return room, nil
}

// hybrid reads len(dst) numbers of some bits each, in Parquet's mix of runs
// and packed groups of eight.
//
// Source: Encodings.md of the Apache Parquet format, RLE = 3.
func hybrid(dst []uint32, bits int, b []byte) error {
	c := compact{b: b}
	for n := 0; n < len(dst); {
		head, err := c.varint()
		if err != nil {
			return err
		}
		count := head >> 1
		if count == 0 || count > uint64(len(dst)) {
			return fmt.Errorf("found a run of %d values, expected 1 to %d", count, len(dst))
		}
		if head&1 == 0 {
			n, err = c.run(dst, n, int(count), bits)
		} else {
			n, err = c.packed(dst, n, int(count), bits)
		}
		if err != nil {
			return err
		}
	}
	return nil
}

func (c *compact) run(dst []uint32, n, count, bits int) (int, error) {
	var v uint32
	for i := range (bits + 7) / 8 {
		b, err := c.byte()
		if err != nil {
			return n, err
		}
		v |= uint32(b) << (8 * i)
	}
	end := min(n+count, len(dst))
	for ; n < end; n++ {
		dst[n] = v
	}
	return n, nil
}

func (c *compact) packed(dst []uint32, n, groups, bits int) (int, error) {
	if bits == 0 {
		return c.run(dst, n, 8*groups, 0)
	}
	from := c.at
	if err := c.advance(uint64(groups * bits)); err != nil {
		return n, err
	}
	var word uint64
	have := 0
	for _, b := range c.b[from:c.at] {
		word |= uint64(b) << have
		for have += 8; have >= bits && n < len(dst); have -= bits {
			dst[n] = uint32(word & (1<<bits - 1))
			word >>= bits
			n++
		}
		if have >= bits {
			break
		}
	}
	return n, nil
}
