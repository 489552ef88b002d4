package column

import (
	"errors"
	"fmt"
)

// The kinds of value in Thrift's compact protocol.
const (
	thriftTrue   = 1
	thriftFalse  = 2
	thriftByte   = 3
	thriftI16    = 4
	thriftI32    = 5
	thriftI64    = 6
	thriftDouble = 7
	thriftBinary = 8
	thriftList   = 9
	thriftSet    = 10
	thriftStruct = 12
)

// thriftDepth is deeper than any structure of a Parquet file.
const thriftDepth = 12

var errThrift = errors.New("damaged metadata")

// compact walks over bytes in Thrift's compact protocol, the encoding of
// Parquet's metadata. It never allocates, so that counts that a damaged
// file claims can be checked before a library believes them.
//
// Source: the protocol's specification, thrift-compact-protocol.md of Apache Thrift.
type compact struct {
	b  []byte
	at int
}

// structure walks over one structure. field is called at each field's value and
// says whether it has consumed it; nil skips them all.
func (c *compact) structure(depth int, field func(id int, kind byte) (bool, error)) error {
	if depth > thriftDepth {
		return fmt.Errorf("%w: nested deeper than %d", errThrift, thriftDepth)
	}
	for id := 0; ; {
		kind, err := c.fieldHeader(&id)
		if err != nil || kind == 0 {
			return err
		}
		taken := false
		if field != nil {
			if taken, err = field(id, kind); err != nil {
				return err
			}
		}
		if taken {
			continue
		}
		if err := c.skip(kind, depth); err != nil {
			return err
		}
	}
}

// fieldHeader reads a field's kind, 0 at the end of a structure, and moves id.
func (c *compact) fieldHeader(id *int) (byte, error) {
	head, err := c.byte()
	if err != nil || head == 0 {
		return 0, err
	}
	if delta := head >> 4; delta != 0 {
		*id += int(delta)
		return head & 15, nil
	}
	n, err := c.integer()
	*id = int(int16(n))
	return head & 15, err
}

func (c *compact) skip(kind byte, depth int) error {
	switch kind {
	case thriftTrue, thriftFalse:
		return nil
	case thriftByte:
		return c.advance(1)
	case thriftI16, thriftI32, thriftI64:
		_, err := c.varint()
		return err
	case thriftDouble:
		return c.advance(8)
	case thriftBinary:
		n, err := c.varint()
		if err != nil {
			return err
		}
		return c.advance(n)
	case thriftList, thriftSet:
		return c.skipList(depth)
	case thriftStruct:
		return c.structure(depth+1, nil)
	}
	return fmt.Errorf("%w: found the kind of value %d, expected one of Parquet's", errThrift, kind)
}

func (c *compact) skipList(depth int) error {
	if depth > thriftDepth {
		return fmt.Errorf("%w: nested deeper than %d", errThrift, thriftDepth)
	}
	head, err := c.byte()
	if err != nil {
		return err
	}
	n := uint64(head >> 4)
	if n == 15 {
		if n, err = c.varint(); err != nil {
			return err
		}
	}
	if left := len(c.b) - c.at; n > uint64(left) {
		return fmt.Errorf("%w: a list of %d values in %d bytes", errThrift, n, left)
	}
	kind := head & 15
	if kind == thriftTrue || kind == thriftFalse {
		return c.advance(n)
	}
	for range n {
		if err := c.skip(kind, depth+1); err != nil {
			return err
		}
	}
	return nil
}

// integer reads a signed (zigzag) number.
func (c *compact) integer() (int64, error) {
	u, err := c.varint()
	return int64(u>>1) ^ -int64(u&1), err
}

func (c *compact) varint() (uint64, error) {
	var v uint64
	for shift := 0; shift < 64; shift += 7 {
		b, err := c.byte()
		if err != nil {
			return 0, err
		}
		v |= uint64(b&127) << shift
		if b < 128 {
			return v, nil
		}
	}
	return 0, fmt.Errorf("%w: a number longer than 64 bits", errThrift)
}

func (c *compact) byte() (byte, error) {
	if c.at >= len(c.b) {
		return 0, fmt.Errorf("%w: it ends early", errThrift)
	}
	c.at++
	return c.b[c.at-1], nil
}

func (c *compact) advance(n uint64) error {
	if left := len(c.b) - c.at; n > uint64(left) {
		return fmt.Errorf("%w: it ends early", errThrift)
	}
	c.at += int(n)
	return nil
}
