package delimited

import (
	"bufio"
	"bytes"
	"encoding/binary"
	"io"
	"unicode/utf16"
	"unicode/utf8"
)

// byteOrder returns the order of UTF-16 text that begins with its mark, nil
// for any other text.
func byteOrder(head []byte) binary.ByteOrder {
	switch {
	case bytes.HasPrefix(head, []byte{0xff, 0xfe}):
		return binary.LittleEndian
	case bytes.HasPrefix(head, []byte{0xfe, 0xff}):
		return binary.BigEndian
	}
	return nil
}

// decoded returns text as UTF-8 without a byte order mark. Text without a mark
// is UTF-8 already, or some other superset of ASCII.
func decoded(r io.Reader) (io.Reader, error) {
	br := bufio.NewReader(r)
	head, err := br.Peek(3)
	if err != nil && err != io.EOF {
		return nil, err
	}
	if bytes.HasPrefix(head, []byte("\ufeff")) {
		_, err := br.Discard(3)
		return br, err
	}
	if order := byteOrder(head); order != nil {
		_, err := br.Discard(2)
		return &utf16Reader{r: br, order: order}, err
	}
	return br, nil
}

// utf16Reader reads UTF-16 as UTF-8. A surrogate without its pair becomes
// U+FFFD; text that ends within a character is io.ErrUnexpectedEOF.
type utf16Reader struct {
	r     io.Reader
	order binary.ByteOrder
	raw   [4096]byte
	n     int    // bytes held in raw, not yet decoded
	out   []byte // decoded, not yet read
	err   error
}

// Read gives decoded text.
func (u *utf16Reader) Read(p []byte) (int, error) {
	for len(u.out) == 0 {
		if u.err != nil {
			return 0, u.err
		}
		u.decode()
	}
	n := copy(p, u.out)
	u.out = u.out[n:]
	return n, nil
}

func (u *utf16Reader) decode() {
	n, err := u.r.Read(u.raw[u.n:])
	u.n += n
	u.err = err
	b := u.raw[:u.n]
	u.out = u.out[:0]
	for len(b) >= 2 {
		c := rune(u.order.Uint16(b))
		size := 2
		if utf16.IsSurrogate(c) {
			if len(b) < 4 && err == nil {
				break // its pair is still to come
			}
			if len(b) >= 4 {
				if pair := utf16.DecodeRune(c, rune(u.order.Uint16(b[2:]))); pair != utf8.RuneError {
					c, size = pair, 4
				}
			}
		}
		u.out = utf8.AppendRune(u.out, c)
		b = b[size:]
	}
	u.n = copy(u.raw[:], b)
	if u.n > 0 && u.err == io.EOF {
		u.err = io.ErrUnexpectedEOF
	}
}
