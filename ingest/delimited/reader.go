package delimited

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"math"
	"strings"

	"strandwise/channels"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
	"strandwise/ingest/table"
)

var errStopped = errors.New("receiver stopped")

// reader turns the rows of one file into takes.
type reader struct {
	in    raw.Input
	yield func(*raw.Take, error) bool
	slow  bool // read every row by the slow path, for tests

	block  *block
	split  splitter
	line   int  // next to be read, from 1
	remark bool // a comment was met
	point  byte // decimal mark, noPoint while undecided
	header int  // line of the header, 0 when the columns are named from outside
	table  *header
	steps  []step

	take   *raw.Take    // being read, nil before the first row
	key    [keys]string // its identity
	due    int          // line in which the next frame of the take would follow on
	frames int          // of the take before, the first guess at the size of the next
	now    float64      // time of the row being read
	one    [1]float64   // a value on its way
}

// read reads the whole file.
func (d *reader) read(r io.Reader) error {
	if err := d.open(r); err != nil {
		return err
	}
	if err := d.readColumns(); err != nil {
		return err
	}
	for {
		for d.take != nil && !d.slow && len(d.block.lines()) > 0 {
			n := d.plainRow(d.block.lines())
			if n == 0 {
				break
			}
			d.block.pos += n
			d.stand(d.line)
			d.line++
		}
		row, line, err := d.next()
		if err == io.EOF {
			return d.end()
		}
		if err != nil {
			return err
		}
		if err := d.row(row, line); err != nil {
			return err
		}
	}
}

// open finds the encoding and the separator.
func (d *reader) open(r io.Reader) error {
	r, err := decoded(r)
	if err != nil {
		return d.broken(err)
	}
	d.block, d.line = newBlock(r), 1
	for err == nil && (d.block.end < raw.SniffSize || len(firstLines(d.block.lines())[1]) == 0) {
		err = d.block.extend()
	}
	head := d.block.buf[:d.block.end]
	if len(head) == 0 && err != io.EOF {
		return d.broken(err)
	}
	if i := binaryByte(head[:min(len(head), raw.SniffSize)]); i >= 0 {
		return &fault.Error{File: d.in.Name, Offset: int64(i), Problem: "is binary data, not text", Remedy: "leave it out, or convert it to delimited text in UTF-8"}
	}
	d.split.sep, d.point = separatorOf(d.block.lines(), len(d.in.Columns)), noPoint
	if d.split.sep == ',' {
		d.point = '.'
	}
	return nil
}

// readColumns reads the header, if the columns are not named from outside.
func (d *reader) readColumns() error {
	names := d.in.Columns
	if names == nil {
		_, line, err := d.next()
		if err == io.EOF {
			return d.fault(0, "", "is empty", "leave it out or record it again")
		}
		if err != nil {
			return err
		}
		numbers := true
		for _, f := range d.split.fields {
			_, how := d.number(f.text)
			numbers = numbers && how == isNumber
			names = append(names, string(f.text))
		}
		d.header = line
		if numbers {
			return d.fault(line, "", "is all numbers where a header should name the columns", "name the columns with --columns")
		}
	}
	for _, name := range names {
		if what := table.Unclean(strings.TrimSpace(name)); what != "" {
			return d.fault(d.header, "", "the header "+what, "save the file as UTF-8 text with one line per row")
		}
	}
	var err error
	if d.table, err = readHeader(names); err != nil {
		return d.fault(d.header, "", err.Error(), "rename one of them")
	}
	return nil
}

// next returns the next row that is no remark, cut into d.split.fields. It is
// valid until the next call.
func (d *reader) next() (row []byte, line int, err error) {
	for {
		if len(d.block.lines()) == 0 {
			if err := d.block.extend(); err != nil {
				return nil, 0, d.broken(err)
			}
		}
		b := d.block.lines()
		if isRemark(b) {
			d.skip(b)
			continue
		}
		n, err := d.split.split(b)
		if err == errOpenQuote {
			if more := d.block.double(); more == nil {
				continue
			} else if more != io.EOF {
				err = more
			}
		}
		if err != nil {
			return nil, 0, d.broken(err)
		}
		line = d.line
		d.line += bytes.Count(b[:n], []byte{'\n'})
		d.block.pos += n
		return b[:n], line, nil
	}
}

// skip passes over a blank line or a comment.
func (d *reader) skip(b []byte) {
	if !d.remark && isComment(b) {
		d.remark = true
		d.in.Notice("comment lines are left out", fmt.Sprintf("the first is line %d", d.line))
	}
	d.block.pos += bytes.IndexByte(b, '\n') + 1
	d.line++
}

// row reads a row by the slow path.
func (d *reader) row(row []byte, line int) error {
	fields := d.split.fields
	if len(fields) != len(d.table.columns) {
		return d.wrongCount(line)
	}
	if d.steps == nil {
		if err := d.settle(line); err != nil {
			return err
		}
	}
	if err := d.identify(line); err != nil {
		return err
	}
	now := float64(len(d.take.Time))
	for i, c := range d.table.columns {
		var err error
		switch text := fields[i].text; c.role {
		case channelRole:
			var v float64
			if v, err = d.value(text, line, c.name); err == nil {
				d.take.Data = append(d.take.Data, v)
			}
		case clockRole:
			now, err = d.time(text, line)
		case blankRole:
			if len(bytes.TrimSpace(text)) > 0 {
				err = d.fault(line, "", fmt.Sprintf("column %d holds %s but has no name", i+1, quote(text)), "name the column in the header")
			}
		}
		if err != nil {
			return err
		}
	}
	d.take.Time = append(d.take.Time, now)
	d.stand(line)
	d.remember(row, fields)
	return nil
}

