package pages

import (
	"bytes"
	"fmt"
	"hash/crc32"
	"math"

	"github.com/parquet-go/parquet-go/encoding/thrift"
	"github.com/parquet-go/parquet-go/format"
)

// press turns page bodies into finished pages. Its buffers are shared by all
// columns of a writer.
type press struct {
	codec      codec
	body       []byte // levels and values of the page
	compressed []byte
	header     bytes.Buffer
	protocol   thrift.CompactProtocol
}

// cut finishes the page in the making and appends it to the column's row group.
func (p *press) cut(c *column) error {
	if c.entries == 0 {
		return nil
	}
	encoding := format.Plain
	if c.Kind == Text {
		encoding = format.RLEDictionary
	}
	page := format.PageHeader{Type: format.DataPage}
	page.DataPageHeader.Set(format.DataPageHeader{
		NumValues:               int32(c.entries),
		Encoding:                encoding,
		DefinitionLevelEncoding: format.RLE,
		RepetitionLevelEncoding: format.RLE,
		Statistics:              format.Statistics{NullCount: int64(c.missing)},
	})
	var err error
	before := len(c.finished)
	c.finished, err = p.append(c.finished, &page, p.layOut(c))
	if err != nil {
		return fmt.Errorf("column %s: %w", c.Name, err)
	}
	c.plainSize += int64(len(c.finished)-before) + int64(page.UncompressedPageSize-page.CompressedPageSize)
	c.numValues += int64(c.entries)
	c.bounds.take(c.Kind, c.values)
	c.nulls += int64(c.missing)
	c.values, c.entries, c.missing = c.values[:0], 0, 0
	c.indexes, c.repetitions, c.definitions = c.indexes[:0], c.repetitions[:0], c.definitions[:0]
	return nil
}

// layOut returns the body of the column's page, valid until the next call.
func (p *press) layOut(c *column) []byte {
	body := p.body[:0]
	if c.Kind.list() {
		body = c.repetitions.appendLevels(body)
	}
	if c.Kind.list() || c.Optional {
		body = c.definitions.appendLevels(body)
	}
	if c.Kind == Text {
		width := indexWidth(len(c.dictionary.index))
		p.body = c.indexes.appendTo(append(body, byte(width)), width)
		return p.body
	}
	if len(body) == 0 {
		return c.values
	}
	p.body = append(body, c.values...)
	return p.body
}

// appendDictionary appends the column's dictionary page to dst and returns it
// with the page's size before compression, header included.
func (p *press) appendDictionary(dst []byte, c *column) ([]byte, int64, error) {
	page := format.PageHeader{Type: format.DictionaryPage}
	page.DictionaryPageHeader.Set(format.DictionaryPageHeader{
		NumValues: int32(len(c.dictionary.index)),
		Encoding:  format.Plain,
	})
	before := len(dst)
	dst, err := p.append(dst, &page, c.dictionary.plain)
	if err != nil {
		return dst, 0, fmt.Errorf("column %s: %w", c.Name, err)
	}
	return dst, int64(len(dst)-before) + int64(page.UncompressedPageSize-page.CompressedPageSize), nil
}

// append compresses the body, completes the header and appends both to dst.
func (p *press) append(dst []byte, page *format.PageHeader, body []byte) ([]byte, error) {
	if len(body) > math.MaxInt32/2 {
		return dst, fmt.Errorf("a page of %d bytes is more than the Parquet format holds", len(body))
	}
	p.compressed = p.codec.compress(p.compressed[:0], body)
	page.UncompressedPageSize = int32(len(body))
	page.CompressedPageSize = int32(len(p.compressed))
	page.CRC = int32(crc32.ChecksumIEEE(p.compressed))
	p.header.Reset()
	if err := thrift.NewEncoder(p.protocol.NewWriter(&p.header)).Encode(page); err != nil {
		return dst, fmt.Errorf("encode page header: %w", err)
	}
	dst = append(dst, p.header.Bytes()...)
	return append(dst, p.compressed...), nil
}
