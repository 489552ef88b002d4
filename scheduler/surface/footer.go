package surface

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"io"

	flatbuffers "github.com/google/flatbuffers/go"
)

// The Arrow library trusts the lengths that a file states: a hostile footer can make
// it allocate or recurse without end. So the footer and each message are looked
// through first, by the field numbers of the format's definition (Apache
// Arrow, format/File.fbs, Schema.fbs and Message.fbs).

const (
	maxBatchNodes = 65536
	maxColumns    = 512
	maxMetadata   = 64 // key-value pairs of a field or the schema
)

// slot gives the vtable offset of a table's field by its number.
func slot(field int) flatbuffers.VOffsetT { return flatbuffers.VOffsetT(4 + 2*field) }

// fileBatch is where a record batch stands.
type fileBatch struct {
	offset int64
	meta   int32
	body   int64
}

// guarded turns a library's panic over bytes that make no sense into an
// error.
func guarded(f func() error) (err error) {
	defer func() {
		if p := recover(); p != nil {
			err = fmt.Errorf("damaged: %v", p)
		}
	}()
	return f()
}

var magic = []byte("ARROW1")

// inspectFooter checks the footer and lists the record batches.
func inspectFooter(r io.ReaderAt, size int64) (list []fileBatch, err error) {
	tail := make([]byte, 4+len(magic))
	if size < int64(2*len(magic)+4) {
		return nil, fmt.Errorf("found %d bytes, expected an Arrow file", size)
	}
	if _, err := r.ReadAt(tail, size-int64(len(tail))); err != nil {
		return nil, err
	}
	length := int64(binary.LittleEndian.Uint32(tail))
	if !bytes.Equal(tail[4:], magic) || length <= 4 || length > size-int64(2*len(magic)+4) {
		return nil, fmt.Errorf("found no Arrow footer at its end, expected a complete Arrow file")
	}
	footer := make([]byte, length)
	start := size - int64(len(tail)) - length
	if _, err := r.ReadAt(footer, start); err != nil {
		return nil, err
	}
	err = guarded(func() error {
		root := table(footer, flatbuffers.GetUOffsetT(footer))
		if err := inspectSchema(child(root, 1)); err != nil {
			return err
		}
		if n := vectorLen(root, 2); n != 0 {
			return fmt.Errorf("found %d dictionaries, expected none", n)
		}
		list, err = inspectBlocks(root, start)
		return err
	})
	return list, err
}

func table(b []byte, at flatbuffers.UOffsetT) *flatbuffers.Table {
	return &flatbuffers.Table{Bytes: b, Pos: at}
}

// child follows a table's field that is a table; nil where it is absent.
func child(t *flatbuffers.Table, field int) *flatbuffers.Table {
	o := flatbuffers.UOffsetT(t.Offset(slot(field)))
	if o == 0 {
		return nil
	}
	return table(t.Bytes, t.Indirect(o+t.Pos))
}

func vectorLen(t *flatbuffers.Table, field int) int {
	o := flatbuffers.UOffsetT(t.Offset(slot(field)))
	if o == 0 {
		return 0
	}
	return t.VectorLen(o)
}

// inspectSchema accepts flat columns of text, integers and floats only.
func inspectSchema(s *flatbuffers.Table) error {
	if s == nil {
		return fmt.Errorf("found no schema")
	}
	n := vectorLen(s, 1)
	if n < 2 || n > maxColumns || vectorLen(s, 2) > maxMetadata {
		return fmt.Errorf("found %d columns, expected 2 to %d", n, maxColumns)
	}
	fields := s.Vector(flatbuffers.UOffsetT(s.Offset(slot(1))))
	for i := range n {
		f := table(s.Bytes, s.Indirect(fields+flatbuffers.UOffsetT(4*i)))
		const integer, float, text = 2, 3, 5
		kind := f.GetByteSlot(slot(2), 0)
		plain := kind == integer || kind == float || kind == text
		if !plain || f.Offset(slot(4)) != 0 || vectorLen(f, 5) != 0 || vectorLen(f, 6) > maxMetadata {
			return fmt.Errorf("column %d: found a nested or encoded type, expected numbers or text", i)
		}
	}
	return nil
}

// inspectBlocks lists the record batches; all lie before end.
func inspectBlocks(root *flatbuffers.Table, end int64) ([]fileBatch, error) {
	const blockBytes = 24 // offset int64, metadata int32, padding, body int64
	n := vectorLen(root, 3)
	if n == 0 {
		return nil, nil
	}
	if n > len(root.Bytes)/blockBytes {
		return nil, fmt.Errorf("found %d record batches, more than its footer holds", n)
	}
	at := root.Vector(flatbuffers.UOffsetT(root.Offset(slot(3))))
	list := make([]fileBatch, n)
	for i := range list {
		p := at + flatbuffers.UOffsetT(blockBytes*i)
		b := fileBatch{offset: root.GetInt64(p), meta: root.GetInt32(p + 8), body: root.GetInt64(p + 16)}
		if b.offset < 8 || b.offset > end || b.meta < 16 || int64(b.meta) > end-b.offset || b.body < 0 || b.body > end-b.offset-int64(b.meta) {
			return nil, fmt.Errorf("record batch %d: found it outside the file", i)
		}
		list[i] = b
	}
	return list, nil
}

// inspectBatch checks a record batch's message: no buffer longer than its
// body, no compression but LZ4, whose decoder needs little memory.
func inspectBatch(r io.ReaderAt, b fileBatch) error {
	message := make([]byte, b.meta)
	if _, err := r.ReadAt(message, b.offset); err != nil {
		return err
	}
	return guarded(func() error {
		message = message[8:] // continuation marker and length
		root := table(message, flatbuffers.GetUOffsetT(message))
		const recordBatch = 3
		batch := child(root, 2)
		if batch == nil || root.GetByteSlot(slot(1), 0) != recordBatch {
			return fmt.Errorf("found another message, expected a record batch")
		}
		if c := child(batch, 3); c != nil && c.GetInt8Slot(slot(0), 0) != 0 {
			return fmt.Errorf("found another compression, expected LZ4")
		}
		return inspectBuffers(batch, b.body)
	})
}

func inspectBuffers(batch *flatbuffers.Table, body int64) error {
	n := vectorLen(batch, 2)
	if n > 3*maxColumns {
		return fmt.Errorf("found %d buffers, expected at most %d", n, 3*maxColumns)
	}
	if n == 0 {
		return nil
	}
	at := batch.Vector(flatbuffers.UOffsetT(batch.Offset(slot(2))))
	for i := range n {
		p := at + flatbuffers.UOffsetT(16*i)
		offset, length := batch.GetInt64(p), batch.GetInt64(p+8)
		if offset < 0 || length < 0 || offset > body || length > body-offset {
			return fmt.Errorf("buffer %d: found it outside the batch", i)
		}
	}
	return nil
}