// stand notes the line of the frame that was added last.
func (d *reader) stand(line int) {
	if line != d.due {
		d.take.Jumps = append(d.take.Jumps, raw.Jump{Frame: len(d.take.Time) - 1, Line: line})
	}
	d.due = line + 1
}

func (d *reader) wrongCount(line int) error {
	fields, want := d.split.fields, len(d.table.columns)
	remedy := "repair the line"
	if len(fields) == want+1 && len(fields[want].text) == 0 {
		remedy = "remove the separator at the end of the rows, or put one at the end of the header too"
	}
	return d.fault(line, "", fmt.Sprintf("has %d fields where there are %d columns", len(fields), want), remedy)
}

// settle learns from the first row which columns are channels and how time is
// written.
func (d *reader) settle(line int) error {
	fields := d.split.fields
	isText := func(i int) bool {
		_, how := d.number(fields[i].text)
		return how == isText
	}
	err := d.table.settle(isText, d.unwanted)
	if err != nil {
		return d.fault(d.header, "", err.Error(), "rename one of them")
	}
	if len(d.table.layout.Columns) == 0 {
		return d.fault(line, "", "has no channels: no column but those of identity and time holds numbers", "check the separator, and that there is one header line")
	}
	for i, c := range d.table.columns {
		switch {
		case c.role == leftOutRole && !d.unwanted(i):
			d.in.Notice(fmt.Sprintf("column %q is no channel and is left out", c.name), "it begins with "+quote(fields[i].text))
		case c.role == clockRole:
			d.number(fields[i].text) // may decide the decimal mark
			d.table.clock.settle(fields[i].text, d.point)
		}
	}
	if c := &d.table.clock; c.Unit == "" && !c.Frames {
		c.Unit = d.in.TimeUnit
	}
	d.steps = plan(d.table.columns)
	return nil
}

// unwanted tells whether the user leaves a column out.
func (d *reader) unwanted(i int) bool {
	if d.in.LeaveOut == nil {
		return false
	}
	name := d.table.columns[i].name
	ch, _ := channels.ParseHeader(name)
	return d.in.LeaveOut(name) || d.in.LeaveOut(ch.Name)
}

// number reads a field by the slow path. The first number with a decimal mark
// decides which mark the file uses.
func (d *reader) number(text []byte) (float64, reading) {
	if d.point == noPoint {
		for _, mark := range []byte(".,") {
			if v, how := read(text, mark); how == isNumber && bytes.IndexByte(text, mark) >= 0 {
				d.point = mark
				return v, how
			}
		}
	}
	return read(text, d.point)
}

// value reads the value of a channel, NaN where it is missing.
func (d *reader) value(text []byte, line int, name string) (float64, error) {
	v, how := d.number(text)
	if how == isNumber || how == isMissing {
		return v, nil
	}
	return 0, d.notNumber(text, how, line, name)
}

func (d *reader) notNumber(text []byte, how reading, line int, name string) error {
	const gap = "fill the gap, or leave the take out"
	switch how {
	case isMissing:
		if len(bytes.TrimSpace(text)) == 0 {
			return d.fault(line, name, "has no value", gap)
		}
		return d.fault(line, name, fmt.Sprintf("has no value (%s)", bytes.TrimSpace(text)), gap)
	case isInfinite:
		return d.fault(line, name, quote(text)+" is no finite number", gap)
	}
	for mark, words := range map[byte]string{'.': "point", ',': "comma"} {
		if _, how := read(text, mark); how == isNumber && d.split.sep != ',' {
			return d.fault(line, name, fmt.Sprintf("%s has a decimal %s, unlike the rows before", quote(text), words), "write all numbers alike")
		}
	}
	return d.fault(line, name, quote(text)+" is not a number", "repair the value, or leave the take out")
}

// time reads the time of a row. Whether it comes after the one before is for
// the stages behind to judge.
func (d *reader) time(text []byte, line int) (float64, error) {
	c, times := &d.table.clock, d.take.Time
	var now float64
	var how reading
	if c.kind == near {
		now, how = d.number(text)
	} else {
		var whole int64
		var fraction float64
		whole, fraction, how = c.split(text, d.point)
		now = c.At(whole, fraction, len(times) == 0)
	}
	switch {
	case how == isText && c.kind == stamps || how == isText && len(times) == 0 && !c.Frames:
		return 0, d.fault(line, c.Name, quote(text)+" is neither a number nor a time as 2006-01-02T15:04:05.000Z", "write all times alike")
	case how != isNumber:
		return 0, d.notNumber(text, how, line, c.Name)
	case c.Frames && now != math.Trunc(now):
		return 0, d.fault(line, c.Name, quote(text)+" is no whole number", "name the column time if it holds time")
	}
	return now, nil
}

// end finishes the last take.
func (d *reader) end() error {
	if d.take == nil {
		return d.fault(d.header, "", "has a header but no rows", "leave it out or record it again")
	}
	return d.finish()
}
