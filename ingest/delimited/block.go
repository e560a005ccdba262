package delimited

import (
	"bytes"
	"errors"
	"io"
)

const (
	blockSize = 256 << 10
	maxRow    = 16 << 20 // bytes of one row, so that a file without line ends is refused and not held
)

var errLongRow = errors.New("row is too long")

// block is a window on the text of a file that always ends at a line end.
type block struct {
	r        io.Reader
	buf      []byte
	pos, end int   // buf[pos:end] is not yet read
	full     int   // buf[pos:full] is whole lines, each with its line end
	err      error // why r gives no more
}

func newBlock(r io.Reader) *block { return &block{r: r, buf: make([]byte, blockSize)} }

// lines returns the whole lines at hand.
func (k *block) lines() []byte { return k.buf[k.pos:k.full] }

// extend makes at least one more whole line available. It moves the lines at
// hand. The last line of a file gets a line end if it has none. The error is
// that of the reader, io.EOF at the end.
func (k *block) extend() error {
	if k.pos > 0 {
		copy(k.buf, k.buf[k.pos:k.end])
		k.end, k.full, k.pos = k.end-k.pos, k.full-k.pos, 0
	}
	for had := k.full; k.full == had; {
		if k.err != nil {
			return k.err
		}
		if err := k.read(); err != nil {
			return err
		}
	}
	return nil
}

// double makes twice as much text available, or all that is left. So a row that
// goes on over many lines is not cut again for each of them.
func (k *block) double() error {
	had := len(k.lines())
	for len(k.lines()) < 2*had {
		if err := k.extend(); err != nil && len(k.lines()) > had {
			return nil
		} else if err != nil {
			return err
		}
	}
	return nil
}

// read reads once into the block, leaving room for a line end.
func (k *block) read() error {
	if k.end+1 >= len(k.buf) {
		if len(k.buf) >= maxRow {
			return errLongRow
		}
		k.buf = append(k.buf, make([]byte, len(k.buf))...)
	}
	n := 0
	for tries := 0; n == 0 && k.err == nil; tries++ {
		if tries == 100 {
			return io.ErrNoProgress
		}
		n, k.err = k.r.Read(k.buf[k.end : len(k.buf)-1])
	}
	k.end += n
	if k.err == io.EOF && k.end > 0 && k.buf[k.end-1] != '\n' {
		k.buf[k.end] = '\n'
		k.end++
	}
	if i := bytes.LastIndexByte(k.buf[k.full:k.end], '\n'); i >= 0 {
		k.full += i + 1
	}
	return nil
}
