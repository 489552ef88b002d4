package column

import (
	"encoding/base64"
	"fmt"
	"io"

	"github.com/apache/arrow/go/v17/arrow"
	"github.com/apache/arrow/go/v17/arrow/flight"
	"github.com/apache/arrow/go/v17/arrow/memory"
	"github.com/apache/arrow/go/v17/parquet"
	"github.com/apache/arrow/go/v17/parquet/compress"
	"github.com/apache/arrow/go/v17/parquet/file"
	"github.com/apache/arrow/go/v17/parquet/metadata"
	"github.com/apache/arrow/go/v17/parquet/pqarrow"
)

// createdBy is fixed: the bytes of a file do not tell which version wrote it.
const createdBy = "betaloom"

// Options is how a Writer writes; its zero value suits parts.
type Options struct {
	// Meta goes to the file's key-value metadata.
	Meta map[string]string
	// Statistics writes the least and the largest value and the number of nulls of
	// each column and row group, by which readers leave row groups out.
	Statistics bool
}

// Writer writes a Parquet file, one row group a Batch.
type Writer struct {
	columns []Column
	w       *file.Writer
	levels  []int16
	floats  []float64
	ints    []int64
	shorts  []int32
	texts   []parquet.ByteArray
	blobs   []parquet.FixedLenByteArray
}

// NewWriter starts a file of these columns.
func NewWriter(out io.Writer, columns []Column, o Options) (*Writer, error) {
	if err := useCodec(); err != nil {
		return nil, err
	}
	s := Schema(columns, o.Meta)
	props := properties(columns, o)
	root, err := pqarrow.ToParquet(s, props, pqarrow.DefaultWriterProps())
	if err != nil {
		return nil, fmt.Errorf("column: parquet schema: %w", err)
	}
	w := file.NewParquetWriter(out, root.Root(), file.WithWriterProps(props), file.WithWriteMetadata(keyValues(s)))
	return &Writer{columns: columns, w: w}, nil
}

func properties(columns []Column, o Options) *parquet.WriterProperties {
	list := []parquet.WriterProperty{
		parquet.WithCreatedBy(createdBy), parquet.WithCompression(compress.Codecs.Zstd), parquet.WithCompressionLevel(fastest),
		parquet.WithDictionaryDefault(false), parquet.WithStats(o.Statistics),
		parquet.WithBatchSize(8192), parquet.WithDataPageSize(1 << 20), parquet.WithMaxRowGroupLength(1 << 30),
	}
	for _, c := range columns {
		if c.Type == String {
			list = append(list, parquet.WithDictionaryFor(c.Name, true))
		}
	}
	return parquet.NewWriterProperties(list...)
}

// keyValues is the metadata of a file: the schema's own and the schema.
func keyValues(s *arrow.Schema) metadata.KeyValueMetadata {
	kv := make(metadata.KeyValueMetadata, 0, s.Metadata().Len()+1)
	for i, key := range s.Metadata().Keys() {
		_ = kv.Append(key, s.Metadata().Values()[i])
	}
	_ = kv.Append("ARROW:schema", base64.StdEncoding.EncodeToString(flight.SerializeSchema(s, memory.DefaultAllocator)))
	return kv
}

// Write appends the rows of a batch as one row group.
func (w *Writer) Write(b *Batch) (err error) {
	group := w.w.AppendRowGroup()
	for i := range w.columns {
		if err = w.column(group, b, i); err != nil {
			return fmt.Errorf("column %s: %w", w.columns[i].Name, err)
		}
	}
	return group.Close()
}

// Close ends the file; it does not close what it was written to.
func (w *Writer) Close() error {
	if err := w.w.FlushWithFooter(); err != nil {
		return fmt.Errorf("column: parquet footer: %w", err)
	}
	return nil
}

func (w *Writer) column(group file.SerialRowGroupWriter, b *Batch, i int) error {
	chunk, err := group.NextColumn()
	if err != nil {
		return err
	}
	v := &b.Vectors[i]
	w.levels = sized(w.levels, b.Rows)
	switch c := chunk.(type) {
	case *file.Float64ColumnChunkWriter:
		w.floats = dense(w.floats, w.levels, v.Floats, finite)
		_, err = c.WriteBatch(w.floats, w.levels, nil)
	case *file.Int64ColumnChunkWriter:
		w.ints = dense(w.ints, w.levels, v.Ints, present)
		_, err = c.WriteBatch(w.ints, w.levels, nil)
	case *file.Int32ColumnChunkWriter:
		w.ints = dense(w.ints, w.levels, v.Ints, present)
		_, err = c.WriteBatch(w.shorten(w.ints), w.levels, nil)
	case *file.ByteArrayColumnChunkWriter:
		_, err = c.WriteBatch(w.textBytes(b.Texts, v.Codes), w.levels, nil)
	case *file.FixedLenByteArrayColumnChunkWriter:
		_, err = c.WriteBatch(w.blobBytes(v.Blobs, b.Rows), w.levels, nil)
	default:
		err = fmt.Errorf("found the parquet type %s, expected one of a table", chunk.Type())
	}
	if err != nil {
		return err
	}
	return chunk.Close()
}

func present(n int64) bool { return n != MissingInt }

// dense copies the values that are there to dst and sets levels to 1 for
// them, to 0 for the missing ones.
func dense[T any](dst []T, levels []int16, values []T, there func(T) bool) []T {
	dst = sized(dst, len(values))
	n := 0
	for i, v := range values {
		dst[n] = v
		if there(v) {
			levels[i] = 1
			n++
			continue
		}
		levels[i] = 0
	}
	return dst[:n]
}

func (w *Writer) shorten(ints []int64) []int32 {
	w.shorts = sized(w.shorts, len(ints))
	for i, n := range ints {
		w.shorts[i] = int32(n)
	}
	return w.shorts
}

func (w *Writer) textBytes(t *Texts, codes []uint32) []parquet.ByteArray {
	w.texts = w.texts[:0]
	for i, code := range codes {
		w.levels[i] = 0
		if code != 0 {
			w.levels[i] = 1
			w.texts = append(w.texts, t.bytes[code])
		}
	}
	return w.texts
}

func (w *Writer) blobBytes(blobs []byte, rows int) []parquet.FixedLenByteArray {
	w.blobs = w.blobs[:0]
	for i := range rows {
		w.levels[i] = 0
		if v := blob(blobs, i); !empty(v) {
			w.levels[i] = 1
			w.blobs = append(w.blobs, v)
		}
	}
	return w.blobs
}
