package delimited

import (
	"bytes"
	"errors"
	"io"
	"math"

	"strandwise/ingest/raw"
)

// Rows reads a table row by row, for formats of text that say elsewhere what
// their columns are. Numbers have a decimal point; text is quoted as RFC 4180
// describes and encoded as for [Format]. Blank lines are passed over, and no
// line is a comment. Errors are those of the contract of [raw.Format].
type Rows struct {
	d      reader
	fields [][]byte
}

// NewRows begins to read the text of a file, called name in messages, whose
// fields are separated by sep. It holds 256 KiB of text, and at most one row
// of up to 16 MiB.
func NewRows(r io.Reader, name string, sep byte) (*Rows, error) {
	t := &Rows{d: reader{in: raw.Input{Name: name}, line: 1, split: splitter{sep: sep}}}
	r, err := decoded(r)
	if err != nil {
		return nil, t.d.broken(err)
	}
	t.d.block = newBlock(r)
	return t, nil
}

// Numbers reads the next row into dst if it is nothing but len(dst) numbers,
// and returns its 1-based line. Otherwise ok is false, dst is undefined, and
// the row is left for Text to read. dst must not be empty.
func (t *Rows) Numbers(dst []float64) (line int, ok bool) {
	k := t.d.block
	if len(k.lines()) == 0 && k.extend() != nil { // Text meets the error again
		return 0, false
	}
	b := k.lines()
	i := values(dst, b, 0, t.d.split.sep, '.')
	if i < 0 {
		return 0, false
	}
	n := lineEnd(b[i:])
	if n == 0 {
		return 0, false
	}
	k.pos += i + n
	t.d.line++
	return t.d.line - 1, true
}

// Text reads the next row as fields without their quotes, and returns its
// 1-based line. The fields are valid until the next row is read. At the end it
// returns io.EOF.
func (t *Rows) Text() (fields [][]byte, line int, err error) {
	k := t.d.block
	for {
		if len(k.lines()) == 0 {
			if err := k.extend(); err != nil {
				return nil, 0, t.d.broken(err)
			}
		}
		b := k.lines()
		if isBlank(b) {
			k.pos += bytes.IndexByte(b, '\n') + 1
			t.d.line++
			continue
		}
		n, err := t.d.split.split(b)
		if err == errOpenQuote {
			if more := k.double(); more == nil {
				continue
			} else if more != io.EOF {
				err = more
			}
		}
		if err != nil {
			return nil, 0, t.d.broken(err)
		}
		line = t.d.line
		t.d.line += bytes.Count(b[:n], []byte{'\n'})
		k.pos += n
		t.fields = t.fields[:0]
		for _, f := range t.d.split.fields {
			t.fields = append(t.fields, f.text)
		}
		return t.fields, line, nil
	}
}

// Number reads a field as a number with a decimal point, spaces around it
// aside. A field that is empty or says that there is no value, such as n/a or
// NaN, is missing and gives NaN. The error says what is wrong with any other
// field.
func Number(field []byte) (v float64, missing bool, err error) {
	v, how := read(field, '.')
	switch how {
	case isNumber:
		return v, false, nil
	case isMissing:
		return math.NaN(), true, nil
	case isInfinite:
		return math.NaN(), false, errors.New(quote(field) + " is no finite number")
	}
	return math.NaN(), false, errors.New(quote(field) + " is not a number")
}
