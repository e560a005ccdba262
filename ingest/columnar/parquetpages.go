package columnar

import (
	"bufio"
	"encoding/binary"
	"errors"
	"fmt"
	"hash/crc32"
	"io"

	"github.com/parquet-go/parquet-go"
	"github.com/parquet-go/parquet-go/encoding/thrift"
	"github.com/parquet-go/parquet-go/format"
	"github.com/pierrec/lz4/v4"
)

// pages reads the pages of a column chunk one by one: their headers, checks
// and compression. The library has a reader of pages too, but that one
// allocates whatever a damaged page asks for, and never ends on damaged LZ4.
type pages struct {
	data    *bufio.Reader
	decoder *thrift.Decoder
	rep     int // bits of a repetition level, 0 without lists
	def     int // bits of a definition level, 0 without nulls
	codec   format.CompressionCodec
	rows    int64 // of the row group
	values  int64 // of the chunk, nulls included

	packed, body []byte // the page as it stands in the file, and unpacked
	levels       [2][]byte
}

// page is one page, its values still encoded.
type page struct {
	dictionary  bool
	values      int // nulls included
	encoding    format.Encoding
	repetitions []byte
	definitions []byte
	body        []byte
}

var errPage = errors.New("a page of impossible size")

// open begins reading a chunk of a row group of so many rows.
func (p *pages) open(file random, chunk *format.ColumnChunk, rows int64) error {
	m := &chunk.MetaData
	from := m.DataPageOffset
	if m.DictionaryPageOffset > 0 && m.DictionaryPageOffset < from {
		from = m.DictionaryPageOffset
	}
	switch {
	case chunk.FilePath != "":
		return errors.New("its values stand in another file")
	case chunk.CryptoMetadata.Value != nil:
		return errors.New("it is encrypted")
	case from < 0 || m.TotalCompressedSize < 0 || from > file.Size()-m.TotalCompressedSize:
		return io.ErrUnexpectedEOF
	}
	section := io.NewSectionReader(file, from, m.TotalCompressedSize)
	if p.data == nil {
		p.data = bufio.NewReaderSize(section, readBuffer)
		p.decoder = thrift.NewDecoder((&thrift.CompactProtocol{}).NewReader(p.data))
	}
	p.data.Reset(section)
	p.codec, p.rows, p.values = m.Codec, rows, m.NumValues
	return nil
}

// next returns the next page, valid until the call after it, and io.EOF at the
// end of the chunk.
func (p *pages) next() (*page, error) {
	for {
		if _, err := p.data.Peek(1); err != nil {
			return nil, err
		}
		var h format.PageHeader
		if err := p.decoder.Decode(&h); err != nil {
			return nil, noEOF(err)
		}
		if err := p.readBody(&h); err != nil {
			return nil, err
		}
		switch {
		case h.Type == format.DictionaryPage && h.DictionaryPageHeader.Valid:
			return p.dictionary(&h)
		case h.Type == format.DataPage && h.DataPageHeader.Valid:
			return p.version1(&h)
		case h.Type == format.DataPageV2 && h.DataPageHeaderV2.Valid:
			return p.version2(&h)
		case h.Type != format.IndexPage:
			return nil, fmt.Errorf("a page of kind %d", h.Type)
		}
	}
}

// readBody reads what follows a header, still packed, and checks its CRC-32 if
// it has one.
func (p *pages) readBody(h *format.PageHeader) (err error) {
	size, unpacked := int64(h.CompressedPageSize), int64(h.UncompressedPageSize)
	if size < 0 || unpacked < 0 || unpacked > minUnpack && unpacked > size*maxRatio {
		return errPage
	}
	if p.packed, err = readInto(p.packed, p.data, size); err != nil {
		return err
	}
	if h.CRC != 0 && uint32(h.CRC) != crc32.ChecksumIEEE(p.packed) {
		return errors.New("a page does not match its checksum")
	}
	return nil
}

