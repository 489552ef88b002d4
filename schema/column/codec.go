package column

import (
	"fmt"
	"sync"

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

// useCodec registers the codec, once. The library's table of codecs is read
// without a lock, so every Writer calls this before it uses the library.
var useCodec = sync.OnceValue(func() error {
	own, err := compress.GetCodec(compress.Codecs.Zstd)
	if err != nil {
		return fmt.Errorf("column: %w", err)
	}
	encoder, err := zstd.NewWriter(nil, zstd.WithZeroFrames(true), zstd.WithEncoderLevel(zstd.SpeedFastest), zstd.WithWindowSize(1<<20))
	if err != nil {
		return fmt.Errorf("column: %w", err)
	}
	compress.RegisterCodec(compress.Codecs.Zstd, codec{own, encoder})
	return nil
})
