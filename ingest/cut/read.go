package cut

import (
	"bufio"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"time"

	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// Annotations are those of one file.
type Annotations struct {
	List  []raw.Annotation // in the order of the file; times in seconds
	Epoch bool             // the times count from 1970, in UTC
}

// On returns the annotations on a clock whose 0 is at this many seconds after
// the 0 of theirs: the start of the recording since 1970, if Epoch says so.
func (a Annotations) On(origin float64) []raw.Annotation {
	out := slices.Clone(a.List)
	for i := range out {
		out[i].Start -= origin
		out[i].End -= origin
	}
	return out
}

// since1970 is the time in seconds from which on a number is taken to count
// from 1970: no recording is three years long.
const since1970 = 1e8

// Read reads an annotation file: delimited text (RFC 4180) with a header that
// names the columns start, end and label, and maybe subject, in any order and
// case; other columns are not read. Fields are separated by commas, semicolons
// or tabs, whichever the header has. Lines that start with # are comments.
// Start and end are seconds, with a decimal comma where fields are not
// separated by commas, or time stamps (RFC 3339; one without an offset is
// taken to be UTC). The error is a *fault.Error about a line of the file,
// which name is the user's name for, or an error of r.
func Read(r io.Reader, name string) (Annotations, error) {
	in := reader{name: name}
	buffered := bufio.NewReader(r)
	if mark, _ := buffered.Peek(3); string(mark) == "\xef\xbb\xbf" {
		buffered.Discard(3)
	}
	in.csv = csv.NewReader(buffered)
	in.csv.FieldsPerRecord, in.csv.ReuseRecord = -1, true
	in.csv.Comment, in.csv.TrimLeadingSpace = '#', true
	in.csv.Comma = separator(buffered)
	in.comma = in.csv.Comma != ','
	if err := in.header(); err != nil {
		return Annotations{}, err
	}
	for {
		fields, err := in.csv.Read()
		if err == io.EOF {
			break
		}
		if err == nil {
			err = in.row(fields)
		}
		if err != nil {
			return Annotations{}, in.fault(err)
		}
	}
	if len(in.out.List) == 0 {
		return Annotations{}, &fault.Error{File: name, Problem: "holds no annotations", Remedy: "add a row for each take, or leave the file out"}
	}
	return in.out, nil
}

// separator guesses what separates fields from the first line that is no
// comment.
func separator(r *bufio.Reader) rune {
	head, _ := r.Peek(r.Size()) // what is shorter is all there is
	for line := range strings.Lines(string(head)) {
		if strings.HasPrefix(line, "#") || strings.TrimSpace(line) == "" {
			continue
		}
		for _, c := range ";\t" {
			if strings.ContainsRune(line, c) {
				return c
			}
		}
		break
	}
	return ','
}

// reader is one reading of a file.
type reader struct {
	name    string
	csv     *csv.Reader
	comma   bool // decimal commas are read
	columns int
	at      [4]int // columns of start, end, label and subject, −1 for none
	out     Annotations
}

var names = [4]string{"start", "end", "label", "subject"}

func (r *reader) header() error {
	fields, err := r.csv.Read()
	if err == io.EOF {
		return &fault.Error{File: r.name, Problem: "is empty", Remedy: "give it the columns start, end, label and subject"}
	}
	if err != nil {
		return r.fault(err)
	}
	r.columns, r.at = len(fields), [4]int{-1, -1, -1, -1}
	for i, text := range fields {
		k := slices.Index(names[:], strings.ToLower(strings.TrimSpace(text)))
		if k < 0 {
			continue
		}
		if r.at[k] >= 0 {
			return r.fault(&fault.Error{Problem: fmt.Sprintf("has two columns %s", names[k]), Remedy: "keep one of them"})
		}
		r.at[k] = i
	}
	for k, at := range r.at[:3] {
		if at < 0 {
			return r.fault(&fault.Error{Problem: fmt.Sprintf("has no column %s", names[k]), Remedy: "give it the columns start, end, label and subject"})
		}
	}
	return nil
}

// row reads one annotation.
func (r *reader) row(fields []string) error {
	if len(fields) != r.columns {
		return &fault.Error{Problem: fmt.Sprintf("has %d fields, and the header %d", len(fields), r.columns), Remedy: "give every row all fields, empty ones too"}
	}
	var a raw.Annotation
	a.Line, _ = r.csv.FieldPos(0)
	for k, v := range []*float64{&a.Start, &a.End} {
		text := strings.TrimSpace(fields[r.at[k]])
		var epoch, ok bool
		if *v, epoch, ok = r.when(text); !ok {
			return &fault.Error{Problem: fmt.Sprintf("%s %.40q is neither seconds nor a time stamp", names[k], text), Remedy: "write it like 12.5 or 2026-01-31T12:00:00.5Z"}
		}
		if first := len(r.out.List) == 0 && k == 0; first {
			r.out.Epoch = epoch
		} else if epoch != r.out.Epoch {
			return &fault.Error{Problem: fmt.Sprintf("%s %.40q counts from another time than the first annotation", names[k], text), Remedy: "write all times as seconds or all as time stamps"}
		}
	}
	if a.Label = strings.TrimSpace(fields[r.at[2]]); a.Label == "" {
		return &fault.Error{Problem: "has no label", Remedy: "name what was performed, or remove the row"}
	}
	if r.at[3] >= 0 {
		a.Subject = strings.TrimSpace(fields[r.at[3]])
	}
	r.out.List = append(r.out.List, a)
	return nil
}

// when reads a time in seconds, and tells whether it counts from 1970.
func (r *reader) when(text string) (seconds float64, epoch, ok bool) {
	number := text
	if r.comma {
		number = strings.Replace(text, ",", ".", 1)
	}
	if v, err := strconv.ParseFloat(number, 64); err == nil {
		return v, math.Abs(v) >= since1970, !math.IsNaN(v) && !math.IsInf(v, 0)
	}
	if len(text) > 10 && text[10] == ' ' {
		text = text[:10] + "T" + text[11:]
	}
	for _, layout := range []string{time.RFC3339Nano, "2006-01-02T15:04:05.999999999"} {
		if t, err := time.Parse(layout, text); err == nil {
			return float64(t.Unix()) + float64(t.Nanosecond())/1e9, true, true
		}
	}
	return 0, false, false
}

// fault gives an error its place. Errors of the underlying reader stay as they
// are.
func (r *reader) fault(err error) error {
	var parse *csv.ParseError
	var e *fault.Error
	switch {
	case errors.As(err, &parse):
		return &fault.Error{File: r.name, Line: parse.StartLine, Problem: "is no delimited text", Remedy: "close the quotes, and double those inside a quoted field", Err: parse.Err}
	case errors.As(err, &e) && e.File == "":
		e.File = r.name
		e.Line, _ = r.csv.FieldPos(0)
	}
	return err
}
