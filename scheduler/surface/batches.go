package surface

import (
	"container/list"
	"fmt"
	"io"
	"sync"

	"github.com/apache/arrow/go/v17/arrow"
	"github.com/apache/arrow/go/v17/arrow/array"
	"github.com/apache/arrow/go/v17/arrow/ipc"
	"github.com/apache/arrow/go/v17/arrow/memory"
)

// batches decodes record batches on demand and keeps the latest.
type batches struct {
	reader io.ReaderAt
	places []fileBatch
	file   *ipc.FileReader
	mem    *capped

	width int // value columns
	meta  Meta
	names []string
	per   int // batches of a family

	mu    sync.Mutex // guards what follows, and decoding
	limit int64
	bytes int64
	kept  map[int]*list.Element // of *nodes
	order *list.List            // latest first
}

// nodes is a decoded record batch: width values a node, NaN where missing.
type nodes struct {
	batch  int
	family int
	first  int // node of the first row
	rows   int
	width  int
	values []float64
}

// of gives the values of a node of this batch.
func (n *nodes) of(node int) []float64 {
	at := (node - n.first) * n.width
	return n.values[at : at+n.width : at+n.width]
}

// capped is an allocator that panics rather than give more than it has left.
type capped struct {
	memory.GoAllocator
	left int64
}

func (c *capped) take(n int) {
	if n < 0 || int64(n) > c.left {
		panic(fmt.Sprintf("a buffer of %d bytes, expected at most %d", n, c.left))
	}
	c.left -= int64(n)
}

func (c *capped) Allocate(n int) []byte {
	c.take(n)
	return c.GoAllocator.Allocate(n)
}

func (c *capped) Reallocate(n int, b []byte) []byte {
	c.take(n)
	return c.GoAllocator.Reallocate(n, b)
}

type readSeekerAt interface {
	io.ReadSeeker
	io.ReaderAt
}

func openBatches(r io.ReadSeeker, limit int64) (*batches, *arrow.Schema, error) {
	at, ok := r.(readSeekerAt)
	if !ok {
		return nil, nil, fmt.Errorf("found a stream, expected a file")
	}
	size, err := r.Seek(0, io.SeekEnd)
	if err != nil {
		return nil, nil, err
	}
	places, err := inspectFooter(at, size)
	if err != nil {
		return nil, nil, err
	}
	b := &batches{reader: at, places: places, mem: &capped{}, limit: limit, kept: map[int]*list.Element{}, order: list.New()}
	err = guarded(func() error {
		b.file, err = ipc.NewFileReader(at, ipc.WithAllocator(b.mem))
		return err
	})
	if err != nil {
		return nil, nil, err
	}
	return b, b.file.Schema(), nil
}

func (b *batches) count() int { return len(b.places) }

// shape says what the batches must look like.
func (b *batches) shape(width int, m Meta, names []string) {
	b.width, b.meta, b.names = width, m, names
	b.per = (m.Nodes + m.BatchNodes - 1) / m.BatchNodes
}

// holding gives the batch in which a family's node stands.
func (b *batches) holding(family, node int) (*nodes, error) {
	i := family*b.per + node/b.meta.BatchNodes
	b.mu.Lock()
	defer b.mu.Unlock()
	if e := b.kept[i]; e != nil {
		b.order.MoveToFront(e)
		return e.Value.(*nodes), nil
	}
	n, err := b.decode(i)
	if err != nil {
		return nil, fmt.Errorf("surface: record batch %d: %w", i, err)
	}
	b.keep(n)
	return n, nil
}

func (b *batches) keep(n *nodes) {
	b.kept[n.batch] = b.order.PushFront(n)
	b.bytes += int64(8 * len(n.values))
	for b.bytes > b.limit && b.order.Len() > 1 {
		old := b.order.Remove(b.order.Back()).(*nodes)
		delete(b.kept, old.batch)
		b.bytes -= int64(8 * len(old.values))
	}
}

func (b *batches) decode(i int) (n *nodes, err error) {
	place := b.places[i]
	if err := inspectBatch(b.reader, place); err != nil {
		return nil, err
	}
	n = &nodes{batch: i, family: i / b.per, first: i % b.per * b.meta.BatchNodes, width: b.width}
	rows := min(b.meta.BatchNodes, b.meta.Nodes-n.first)
	n.rows = rows
	perRow := int64(8*(b.width+1) + b.width/8 + 16 + len(b.names[i/b.per]))
	b.mem.left = 2*(int64(place.meta)+place.body) + 2*int64(rows)*perRow + 1<<16
	err = guarded(func() error {
		rec, err := b.file.RecordAt(i)
		if err != nil {
			return err
		}
		defer rec.Release()
		return n.fill(rec, rows, b.names[i/b.per])
	})
	return n, err
}

// fill copies the values to node order.
func (n *nodes) fill(rec arrow.Record, rows int, family string) error {
	if rec.NumRows() != int64(rows) {
		return fmt.Errorf("found %d rows, expected %d", rec.NumRows(), rows)
	}
	names, points := rec.Column(0).(*array.String), rec.Column(1).(*array.Int64)
	for _, i := range []int{0, rows - 1} {
		if names.Value(i) != family || points.Value(i) != int64(n.first+i) {
			return fmt.Errorf("row %d: found family %.40q at point %d, expected %q at %d", i, names.Value(i), points.Value(i), family, n.first+i)
		}
	}
	n.values = make([]float64, rows*n.width)
	for c := range n.width {
		f := bindFloats(rec.Column(c + 2).(*array.Float64))
		for i := range rows {
			n.values[i*n.width+c] = f.at(i)
		}
	}
	return nil
}
