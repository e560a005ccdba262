package columnar

import (
	"bufio"
	"io"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/apache/arrow/go/v15/arrow/ipc"
	"github.com/apache/arrow/go/v15/arrow/memory"

	"strandwise/ingest/raw"
)

// arrowSource reads the record batches of an Arrow file or stream, one after
// another. A file is read as the stream that it wraps, so that it too may come
// from a pipe.
type arrowSource struct {
	in       raw.Input
	messages *messages
	reader   *ipc.Reader
	columns  []arrowColumn // of every leaf
	list     []leaf
	used     []*arrowColumn
	batch    arrow.Record // nil before the first
	row      int64        // of the batch, next to be read
	vectors  []vector
}

// openArrow opens an Arrow stream, or the one within a file.
func openArrow(r io.Reader, inFile bool, in raw.Input) (source, error) {
	s := &arrowSource{in: in, messages: &messages{r: bufio.NewReaderSize(r, readBuffer), inFile: inFile}}
	err := guard(in, func() error {
		reader, err := newArrowReader(s.messages)
		if err != nil {
			return noEOF(err)
		}
		s.reader = reader
		s.columns = arrowLeaves(reader.Schema())
		for _, c := range s.columns {
			s.list = append(s.list, c.leaf)
		}
		return nil
	})
	if err != nil {
		return nil, err
	}
	s.vectors = make([]vector, len(s.list))
	return s, nil
}

// newArrowReader reads the schema of a stream.
func newArrowReader(m *messages) (*ipc.Reader, error) {
	return ipc.NewReaderFromMessageReader(m, ipc.WithAllocator(bounded{memory.NewGoAllocator(), &m.limit}))
}

func (s *arrowSource) leaves() []leaf { return s.list }

func (s *arrowSource) metadata(key string) string {
	metadata := s.reader.Schema().Metadata()
	text, _ := metadata.GetValue(key)
	return text
}

func (s *arrowSource) use(i int, as want) {
	c := &s.columns[i]
	c.at, c.as = i, as
	s.used = append(s.used, c)
}

func (s *arrowSource) next(n int) (rows int, columns []vector, err error) {
	err = guard(s.in, func() error {
		for s.batch == nil || s.row == s.batch.NumRows() {
			if err := s.nextBatch(); err != nil {
				return err
			}
		}
		rows = int(min(int64(n), s.batch.NumRows()-s.row))
		for _, c := range s.used {
			v, err := c.vector(int(s.row), int(s.row)+rows)
			if err != nil {
				return err
			}
			s.vectors[c.at] = v
		}
		s.row += int64(rows)
		return nil
	})
	return rows, s.vectors, err
}

func (s *arrowSource) nextBatch() error {
	if !s.reader.Next() {
		if err := s.reader.Err(); err != nil {
			return noEOF(err)
		}
		if err := s.messages.end(); err != nil {
			return err
		}
		if s.messages.unmarked {
			s.in.Notice("has no mark at its end: make sure that it is complete", "")
		}
		return io.EOF
	}
	s.batch, s.row = s.reader.Record(), 0
	for _, c := range s.used {
		if err := c.open(s.batch); err != nil {
			return err
		}
	}
	return nil
}

func (s *arrowSource) close() { s.reader.Release() }
