package pages

import (
	"fmt"
	"strings"

	"github.com/golang/snappy"
	"github.com/klauspost/compress/zstd"
	"github.com/parquet-go/parquet-go/format"
)

// Compression names how the pages of a file are compressed.
type Compression string

// The compressions. All readers know them; Snappy is the quickest to read,
// Zstandard the smallest.
const (
	Snappy       Compression = "snappy"
	Zstd         Compression = "zstd"
	Uncompressed Compression = "none"
)

// Compressions lists them.
func Compressions() []Compression { return []Compression{Snappy, Zstd, Uncompressed} }

// ParseCompression reads a compression's name; an empty text is Snappy. The
// error lists the legal ones.
func ParseCompression(text string) (Compression, error) {
	var legal []string
	for _, c := range Compressions() {
		if Compression(text) == c {
			return c, nil
		}
		legal = append(legal, string(c))
	}
	if text == "" {
		return Snappy, nil
	}
	return "", fmt.Errorf("unknown compression %q; legal ones are %s", text, strings.Join(legal, ", "))
}

// codec compresses the bodies of pages. The same body gives the same bytes.
type codec struct {
	format format.CompressionCodec
	zstd   *zstd.Encoder // nil unless it is the one
}

func newCodec(by Compression) (codec, error) {
	by, err := ParseCompression(string(by))
	switch {
	case err != nil:
		return codec{}, err
	case by == Uncompressed:
		return codec{format: format.Uncompressed}, nil
	case by == Snappy:
		return codec{format: format.Snappy}, nil
	}
	// One goroutine, so that memory does not grow with the machine; and a frame
	// for an empty body too, which readers want.
	e, err := zstd.NewWriter(nil, zstd.WithEncoderConcurrency(1), zstd.WithEncoderLevel(zstd.SpeedDefault), zstd.WithZeroFrames(true))
	return codec{format.Zstd, e}, err
}

// compress appends the compressed body to dst, which it may overwrite and which
// must be empty.
func (c codec) compress(dst, body []byte) []byte {
	switch c.format {
	case format.Zstd:
		return c.zstd.EncodeAll(body, dst)
	case format.Snappy:
		return snappy.Encode(dst[:cap(dst)], body) // Encode looks at the length, not at the capacity
	}
	return append(dst, body...)
}
