package collate

import (
	"fmt"
	"os"
	"unsafe"
)

// words is a sequence of 64-bit words that grows at its end: in memory up to a limit, what
// comes after it in a file without a lasting name.
type words struct {
	path   string
	limit  int
	memory []uint64
	file   *os.File
	spilt  int64 // words in the file
}

// append adds words, which stay together, and tells where they stand.
func (w *words) append(v []uint64) (at int64, err error) {
	if w.spilt == 0 && len(w.memory)+len(v) <= w.limit {
		if w.memory == nil {
			w.memory = make([]uint64, 0, w.limit) // pages that stay untouched cost nothing; growing would
		}
		w.memory = append(w.memory, v...)
		return int64(len(w.memory) - len(v)), nil
	}
	if w.file == nil {
		if w.file, err = os.OpenFile(w.path, os.O_RDWR|os.O_CREATE|os.O_TRUNC, 0o600); err != nil {
			return 0, fmt.Errorf("spilling: %w", err)
		}
	}
	if _, err := w.file.WriteAt(raw(v), 8*w.spilt); err != nil {
		return 0, fmt.Errorf("spilling: %w", err)
	}
	at = int64(len(w.memory)) + w.spilt
	w.spilt += int64(len(v))
	return at, nil
}

// read gives n words from at on, in memory's own place or in room (nil: a new
// one). They last until the next append, or the next read to that room.
func (w *words) read(at int64, n int, room *[]uint64) ([]uint64, error) {
	if at+int64(n) <= int64(len(w.memory)) {
		return w.memory[at : at+int64(n) : at+int64(n)], nil
	}
	if n == 0 {
		return nil, nil
	}
	if room == nil {
		room = new([]uint64)
	}
	if n > cap(*room) {
		*room = make([]uint64, n)
	}
	v := (*room)[:n]
	if _, err := w.file.ReadAt(raw(v), 8*(at-int64(len(w.memory)))); err != nil {
		return nil, fmt.Errorf("spilled rows: %w", err)
	}
	return v, nil
}

// reset drops the words and keeps memory and file.
func (w *words) reset() { w.memory, w.spilt = w.memory[:0], 0 }

func (w *words) close() {
	if w.file != nil {
		w.file.Close()
		os.Remove(w.path)
		w.file = nil
	}
}

// raw gives the bytes of words, in this machine's order: they never leave it.
func raw(v []uint64) []byte {
	if len(v) == 0 {
		return nil
	}
	return unsafe.Slice((*byte)(unsafe.Pointer(&v[0])), 8*len(v))
}

func packText(s string) []uint64 {
	v := make([]uint64, (len(s)+7)/8)
	copy(raw(v), s)
	return v
}

func unpackText(v []uint64, n int) string { return string(raw(v)[:n]) }
