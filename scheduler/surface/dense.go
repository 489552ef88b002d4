package surface

import (
	"github.com/apache/arrow/go/v17/arrow"
	"github.com/apache/arrow/go/v17/arrow/array"
	"github.com/apache/arrow/go/v17/arrow/bitutil"
	"github.com/apache/arrow/go/v17/arrow/ipc"
	"github.com/apache/arrow/go/v17/arrow/memory"
)

// batchNodes is the length of a record batch: what a reader must decode to
// see one node.
const batchNodes = 16384

// dense turns the rows of one family after another into full record batches.
type dense struct {
	file   *ipc.FileWriter
	schema *arrow.Schema
	meta   Meta

	first  int64       // node of row 0 of the batch in hand
	points []int64     // of the batch
	values [][]float64 // by column; 0 where null
	valid  [][]byte    // bitmaps by column
	counts []int       // values that are not null, by column
}

func newDense(file *ipc.FileWriter, s *arrow.Schema, m Meta) *dense {
	n := min(m.BatchNodes, m.Nodes)
	d := &dense{file: file, schema: s, meta: m, points: make([]int64, n)}
	for range s.NumFields() - 2 {
		d.values = append(d.values, make([]float64, n))
		d.valid = append(d.valid, make([]byte, bitutil.CeilByte(n)/8))
	}
	d.counts = make([]int, len(d.values))
	return d
}

// family writes all batches of a family.
func (d *dense) family(s *spill, r *rows) error {
	name := repeat(r.name, len(d.points))
	defer name.Release()
	d.first = 0
	d.clear()
	err := s.each(r, func(point int64, values []byte) error {
		for point >= d.first+int64(len(d.points)) {
			if err := d.flush(name); err != nil {
				return err
			}
		}
		d.set(int(point-d.first), values)
		return nil
	})
	for err == nil && d.first < int64(d.meta.Nodes) {
		err = d.flush(name)
	}
	return err
}

func repeat(name string, n int) arrow.Array {
	b := array.NewStringBuilder(memory.DefaultAllocator)
	defer b.Release()
	b.Reserve(n)
	b.ReserveData(n * len(name))
	for range n {
		b.Append(name)
	}
	return b.NewArray()
}

func (d *dense) clear() {
	for c := range d.values {
		if d.counts[c] > 0 {
			clear(d.values[c])
			clear(d.valid[c])
		}
		d.counts[c] = 0
	}
}

func (d *dense) set(i int, values []byte) {
	for c := range d.values {
		if v := value(values, c); v == v {
			d.values[c][i] = v
			d.valid[c][i>>3] |= 1 << (i & 7)
			d.counts[c]++
		}
	}
}

// flush writes the batch in hand and begins the next one.
func (d *dense) flush(name arrow.Array) error {
	n := int(min(int64(len(d.points)), int64(d.meta.Nodes)-d.first))
	for i := range n {
		d.points[i] = d.first + int64(i)
	}
	family := array.NewSlice(name, 0, int64(n))
	columns := []arrow.Array{family, primitive(arrow.PrimitiveTypes.Int64, n, nil, n, arrow.Int64Traits.CastToBytes(d.points[:n]))}
	for c := range d.values {
		valid := d.valid[c][:bitutil.CeilByte(n)/8]
		columns = append(columns, primitive(arrow.PrimitiveTypes.Float64, n, valid, d.counts[c], arrow.Float64Traits.CastToBytes(d.values[c][:n])))
	}
	rec := array.NewRecord(d.schema, columns, int64(n))
	err := d.file.Write(rec)
	rec.Release()
	for _, c := range columns {
		c.Release()
	}
	d.first += int64(n)
	d.clear()
	return err
}

// primitive wraps n numbers of which count are not null.
func primitive(t arrow.DataType, n int, valid []byte, count int, raw []byte) arrow.Array {
	bits := memory.NewBufferBytes(valid)
	if count == n {
		bits = nil
	}
	data := array.NewData(t, n, []*memory.Buffer{bits, memory.NewBufferBytes(raw)}, nil, n-count, 0)
	defer data.Release()
	return array.MakeFromData(data)
}
