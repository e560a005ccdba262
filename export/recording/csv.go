package recording

import (
	"bufio"
	"io"
	"math"
	"strconv"
	"strings"

	"strandwise/channels"
)

// CSV writes the long form, one row a frame.
type CSV struct {
	out      *bufio.Writer
	contents *Contents
	row      []byte
}

var _ Writer = (*CSV)(nil)

// NewCSV begins a CSV file of these contents on out. The error tells of
// channels that cannot be told apart by name, or is that of out.
func NewCSV(out io.Writer, c *Contents) (*CSV, error) {
	names, err := header(c.Layout, c.Splits)
	if err != nil {
		return nil, err
	}
	w := &CSV{out: bufio.NewWriterSize(out, 64<<10), contents: c}
	for i, name := range names {
		if i > 0 {
			w.row = append(w.row, ',')
		}
		w.row = appendText(w.row, name)
	}
	_, err = w.out.Write(append(w.row, '\n'))
	return w, err
}

// Add writes the rows of a take.
func (w *CSV) Add(t *channels.Take) error {
	if err := w.contents.check(t, false); err != nil {
		return err
	}
	identity := w.identity(t)
	for i, at := range t.Time {
		row := append(w.row[:0], identity...)
		row = strconv.AppendInt(row, int64(i), 10)
		row = appendNumber(append(row, ','), at)
		for _, v := range t.Frame(i) {
			row = appendNumber(append(row, ','), v)
		}
		w.row = append(row, '\n')
		if _, err := w.out.Write(w.row); err != nil {
			return err
		}
	}
	return nil
}

// identity returns the fields that all rows of a take begin with.
func (w *CSV) identity(t *channels.Take) []byte {
	texts := []string{t.ID, t.Label, t.Subject, t.Session}
	if w.contents.Splits {
		texts = append(texts, string(t.Split))
	}
	var out []byte
	for _, text := range texts {
		out = append(appendText(out, text), ',')
	}
	return out
}

// Close writes what is not yet written.
func (w *CSV) Close() error { return w.out.Flush() }

// appendNumber appends a number in the fewest digits that read back as the same
// number, and nothing for a missing one.
func appendNumber(dst []byte, v float64) []byte {
	if math.IsNaN(v) {
		return dst
	}
	return strconv.AppendFloat(dst, v, 'g', -1, 64)
}

// appendText appends a field of text.
func appendText(dst []byte, text string) []byte {
	if !mustQuote(text) {
		return append(dst, text...)
	}
	dst = append(dst, '"')
	dst = append(dst, strings.ReplaceAll(text, `"`, `""`)...)
	return append(dst, '"')
}

// mustQuote tells whether a text cannot stand as it is. Beyond RFC 4180 these
// are what might be taken for another separator, for a comment, or trimmed.
func mustQuote(text string) bool {
	return strings.ContainsAny(text, ",;\t\"\r\n") || strings.HasPrefix(text, "#") || strings.TrimSpace(text) != text
}
