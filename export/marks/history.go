package marks

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"slices"
	"strings"
)

// header is the first line of the file.
const header = "time,take,mark,undo,by"

// undone stands in the column undo of a line that takes one back.
const undone = "undo"

// history is what the lines of a file say, one after the other.
type history struct {
	marks map[string]Mark // without those that are none
	made  []change        // marks that can be taken back, the last one last
	whole int64           // bytes of the lines that count
	size  int64           // bytes of the file
	ended bool            // whether the last line that counts has its line end
}

// change is a mark and what it took the place of.
type change struct {
	take   string
	before Mark
}

func newHistory() *history { return &history{marks: map[string]Mark{}, ended: true} }

// line is one line of the file.
type line struct {
	time, take string
	mark       Mark
	undo       bool
	by         string
}

// replay reads the bytes of a file of marks.
func replay(data []byte) (*history, error) {
	h := newHistory()
	h.size = int64(len(data))
	for n := 1; len(data) > 0; n++ {
		text, rest, ended := bytes.Cut(data, []byte("\n"))
		taken := int64(len(data) - len(rest))
		data = rest
		err := h.read(n, string(text))
		if err != nil && !ended {
			return h, nil // torn: it never counted
		}
		if err != nil {
			return nil, fmt.Errorf("line %d: %w; mend or remove the line", n, err)
		}
		h.whole, h.ended = h.whole+taken, ended
	}
	return h, nil
}

// read takes up the line of a number from 1 on.
func (h *history) read(n int, text string) error {
	text = strings.TrimSuffix(text, "\r")
	if n == 1 {
		if strings.TrimPrefix(text, "\ufeff") != header { // a spreadsheet may add the mark of UTF-8
			return fmt.Errorf("the first line is not %s", header)
		}
		return nil
	}
	if text == "" {
		return nil
	}
	l, err := parseLine(text)
	if err == nil {
		h.apply(l)
	}
	return err
}

func parseLine(text string) (line, error) {
	r := csv.NewReader(strings.NewReader(text))
	r.FieldsPerRecord = 5
	fields, err := r.Read()
	var parse *csv.ParseError
	if errors.As(err, &parse) {
		return line{}, parse.Err
	}
	if err != nil {
		return line{}, err
	}
	mark, err := Parse(fields[2])
	if err == nil && fields[3] != "" && fields[3] != undone {
		err = fmt.Errorf("the column undo holds %q; legal is undo or nothing", fields[3])
	}
	if err == nil && fields[1] == "" {
		err = errors.New("no take is named")
	}
	return line{fields[0], fields[1], mark, fields[3] == undone, fields[4]}, err
}

// apply brings the marks to where a line puts them.
func (h *history) apply(l line) {
	before := h.of(l.take)
	switch {
	case l.mark == None:
		delete(h.marks, l.take)
	default:
		h.marks[l.take] = l.mark
	}
	if !l.undo {
		h.made = append(h.made, change{l.take, before})
		return
	}
	for i, c := range slices.Backward(h.made) {
		if c.take == l.take { // the last one, but for lines that several people wrote at once
			h.made = slices.Delete(h.made, i, i+1)
			return
		}
	}
}

func (h *history) of(take string) Mark {
	if m, ok := h.marks[take]; ok {
		return m
	}
	return None
}

// encode returns the line as it stands in the file.
func (l line) encode() ([]byte, error) {
	if strings.ContainsAny(l.take+l.by, "\r\n") {
		return nil, fmt.Errorf("take %q by %q: a line of marks cannot hold a line break", l.take, l.by)
	}
	var b bytes.Buffer
	w := csv.NewWriter(&b)
	undo := ""
	if l.undo {
		undo = undone
	}
	if err := w.Write([]string{l.time, l.take, string(l.mark), undo, l.by}); err != nil {
		return nil, err
	}
	w.Flush()
	return b.Bytes(), w.Error()
}
