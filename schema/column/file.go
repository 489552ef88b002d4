package column

import (
	"encoding/binary"
	"encoding/json"
	"fmt"
	"io"

	"github.com/apache/arrow/go/v17/parquet"
	"github.com/apache/arrow/go/v17/parquet/compress"
	"github.com/apache/arrow/go/v17/parquet/metadata"
	"github.com/klauspost/compress/zstd"
)

// maxFooter bounds the metadata of a file: 10,000 row groups of 60 columns
// take less.
const maxFooter = 256 << 20

// File is a Parquet file that a Writer has made, open for reading. Damaged or hostile bytes
// give errors.
type File struct {
	Columns []Column          // of the file, with units and descriptions
	Meta    map[string]string // key-value metadata
	Rows    int

	r      io.ReaderAt
	size   int64
	footer *metadata.FileMetaData
	zstd   *zstd.Decoder
}

// Open reads a file's metadata.
func Open(r io.ReaderAt, size int64) (f *File, err error) {
	defer recovered(&err)
	b, err := footer(r, size)
	if err != nil {
		return nil, err
	}
	m, err := metadata.NewFileMetaData(b, nil)
	if err != nil {
		return nil, fmt.Errorf("parquet metadata: %w", err)
	}
	f = &File{Meta: map[string]string{}, Rows: int(m.NumRows), r: r, size: size, footer: m}
	for _, kv := range m.KeyValueMetadata() {
		if kv != nil && kv.Value != nil {
			f.Meta[kv.Key] = *kv.Value
		}
	}
	if err := f.readColumns(); err != nil {
		return nil, err
	}
	f.zstd, err = zstd.NewReader(nil, zstd.WithDecoderConcurrency(1), zstd.WithDecodeAllCapLimit(true), zstd.WithDecoderMaxMemory(maxPage))
	return f, err
}

// Close releases what reading has needed; the caller closes what it reads from.
func (f *File) Close() { f.zstd.Close() }

// recovered turns a panic of the Parquet library, which it answers damaged
// metadata with, into an error.
func recovered(err *error) {
	if r := recover(); r != nil {
		*err = fmt.Errorf("damaged parquet file: %v", r)
	}
}

const magic = "PAR1"

// footer reads and checks the bytes of a file's metadata.
func footer(r io.ReaderAt, size int64) ([]byte, error) {
	tail := make([]byte, 8)
	if size < 12 {
		return nil, fmt.Errorf("found a file of %d bytes, expected a parquet file", size)
	}
	if _, err := r.ReadAt(tail, size-8); err != nil {
		return nil, fmt.Errorf("parquet footer: %w", err)
	}
	n := int64(binary.LittleEndian.Uint32(tail))
	if string(tail[4:]) != magic || n > size-12 || n > maxFooter {
		return nil, fmt.Errorf("found %q and metadata of %d bytes at the end of a file of %d, expected a complete parquet file", tail[4:], n, size)
	}
	b := make([]byte, n)
	if _, err := r.ReadAt(b, size-8-n); err != nil {
		return nil, fmt.Errorf("parquet footer: %w", err)
	}
	walk := compact{b: b}
	return b, walk.structure(0, nil)
}

// readColumns takes the columns from the schema and their descriptions from the metadata.
func (f *File) readColumns() error {
	var known []Column
	if err := json.Unmarshal([]byte(f.Meta[MetaColumns]), &known); err != nil {
		return fmt.Errorf("parquet metadata %s: %w", MetaColumns, err)
	}
	s := f.footer.Schema
	if s.NumColumns() != len(known) {
		return fmt.Errorf("found %d parquet columns, expected the %d of %s", s.NumColumns(), len(known), MetaColumns)
	}
	for i, c := range known {
		leaf := s.Column(i)
		t, err := typeOf(leaf.PhysicalType(), leaf.TypeLength())
		if err != nil || leaf.Name() != c.Name || leaf.MaxDefinitionLevel() != 1 || leaf.MaxRepetitionLevel() != 0 {
			return fmt.Errorf("found the parquet column %s, expected %s, optional and of a table's types", leaf, c.Name)
		}
		c.Type = t
		f.Columns = append(f.Columns, c)
	}
	return nil
}

func typeOf(t parquet.Type, length int) (Type, error) {
	switch t {
	case parquet.Types.Int64:
		return Int64, nil
	case parquet.Types.Int32:
		return Int32, nil
	case parquet.Types.Double:
		return Float64, nil
	case parquet.Types.ByteArray:
		return String, nil
	}
	if t == parquet.Types.FixedLenByteArray && length == SignatureBytes {
		return Bytes, nil
	}
	return 0, fmt.Errorf("found the parquet type %s, expected one of a table's", t)
}

// chunk reads the bytes of a column in a row group.
func (f *File) chunk(group, column int, room []byte) ([]byte, error) {
	rg := f.footer.RowGroup(group)
	meta, err := rg.ColumnChunk(column)
	if err != nil {
		return room, err
	}
	if meta.Compression() != compress.Codecs.Zstd {
		return room, fmt.Errorf("found the compression %s, expected zstd", meta.Compression())
	}
	from, n := meta.DataPageOffset(), meta.TotalCompressedSize()
	if d := meta.DictionaryPageOffset(); meta.HasDictionaryPage() && d > 0 && d < from {
		from = d
	}
	if from < 0 || n < 0 || from > f.size || n > f.size-from {
		return room, fmt.Errorf("found pages of %d bytes at %d in a file of %d", n, from, f.size)
	}
	room = sized(room[:0], int(n))
	_, err = f.r.ReadAt(room, from)
	return room, err
}
