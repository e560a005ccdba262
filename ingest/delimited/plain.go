package delimited

import (
	"bytes"
	"math"
	"slices"

	"strandwise/ingest/table"
)

// step is what the plain reading of a row does with one run of columns.
type step struct {
	role  role
	first int    // column it begins with
	n     int    // how many columns
	text  []byte // of the row before, for runs of identityRole
}

// plan groups the columns into steps: runs of channels are read in one go, and
// runs of identity columns compared in one go.
func plan(columns []column) []step {
	var out []step
	for i, c := range columns {
		last := len(out) - 1
		joins := c.role == channelRole || c.role == identityRole
		if joins && last >= 0 && out[last].role == c.role {
			out[last].n++
			continue
		}
		out = append(out, step{role: c.role, first: i, n: 1})
	}
	return out
}

// remember notes the identity texts of a row, for the next one to be compared
// with.
func (d *reader) remember(row []byte, fields []field) {
	for s := range d.steps {
		if st := &d.steps[s]; st.role == identityRole {
			st.text = append(st.text[:0], row[fields[st.first].start:fields[st.first+st.n-1].end]...)
		}
	}
}

// plainRow reads the row at the start of b into the take, provided it is plain:
// it belongs to the take of the row before, word for word, its channels are
// numbers without quotes, and its time is later. It returns the bytes read, 0
// for any other row, which then changes nothing and is read by the slow path.
// So the slow path alone decides what is right and wrong.
func (d *reader) plainRow(b []byte) int {
	if isComment(b) {
		return 0
	}
	t, w := d.take, len(d.table.layout.Columns)
	had := len(t.Data)
	if cap(t.Data) < had+w {
		t.Data = slices.Grow(t.Data, had+w) // doubled: by less, a long take is copied often
	}
	t.Data = t.Data[:had+w]
	i, ok := d.plainFields(b, t.Data[had:])
	if !ok {
		t.Data = t.Data[:had]
		return 0
	}
	t.Time = append(t.Time, d.now)
	return i
}

// plainFields reads a plain row's channels into dst and its time into d.now.
func (d *reader) plainFields(b []byte, dst []float64) (end int, ok bool) {
	i := d.pad(b, 0)
	d.now = float64(len(d.take.Time))
	for s := range d.steps {
		at := i
		switch st := &d.steps[s]; st.role {
		case channelRole:
			if i = values(dst[:st.n], b, i, d.split.sep, d.point); i < 0 {
				return 0, false
			}
			dst = dst[st.n:]
		case identityRole:
			if !bytes.HasPrefix(b[i:], st.text) {
				return 0, false
			}
			i += len(st.text)
		case clockRole:
			if i = d.plainTime(b, i); i < 0 {
				return 0, false
			}
		case leftOutRole:
			for b[i] != d.split.sep && b[i] != '\n' && b[i] != '"' {
				i++
			}
		}
		if i == at && d.split.sep == ' ' { // runs of spaces leave no empty field between them
			return 0, false
		}
		at = i
		i = d.pad(b, i)
		if s == len(d.steps)-1 {
			break
		}
		if b[at] != d.split.sep {
			return 0, false
		}
		if at == i {
			i++
		}
	}
	n := lineEnd(b[i:])
	return i + n, n > 0
}

// pad passes over the spaces of a row separated by spaces.
func (d *reader) pad(b []byte, i int) int {
	for d.split.sep == ' ' && b[i] == ' ' {
		i++
	}
	return i
}

// plainTime reads a time later than the one before into d.now and returns
// where it ends, -1 for anything else.
func (d *reader) plainTime(b []byte, i int) int {
	c, times := &d.table.clock, d.take.Time
	switch c.kind {
	case near:
		i = values(d.one[:], b, i, d.split.sep, d.point)
		d.now = d.one[0]
		if c.Frames && d.now != math.Trunc(d.now) {
			return -1
		}
	case far:
		var whole int64
		var fraction float64
		whole, fraction, i = farValue(b, i, d.point)
		d.now = c.At(whole, fraction, len(times) == 0)
	case stamps:
		first := i
		for b[i] != d.split.sep && b[i] != '\n' && b[i] != '\r' {
			i++
		}
		whole, fraction, ok := table.Stamp(string(b[first:i]))
		if !ok {
			return -1
		}
		d.now = c.At(whole, fraction, len(times) == 0)
	}
	if n := len(times); n > 0 && !(d.now > times[n-1]) {
		return -1
	}
	return i
}

// farValue reads up to 18 digits, and up to 15 after the point.
func farValue(b []byte, i int, point byte) (whole int64, fraction float64, end int) {
	first := i
	for ; b[i]-'0' <= 9; i++ {
		whole = whole*10 + int64(b[i]-'0')
	}
	if i == first || i-first > 18 {
		return 0, 0, -1
	}
	if b[i] != point {
		return whole, 0, i
	}
	i++
	first = i
	var m int64
	for ; b[i]-'0' <= 9; i++ {
		m = m*10 + int64(b[i]-'0')
	}
	if i-first > 15 {
		return 0, 0, -1
	}
	return whole, float64(m) / pow10[i-first], i
}
