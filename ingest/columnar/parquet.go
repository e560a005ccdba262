package columnar

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"os"

	"github.com/parquet-go/parquet-go"

	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// parquetSource reads a Parquet file.
type parquetSource struct {
	in      raw.Input
	data    random
	file    *parquet.File
	columns []*parquetColumn // of every leaf
	list    []leaf
	used    []*parquetColumn
	group   int   // row groups begun
	left    int64 // rows of this one not yet read
	vectors []vector
	release func()
}

// random is data that can be read anywhere.
type random interface {
	io.ReaderAt
	Size() int64
}

// openParquet opens a Parquet file: r itself when it can be read anywhere, the
// file at in.Path when that is not packed, else a copy of the whole.
func openParquet(r, whole io.Reader, in raw.Input) (source, error) {
	s := &parquetSource{in: in, release: func() {}}
	data, ok := r.(random)
	if !ok {
		var err error
		if data, s.release, err = onDisk(whole, in); err != nil {
			return nil, err
		}
	}
	err := guard(in, func() error {
		if err := checkEnd(data); err != nil {
			return err
		}
		file, err := parquet.OpenFile(data, data.Size(), parquet.SkipPageIndex(true), parquet.SkipBloomFilters(true), parquet.ReadBufferSize(readBuffer))
		if err != nil {
			return noEOF(err)
		}
		s.data, s.file = data, file
		if err := s.findLeaves(); err != nil {
			return err
		}
		s.vectors = make([]vector, len(s.list))
		return nil
	})
	if err != nil {
		s.release()
		return nil, err
	}
	return s, nil
}

// checkEnd checks that a file ends as Parquet does: with its footer, the length
// of that, which the library trusts, and its magic.
func checkEnd(data random) error {
	var end [8]byte
	at := data.Size() - int64(len(end))
	if at < int64(len(parquetMagic)) {
		return io.ErrUnexpectedEOF
	}
	if n, err := data.ReadAt(end[:], at); n < len(end) {
		return noEOF(err)
	}
	if !bytes.Equal(end[4:], parquetMagic) || int64(binary.LittleEndian.Uint32(end[:])) > at-int64(len(parquetMagic)) {
		return io.ErrUnexpectedEOF
	}
	return nil
}

// readBuffer is how much is read at a time while page headers are decoded.
const readBuffer = 32 << 10

// sized is a file with its size.
type sized struct {
	*os.File
	size int64
}

// Size returns the size of the file.
func (f sized) Size() int64 { return f.size }

// onDisk returns the Parquet file at in.Path, or else what r holds, in a
// temporary file.
func onDisk(r io.Reader, in raw.Input) (random, func(), error) {
	if f, err := os.Open(in.Path); err == nil {
		head := make([]byte, len(parquetMagic))
		info, err := f.Stat()
		if _, readErr := io.ReadFull(f, head); err == nil && readErr == nil && bytes.Equal(head, parquetMagic) {
			return sized{f, info.Size()}, func() { f.Close() }, nil
		}
		f.Close()
	}
	f, err := os.CreateTemp("", "strandwise-*")
	if err != nil {
		return nil, nil, noRoom(in, err)
	}
	release := func() { f.Close(); os.Remove(f.Name()) }
	n, err := io.Copy(f, r)
	if err != nil {
		release()
		var known *fault.Error
		if errors.As(err, &known) {
			return nil, nil, err
		}
		return nil, nil, noRoom(in, err)
	}
	return sized{f, n}, release, nil
}

func noRoom(in raw.Input, err error) error {
	return &fault.Error{File: in.Name, Problem: "cannot be unpacked into a temporary file", Err: err, Remedy: "set TMPDIR to a folder with room"}
}

func (s *parquetSource) leaves() []leaf { return s.list }

func (s *parquetSource) metadata(key string) string {
	text, _ := s.file.Lookup(key)
	return text
}

func (s *parquetSource) use(i int, as want) {
	c := s.columns[i]
	c.as, c.leaf = as, i
	s.used = append(s.used, c)
}

func (s *parquetSource) next(n int) (rows int, columns []vector, err error) {
	err = guard(s.in, func() error {
		var err error
		rows, err = s.read(n)
		return err
	})
	return rows, s.vectors, err
}

// read makes the next rows at hand: as many as all columns have decoded.
func (s *parquetSource) read(n int) (int, error) {
	if s.left == 0 {
		if err := s.nextGroup(); err != nil {
			return 0, err
		}
	}
	rows := int(min(int64(n), s.left))
	for _, c := range s.used {
		ready, err := c.ready()
		if isEOF(err) {
			return 0, fmt.Errorf("column %s ends %d rows before its row group", s.list[c.leaf].name, s.left)
		}
		if err != nil {
			return 0, fmt.Errorf("column %s: %w", s.list[c.leaf].name, err)
		}
		rows = min(rows, ready)
	}
	for _, c := range s.used {
		s.vectors[c.leaf] = c.take(rows)
	}
	s.left -= int64(rows)
	return rows, nil
}

// nextGroup opens the next row group that has rows. All columns must have come
// to the end of the one before.
func (s *parquetSource) nextGroup() error {
	for _, c := range s.used {
		if s.group == 0 {
			break
		}
		if _, err := c.ready(); err == nil {
			return fmt.Errorf("column %s has more rows than its row group", s.list[c.leaf].name)
		} else if !isEOF(err) {
			return err
		}
	}
	groups := s.file.Metadata().RowGroups
	for s.group < len(groups) && groups[s.group].NumRows == 0 {
		s.group++
	}
	if s.group == len(groups) {
		return io.EOF
	}
	g := groups[s.group]
	s.group++
	if s.left = g.NumRows; s.left < 0 {
		return errors.New("a row group of fewer than no rows")
	}
	for _, c := range s.used {
		if err := c.open(s.data, &g.Columns[c.index], s.left); err != nil {
			return fmt.Errorf("column %s: %w", s.list[c.leaf].name, err)
		}
	}
	return nil
}

func (s *parquetSource) close() { s.release() }

// noEOF makes an end of file within something an error.
func noEOF(err error) error {
	if isEOF(err) {
		return io.ErrUnexpectedEOF
	}
	return err
}
