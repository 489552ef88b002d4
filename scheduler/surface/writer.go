package surface

import (
	"encoding/binary"
	"errors"
	"fmt"
	"math"

	"github.com/apache/arrow/go/v17/arrow"

	"betaloom/schema/column"
)

// maxFamilies bounds what a Writer keeps in memory.
const maxFamilies = 4096

// Writer writes surfaces.arrow. It serves one goroutine.
type Writer struct {
	path     string
	meta     Meta
	columns  []column.Column
	spill    *spill
	families map[string]*rows
	source   source
	err      error // the first failure; nothing is written after it
}

// NewWriter begins the file at path, whose folder must be there. The
// temporary files beside it are path.rows and path.tmp: what an interrupted
// writer left there is overwritten.
func NewWriter(path string, s Spec) (*Writer, error) {
	if err := s.validate(); err != nil {
		return nil, err
	}
	columns, err := valueColumns(s.Physics)
	if err != nil {
		return nil, err
	}
	sp, err := newSpill(path+".rows", len(columns))
	if err != nil {
		return nil, err
	}
	return &Writer{path: path, meta: s.meta(), columns: columns, spill: sp, families: map[string]*rows{}}, nil
}

// errClosed is what a Writer says after Close or Discard.
var errClosed = errors.New("surface: the writer is closed")

// Append takes rows of modes.parquet, in order of points over all records. It needs
// the columns point (int64), family (text, plain or dictionary) and the file's value columns (float64);
// others are ignored. A row without a family belongs to no surface. Values that are not finite
// are taken as missing. After an error only Discard and Close remain.
func (w *Writer) Append(rec arrow.Record) error {
	if w.err == nil {
		if w.err = w.source.bind(rec, w.columns); w.err == nil {
			w.err = w.append(int(rec.NumRows()))
		}
	}
	return w.err
}

// AppendBatch is Append for rows that have not become a record yet.
func (w *Writer) AppendBatch(b *column.Batch) error {
	if w.err == nil {
		if w.err = w.source.bindBatch(b, w.columns); w.err == nil {
			w.err = w.append(b.Rows)
		}
	}
	return w.err
}

func (w *Writer) append(n int) error {
	for i := range n {
		name, ok := w.source.family(i)
		if !ok {
			continue
		}
		r := w.families[name]
		if r == nil {
			if len(w.families) == maxFamilies {
				return fmt.Errorf("surface: found more than %d families", maxFamilies)
			}
			r = &rows{name: string([]byte(name)), last: -1}
			w.families[r.name] = r
		}
		if err := w.row(r, i); err != nil {
			return err
		}
	}
	return nil
}

func (w *Writer) row(r *rows, i int) error {
	point := w.source.points[i]
	switch {
	case point < 0 || point >= int64(w.meta.Nodes):
		return fmt.Errorf("surface: family %s: found point %d, expected 0 to %d", r.name, point, w.meta.Nodes-1)
	case point <= r.last:
		return fmt.Errorf("surface: family %s: found point %d after %d, expected each point once and in order", r.name, point, r.last)
	}
	r.last = point
	r.count++
	b, err := w.spill.room(r)
	if err != nil {
		return err
	}
	binary.LittleEndian.PutUint64(b, uint64(point))
	for c := range w.source.values {
		binary.LittleEndian.PutUint64(b[8+8*c:], math.Float64bits(w.source.values[c].at(i)))
	}
	return nil
}

// Close writes the file and gives it its name. After a failure, of Close or
// before, there are no files of this writer and the error is that failure.
func (w *Writer) Close() error {
	if w.err == errClosed {
		return nil
	}
	err := w.err
	if err == nil {
		err = w.publish()
	}
	w.Discard()
	return err
}

// Discard gives up and removes the temporary files. After Close it does
// nothing.
func (w *Writer) Discard() {
	if w.err == errClosed {
		return
	}
	w.spill.remove()
	w.families = nil
	w.err = errClosed
}
