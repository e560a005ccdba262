package columnar

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"io"

	"github.com/apache/arrow/go/v15/arrow/ipc"
	"github.com/apache/arrow/go/v15/arrow/memory"
)

// messages reads the messages of a stream, or of the stream that a file wraps
// between its magic and its footer.
// It stands in for the library's own reader of messages, which trusts every
// length it reads and takes an end within a message for the end of the stream.
type messages struct {
	r      io.Reader
	inFile bool
	limit  int // bytes that a buffer of this message may unpack to

	marked   bool   // the end is marked
	unmarked bool   // the stream ended without a mark
	footer   []byte // of a file whose stream has no end mark: its first bytes
	message  *ipc.Message
}

const (
	maxMessage = 1 << 28 // bytes that describe a batch; its values come on top
	minUnpack  = 1 << 26 // bytes that any buffer may unpack to
	maxRatio   = 1 << 10 // by how much a large message may shrink when packed
)

// bounded allocates memory for the library up to a limit, so that a length in
// a damaged file does not take all there is.
type bounded struct {
	memory.Allocator
	limit *int
}

// Allocate allocates within the limit.
func (b bounded) Allocate(size int) []byte {
	if size < 0 || size > *b.limit {
		panic(fmt.Sprintf("a buffer of %d bytes", size))
	}
	return b.Allocator.Allocate(size)
}

// Reallocate grows a buffer within the limit.
func (b bounded) Reallocate(size int, old []byte) []byte {
	if size < 0 || size > *b.limit {
		panic(fmt.Sprintf("a buffer of %d bytes", size))
	}
	return b.Allocator.Reallocate(size, old)
}

// Retain does nothing: messages are garbage collected.
func (m *messages) Retain() {}

// Release does nothing.
func (m *messages) Release() {}

// Message returns the next message, valid until the next call, and io.EOF at
// the end of the stream.
func (m *messages) Message() (*ipc.Message, error) {
	var mark [4]byte
	if _, err := io.ReadFull(m.r, mark[:]); err != nil {
		m.unmarked = isEOF(err) && !m.inFile
		if m.unmarked {
			return nil, io.EOF
		}
		return nil, noEOF(err)
	}
	if !bytes.Equal(mark[:], continuation) {
		if m.inFile && m.message != nil {
			m.footer = mark[:]
			return nil, io.EOF
		}
		return nil, errors.New("no message begins where one should")
	}
	if _, err := io.ReadFull(m.r, mark[:]); err != nil {
		return nil, noEOF(err)
	}
	length := binary.LittleEndian.Uint32(mark[:])
	if length == 0 {
		m.marked = true
		return nil, io.EOF
	}
	return m.read(int64(length))
}

// read reads a message whose description has this length.
func (m *messages) read(length int64) (*ipc.Message, error) {
	if length > maxMessage {
		return nil, fmt.Errorf("a message described by %d bytes", length)
	}
	about, err := readGrowing(m.r, length)
	if err != nil {
		return nil, err
	}
	size, err := checkMessage(about)
	if err != nil {
		return nil, err
	}
	body, err := readGrowing(m.r, size)
	if err != nil {
		return nil, err
	}
	m.limit = minUnpack
	if len(body) > minUnpack/maxRatio {
		m.limit = len(body) * maxRatio
	}
	m.message = ipc.NewMessage(memory.NewBufferBytes(about), memory.NewBufferBytes(body))
	return m.message, nil
}

// readGrowing reads n bytes, taking memory only as they come in.
func readGrowing(r io.Reader, n int64) ([]byte, error) { return readInto(nil, r, n) }

// readInto is readGrowing into memory that is free again.
func readInto(out []byte, r io.Reader, n int64) ([]byte, error) {
	const first = 1 << 20
	if int64(cap(out)) < min(n, first) {
		out = make([]byte, min(n, first))
	}
	out = out[:min(n, int64(cap(out)))]
	for at := 0; ; {
		read, err := io.ReadFull(r, out[at:])
		if err != nil {
			return nil, noEOF(err)
		}
		at += read
		if int64(at) == n {
			return out, nil
		}
		grown := make([]byte, min(n, 2*int64(at)))
		copy(grown, out)
		out = grown
	}
}

// end reads what follows the last message: of a file the footer, which must be
// whole, of a stream nothing.
func (m *messages) end() error {
	if !m.inFile {
		if n, err := io.Copy(io.Discard, m.r); err != nil || n == 0 {
			return err
		}
		return errors.New("more follows after the end of the stream")
	}
	tail, n := append([]byte{}, m.footer...), int64(len(m.footer))
	block := make([]byte, readBuffer)
	for {
		read, err := m.r.Read(block)
		n += int64(read)
		tail = append(tail, block[:read]...)
		tail = tail[max(0, len(tail)-10):]
		if isEOF(err) {
			break
		}
		if err != nil {
			return err
		}
	}
	if len(tail) < 10 || !bytes.Equal(tail[4:], arrowMagic) || int64(binary.LittleEndian.Uint32(tail)) > n-10 {
		return io.ErrUnexpectedEOF
	}
	return nil
}
