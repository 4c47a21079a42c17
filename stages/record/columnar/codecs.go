package columnar

import (
	"errors"
	"sync"

	"github.com/apache/arrow-go/v18/parquet/compress"
	"github.com/klauspost/compress/snappy"
	"github.com/klauspost/compress/zstd"
)

// Two of the decoders of pages allocate what the packed bytes claim, whatever the page says. These stand in for them and refuse
// claims above the page; the others fill what they are given.
func init() {
	for kind, decode := range map[compress.Compression]func(dst, src []byte) ([]byte, error){
		compress.Codecs.Snappy: decodeSnappy,
		compress.Codecs.Zstd:   decodeZstd,
	} {
		if codec, err := compress.GetCodec(kind); err == nil {
			compress.RegisterCodec(kind, boundedCodec{codec, decode})
		}
	}
}

var errClaim = errors.New("a page unpacks to more than it claims")

// boundedCodec decodes into what it is given and not beyond.
type boundedCodec struct {
	compress.Codec
	decode func(dst, src []byte) ([]byte, error)
}

func (b boundedCodec) Decode(dst, src []byte) []byte {
	out, err := b.decode(dst, src)
	if err != nil {
		panic(err)
	}
	return out
}

func (b boundedCodec) DecodeWithError(dst, src []byte) ([]byte, error) { return b.decode(dst, src) }

func decodeSnappy(dst, src []byte) ([]byte, error) {
	n, err := snappy.DecodedLen(src)
	if err != nil {
		return nil, err
	}
	if n > max(len(dst), mostPage) {
		return nil, errClaim
	}
	return snappy.Decode(dst, src)
}

var unpacker = sync.OnceValues(func() (*zstd.Decoder, error) {
	return zstd.NewReader(nil, zstd.WithDecoderConcurrency(1), zstd.WithDecoderMaxMemory(mostPage))
})

func decodeZstd(dst, src []byte) ([]byte, error) {
	d, err := unpacker()
	if err != nil {
		return nil, err
	}
	return d.DecodeAll(src, dst[:0])
}
