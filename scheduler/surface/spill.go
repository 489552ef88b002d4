package surface

import (
	"encoding/binary"
	"fmt"
	"math"
	"os"
)

// spillBytes is about how much of a family's rows waits in memory.
const spillBytes = 64 << 10

// spill keeps rows of several families in one temporary file, in blocks that belong
// to one family each. A row is its point and its values, eight bytes each.
type spill struct {
	file  *os.File
	width int // values of a row
	size  int64
}

// rows is what a spill holds of one family.
type rows struct {
	name   string
	last   int64 // the latest point; -1 before the first
	count  int64
	buffer []byte
	blocks []block
}

type block struct {
	offset int64
	bytes  int
}

func newSpill(path string, width int) (*spill, error) {
	f, err := os.OpenFile(path, os.O_RDWR|os.O_CREATE|os.O_TRUNC, 0o600)
	if err != nil {
		return nil, fmt.Errorf("surface: rows: %w", err)
	}
	return &spill{file: f, width: width}, nil
}

func (s *spill) rowBytes() int { return 8 * (1 + s.width) }

// room makes place for one more row and gives it.
func (s *spill) room(r *rows) ([]byte, error) {
	n := s.rowBytes()
	if len(r.buffer)+n > max(spillBytes, n) {
		if err := s.flush(r); err != nil {
			return nil, err
		}
	}
	at := len(r.buffer)
	if at+n <= cap(r.buffer) {
		r.buffer = r.buffer[:at+n]
	} else {
		r.buffer = append(r.buffer, make([]byte, n)...)
	}
	return r.buffer[at : at+n], nil
}

func (s *spill) flush(r *rows) error {
	if len(r.buffer) == 0 {
		return nil
	}
	if _, err := s.file.WriteAt(r.buffer, s.size); err != nil {
		return fmt.Errorf("surface: rows: %w", err)
	}
	r.blocks = append(r.blocks, block{offset: s.size, bytes: len(r.buffer)})
	s.size += int64(len(r.buffer))
	r.buffer = r.buffer[:0]
	return nil
}

// each calls f with every row of a family in the order they came. The
// values are those of the row, as encoded.
func (s *spill) each(r *rows, f func(point int64, values []byte) error) error {
	if err := s.flush(r); err != nil {
		return err
	}
	r.buffer = nil
	buffer := make([]byte, max(spillBytes, s.rowBytes()))
	for _, b := range r.blocks {
		if _, err := s.file.ReadAt(buffer[:b.bytes], b.offset); err != nil {
			return fmt.Errorf("surface: rows: %w", err)
		}
		for at := 0; at < b.bytes; at += s.rowBytes() {
			point := int64(binary.LittleEndian.Uint64(buffer[at:]))
			if err := f(point, buffer[at+8:at+s.rowBytes()]); err != nil {
				return err
			}
		}
	}
	return nil
}

func (s *spill) remove() {
	s.file.Close()
	os.Remove(s.file.Name())
}

func value(values []byte, i int) float64 {
	return math.Float64frombits(binary.LittleEndian.Uint64(values[8*i:]))
}
