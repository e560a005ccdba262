package bvh

import (
	"bufio"
	"bytes"
	"errors"
	"io"
	"math"
	"strconv"
	"strings"

	"strandwise/ingest/fault"
)

const (
	byteOrderMark = "\ufeff"
	longestLine   = 16 << 20 // bytes
	largestNumber = 1e9      // beyond any angle or length, and small enough for sums to stay finite
)

// text reads the lines and words of a file.
type text struct {
	lines *bufio.Scanner
	file  string
	line  int      // 1-based number of the line at hand
	words []string // left of the line at hand
}

func newText(r io.Reader, file string) *text {
	t := &text{lines: bufio.NewScanner(r), file: file}
	t.lines.Buffer(make([]byte, 64<<10), longestLine)
	return t
}

// next goes to the next line that is not blank. It returns nil, nil at the end.
// The line is valid until the next call.
func (t *text) next() ([]byte, error) {
	for t.lines.Scan() {
		t.line++
		b := t.lines.Bytes()
		if t.line == 1 {
			b = bytes.TrimPrefix(b, []byte(byteOrderMark))
		}
		if b = bytes.TrimSpace(b); len(b) > 0 {
			return b, nil
		}
	}
	err := t.lines.Err()
	var known *fault.Error
	switch {
	case err == nil || errors.As(err, &known):
		return nil, err
	case errors.Is(err, bufio.ErrTooLong):
		t.line++
		return nil, t.fault("is longer than 16 MiB", "check that this is a BVH file")
	}
	return nil, &fault.Error{File: t.file, Line: t.line, Problem: "cannot be read", Err: err, Remedy: "copy or record it again"}
}

// word returns the next word of the hierarchy, on whatever line it stands. A
// brace is a word of its own. The end of the file is a fault.
func (t *text) word() (string, error) {
	for len(t.words) == 0 {
		b, err := t.next()
		if err != nil {
			return "", err
		}
		if b == nil {
			return "", t.fault("ends before the word MOTION", "copy or export the file again")
		}
		t.words = strings.Fields(braces.Replace(string(b)))
	}
	w := t.words[0]
	t.words = t.words[1:]
	return w, nil
}

var braces = strings.NewReplacer("{", " { ", "}", " } ")

// rest returns the words left on the line at hand up to an opening brace.
func (t *text) rest() string {
	n := 0
	for n < len(t.words) && t.words[n] != "{" {
		n++
	}
	name := strings.Join(t.words[:n], " ")
	t.words = t.words[n:]
	return name
}

// number reads one number.
func (t *text) number(word string) (float64, error) {
	v, err := strconv.ParseFloat(word, 64)
	if err != nil || !(math.Abs(v) <= largestNumber) {
		return 0, t.numberFault(word)
	}
	return v, nil
}

// numberFault says what is wrong with a word that [text.number] refuses.
func (t *text) numberFault(word string) *fault.Error {
	v, err := strconv.ParseFloat(word, 64)
	switch {
	case errors.Is(err, strconv.ErrSyntax) && strings.Contains(word, ","):
		return t.fault(quote(word)+" is not a number", "write numbers with a decimal point, and blanks between them")
	case errors.Is(err, strconv.ErrSyntax):
		return t.fault(quote(word)+" is not a number", "repair the value")
	case math.IsNaN(v):
		return t.fault(quote(word)+" is not a finite number", "fill the gap, or leave out the frames")
	}
	return t.fault(quote(word)+" is beyond any angle or length", "repair the value")
}

// fault reports a problem at the line at hand.
func (t *text) fault(problem, remedy string) *fault.Error {
	return &fault.Error{File: t.file, Line: t.line, Problem: problem, Remedy: remedy}
}

// quote shows a word of the file, cut when it is long.
func quote(word string) string {
	const most = 40
	if len(word) > most {
		word = word[:most] + "…"
	}
	return strconv.Quote(word)
}

// abbreviate joins names, leaving out most of a long list.
func abbreviate(names []string) string {
	const most = 4
	if len(names) <= most {
		return strings.Join(names, ", ")
	}
	return strings.Join(names[:most], ", ") + " and " + strconv.Itoa(len(names)-most) + " more"
}
