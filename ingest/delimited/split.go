package delimited

import (
	"bytes"
	"errors"
)

var (
	errAfterQuote = errors.New("text follows a closing quote")
	errOpenQuote  = errors.New("a quote is opened and not closed")
)

// field is one field of a row.
type field struct {
	start, end int    // in the row, quotes included
	text       []byte // without quotes; valid until the next row
}

// splitter cuts rows into fields as RFC 4180 describes: a field that begins
// with a quote runs to the next quote that is not doubled, over separators and
// line ends. With a space as separator, runs of spaces separate and spaces
// around a row do not count.
type splitter struct {
	sep     byte
	fields  []field
	scratch []byte // quoted text with doubled quotes undone
}

// split cuts the row at the start of b, which ends at a line end, into
// s.fields and returns how many bytes the row takes with its line end. It
// returns errOpenQuote when b ends within quotes.
func (s *splitter) split(b []byte) (int, error) {
	s.fields, s.scratch = s.fields[:0], s.scratch[:0]
	i := s.skip(b, 0)
	for {
		f, err := s.field(b, i)
		if err != nil {
			return 0, err
		}
		s.fields = append(s.fields, f)
		i = s.skip(b, f.end)
		if n := lineEnd(b[i:]); n > 0 {
			return i + n, nil
		}
		if s.sep != ' ' {
			i++
		}
	}
}

// lineEnd returns the length of the line end at the start of b, 0 for none.
func lineEnd(b []byte) int {
	switch {
	case b[0] == '\n':
		return 1
	case b[0] == '\r' && len(b) > 1 && b[1] == '\n':
		return 2
	}
	return 0
}

// skip passes over spaces where they separate.
func (s *splitter) skip(b []byte, i int) int {
	for s.sep == ' ' && b[i] == ' ' {
		i++
	}
	return i
}

func (s *splitter) field(b []byte, i int) (field, error) {
	if b[i] == '"' {
		return s.quoted(b, i)
	}
	end := i
	for b[end] != s.sep && b[end] != '\n' {
		end++
	}
	if b[end] == '\n' && end > i && b[end-1] == '\r' {
		end--
	}
	return field{i, end, b[i:end]}, nil
}

func (s *splitter) quoted(b []byte, i int) (field, error) {
	from := len(s.scratch)
	for at := i + 1; ; {
		n := bytes.IndexByte(b[at:], '"')
		if n < 0 {
			return field{}, errOpenQuote
		}
		s.scratch = append(s.scratch, b[at:at+n]...)
		at += n + 1
		switch {
		case at == len(b):
			return field{}, errOpenQuote
		case b[at] == '"':
			s.scratch = append(s.scratch, '"')
			at++
		case b[at] == s.sep || lineEnd(b[at:]) > 0:
			return field{i, at, s.scratch[from:]}, nil
		default:
			return field{}, errAfterQuote
		}
	}
}
