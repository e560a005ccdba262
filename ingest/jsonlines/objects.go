package jsonlines

import (
	"bytes"
	"fmt"
	"io"
)

const (
	blockSize = 256 << 10
	maxObject = 256 << 20 // bytes of one object, so that a file without ends is refused and not held
)

// objects cuts text into objects that follow each other, or stand in one list.
type objects struct {
	r        io.Reader
	buf      []byte
	pos, end int   // buf[pos:end] is not yet read
	err      error // why r gives no more
	started  bool
	line     int  // of pos, from 1
	list     int  // line in which a list of objects begins, 0 for none
	closed   bool // the list is closed
	comma    bool // a comma was read, so an object must follow
	any      bool // an object was read
}

// textError is what is wrong with the text in a line.
type textError struct {
	line    int
	problem string
	remedy  string
}

// Error gives the problem.
func (e *textError) Error() string { return e.problem }

func newObjects(r io.Reader) *objects { return &objects{r: r, buf: make([]byte, blockSize), line: 1} }

// begin goes to the start of the next object. It returns io.EOF when there is
// none, and keeps as much text at hand as fits the buffer.
func (o *objects) begin() error {
	if err := o.start(); err != nil && err != io.EOF {
		return err
	}
	for {
		c, err := o.peek()
		if err == io.EOF && o.list > 0 && !o.closed {
			return &textError{o.list, "opens a list of objects that is not closed", "complete the file, or record it again"}
		}
		if err != nil {
			return err
		}
		switch {
		case c == '{' && !o.closed && (o.list == 0 || !o.any || o.comma):
			o.any, o.comma = true, false
			return nil
		case c == '[' && !o.any && o.list == 0:
			o.list = o.line
		case c == ',' && o.list > 0 && o.any && !o.comma && !o.closed:
			o.comma = true
		case c == ']' && o.list > 0 && !o.comma && !o.closed:
			o.closed = true
		default:
			return &textError{o.line, fmt.Sprintf("has %q where an object should begin", rune(c)), "write one object after another, or all in one list with commas between them"}
		}
		o.pos++
	}
}

// start passes over the mark that text may begin with.
func (o *objects) start() error {
	for !o.started && o.end < len(mark) && o.err == nil {
		if err := o.fill(); err != nil {
			return err
		}
	}
	if !o.started && bytes.HasPrefix(o.buf[:o.end], mark) {
		o.pos = len(mark)
	}
	o.started = true
	return nil
}

// peek passes over white space and returns the byte after it.
func (o *objects) peek() (byte, error) {
	for {
		for ; o.pos < o.end; o.pos++ {
			switch c := o.buf[o.pos]; c {
			case '\n':
				o.line++
			case ' ', '\t', '\r':
			default:
				return c, o.room()
			}
		}
		if err := o.fill(); err != nil {
			return 0, err
		}
	}
}

// room reads more when little text is left at hand, so that most objects are
// there as a whole.
func (o *objects) room() error {
	if o.end-o.pos >= blockSize/8 || o.err != nil {
		return nil
	}
	if err := o.fill(); err != io.EOF {
		return err
	}
	return nil
}

// text returns the text at hand, which begins with an object that may not end
// within it, and a byte 0 behind it.
func (o *objects) text() []byte { return o.buf[o.pos : o.end+1] }

// whole returns the object that the text at hand begins with, valid until the
// next call of any method.
func (o *objects) whole() ([]byte, error) {
	depth, quoted, escaped := 0, false, false
	for i := 0; ; i++ {
		if o.pos+i == o.end {
			if err := o.fill(); err == io.EOF {
				return nil, &textError{o.line, "begins an object that is not complete", "complete it, or take it out"}
			} else if err != nil {
				return nil, err
			}
		}
		switch c := o.buf[o.pos+i]; {
		case escaped:
			escaped = false
		case quoted && c == '\\':
			escaped = true
		case c == '"':
			quoted = !quoted
		case quoted:
		case c == '{' || c == '[':
			depth++
		case c == '}' || c == ']':
			if depth--; depth == 0 {
				return o.buf[o.pos : o.pos+i+1], nil
			}
		}
	}
}

// skip passes over n bytes of an object.
func (o *objects) skip(n int) {
	o.line += bytes.Count(o.buf[o.pos:o.pos+n], []byte{'\n'})
	o.pos += n
}

// fill reads more text behind that at hand, which it may move. It returns io.EOF
// at the end.
func (o *objects) fill() error {
	if o.err != nil {
		return o.err
	}
	if o.pos > 0 {
		o.end = copy(o.buf, o.buf[o.pos:o.end])
		o.pos = 0
	}
	if o.end == len(o.buf)-1 {
		if o.end >= maxObject {
			return &textError{o.line, fmt.Sprintf("begins an object of more than %d MiB", maxObject>>20), "check that it ends in a brace and that quotes are closed"}
		}
		o.buf = append(o.buf, make([]byte, len(o.buf))...)
	}
	for tries := 0; tries < 100; tries++ {
		n, err := o.r.Read(o.buf[o.end : len(o.buf)-1])
		o.end, o.err = o.end+n, err
		o.buf[o.end] = 0
		if n > 0 {
			return nil
		}
		if err != nil {
			return err
		}
	}
	return io.ErrNoProgress
}
