package delimited

import "bytes"

// binaryByte returns the position of the first byte that no text holds, or -1.
func binaryByte(head []byte) int {
	return bytes.IndexFunc(head, func(r rune) bool {
		return r < ' ' && r != '\t' && r != '\n' && r != '\r' && r != '\f'
	})
}

// isRemark tells whether a line says nothing about the data: it is blank, or a
// comment.
func isRemark(line []byte) bool { return isBlank(line) || isComment(line) }

func isBlank(line []byte) bool {
	for _, c := range line {
		if c == '\n' {
			return true
		}
		if c != ' ' && c != '\r' {
			return false
		}
	}
	return true
}

func isComment(line []byte) bool {
	return line[0] == '#' || line[0] == '%' || bytes.HasPrefix(line, []byte("//"))
}

// firstLines returns the first two lines of the text that are no remarks; what
// is missing is empty.
func firstLines(text []byte) (out [2][]byte) {
	found := 0
	for len(text) > 0 && found < 2 {
		n := bytes.IndexByte(text, '\n') + 1
		if n == 0 {
			break
		}
		if !isRemark(text[:n]) {
			out[found] = text[:n]
			found++
		}
		text = text[n:]
	}
	return out
}

// separatorOf chooses the separator: the first of tab, semicolon, comma and
// space that cuts the header and the first row into the same number of fields,
// more than one; failing that, the first but space that cuts the header at
// all. The header has width fields where it is not part of the text.
func separatorOf(text []byte, width int) byte {
	lines := firstLines(text)
	header := func(sep byte) int { return countFields(lines[0], sep) }
	row := func(sep byte) int { return countFields(lines[1], sep) }
	if width > 0 {
		header, row = func(byte) int { return width }, header
	}
	for _, sep := range []byte("\t;, ") {
		if n := header(sep); n > 1 && row(sep) == n {
			return sep
		}
	}
	for _, sep := range []byte("\t;") {
		if countFields(lines[0], sep) > 1 {
			return sep
		}
	}
	return ','
}

// countFields returns the number of fields of a line, 0 when it cannot be cut.
func countFields(line []byte, sep byte) int {
	if len(line) == 0 {
		return 0
	}
	s := splitter{sep: sep}
	if _, err := s.split(line); err != nil {
		return 0
	}
	return len(s.fields)
}
