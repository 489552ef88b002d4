package column

import (
	"fmt"

	"github.com/apache/arrow/go/v17/parquet/compress"
	"github.com/klauspost/compress/zstd"
)

// fastest is the level of Zstandard that a Writer uses.
const fastest = 1

// codec is the library's Zstandard with one kept encoder for level fastest. The
// library's own sets up an encoder of about 3 MB for every page, which made that
// nine tenths of the time that encoding a part took.
type codec struct {
	compress.Codec
	encoder *zstd.Encoder
}

// EncodeLevel compresses src.
func (c codec) EncodeLevel(dst, src []byte, level int) []byte {
	if level != fastest {
		return c.Codec.EncodeLevel(dst, src, level)
	}
	return c.encoder.EncodeAll(src, dst[:0])
}

// init is where the library asks for a codec to be registered: its table is read
// without a lock.
func init() {
	own, err := compress.GetCodec(compress.Codecs.Zstd)
	if err != nil {
		panic(fmt.Sprintf("column: %v", err))
	}
	encoder, err := zstd.NewWriter(nil, zstd.WithZeroFrames(true), zstd.WithEncoderLevel(zstd.SpeedFastest), zstd.WithWindowSize(1<<20))
	if err != nil {
		panic(fmt.Sprintf("column: %v", err))
	}
	compress.RegisterCodec(compress.Codecs.Zstd, codec{own, encoder})
}