func (p *pages) dictionary(h *format.PageHeader) (*page, error) {
	d := &h.DictionaryPageHeader.V
	body, err := p.unpack(p.packed, int(h.UncompressedPageSize))
	if err != nil {
		return nil, err
	}
	encoding := d.Encoding
	//lint:ignore SA1019 older writers still use this encoding
	if encoding == format.PlainDictionary {
		encoding = format.Plain
	}
	if d.NumValues < 0 || int(d.NumValues) > len(body) {
		return nil, errPage
	}
	return &page{dictionary: true, values: int(d.NumValues), encoding: encoding, body: body}, nil
}

// version1 cuts a page whose levels are packed together with its values.
func (p *pages) version1(h *format.PageHeader) (*page, error) {
	d := &h.DataPageHeader.V
	if err := p.checkCount(d.NumValues); err != nil {
		return nil, err
	}
	body, err := p.unpack(p.packed, int(h.UncompressedPageSize))
	if err != nil {
		return nil, err
	}
	out := &page{values: int(d.NumValues), encoding: d.Encoding}
	encodings := [2]format.Encoding{d.RepetitionLevelEncoding, d.DefinitionLevelEncoding}
	for i, bits := range [2]int{p.rep, p.def} {
		if bits == 0 {
			continue
		}
		if encodings[i] != format.RLE {
			return nil, fmt.Errorf("levels in the encoding %s", encodings[i])
		}
		if len(body) < 4 || uint64(binary.LittleEndian.Uint32(body)) > uint64(len(body)-4) {
			return nil, errPage
		}
		end := 4 + int(binary.LittleEndian.Uint32(body))
		if p.levels[i], err = levels(p.levels[i], body[4:end], bits, out.values); err != nil {
			return nil, err
		}
		body = body[end:]
	}
	out.repetitions, out.definitions, out.body = p.levels[0], p.levels[1], body
	return out, nil
}

// version2 cuts a page whose levels stand unpacked before its values.
func (p *pages) version2(h *format.PageHeader) (*page, error) {
	d := &h.DataPageHeaderV2.V
	if err := p.checkCount(d.NumValues); err != nil {
		return nil, err
	}
	rep, def := int(d.RepetitionLevelsByteLength), int(d.DefinitionLevelsByteLength)
	if rep < 0 || def < 0 || rep+def > len(p.packed) || rep+def > int(h.UncompressedPageSize) {
		return nil, errPage
	}
	out := &page{values: int(d.NumValues), encoding: d.Encoding}
	parts := [2][]byte{p.packed[:rep], p.packed[rep : rep+def]}
	var err error
	for i, bits := range [2]int{p.rep, p.def} {
		if bits == 0 {
			continue
		}
		if p.levels[i], err = levels(p.levels[i], parts[i], bits, out.values); err != nil {
			return nil, err
		}
	}
	out.repetitions, out.definitions, out.body = p.levels[0], p.levels[1], p.packed[rep+def:]
	if !d.IsCompressed.Valid || d.IsCompressed.V {
		out.body, err = p.unpack(out.body, int(h.UncompressedPageSize)-rep-def)
	}
	return out, err
}

// checkCount holds the number of values of a page against the footer.
func (p *pages) checkCount(n int32) error {
	most := p.values
	if p.rep == 0 {
		most = p.rows
	}
	if n < 0 || int64(n) > most {
		return errPage
	}
	return nil
}

// unpack undoes the compression of what becomes so many bytes.
func (p *pages) unpack(packed []byte, size int) ([]byte, error) {
	if p.codec == format.Uncompressed {
		return packed, nil
	}
	if cap(p.body) < size {
		p.body = make([]byte, size)
	}
	p.body = p.body[:size]
	switch p.codec {
	case format.Lz4Raw:
		n, err := lz4.UncompressBlock(packed, p.body)
		if err != nil || n != size {
			return nil, fmt.Errorf("damaged LZ4: %w", errPage)
		}
		return p.body, nil
	case format.Snappy: // begins with its own length, which the library trusts
		if n, k := binary.Uvarint(packed); k <= 0 || n != uint64(size) {
			return nil, fmt.Errorf("damaged Snappy: %w", errPage)
		}
	}
	out, err := parquet.LookupCompressionCodec(p.codec).Decode(p.body, packed)
	if err == nil && len(out) != size {
		err = errPage
	}
	return out, err
}
