package bids

import (
	"fmt"
	"io"
	"math"
	"slices"
	"strings"

	"strandwise/ingest/delimited"
	"strandwise/ingest/raw"
)

// motion is a table of motion being read.
type motion struct {
	*recording
	channels []channel
	clock    *channel // nil for none
	absence  absence
	kept     []int  // columns that are part of the layout, in its order
	unread   []bool // columns whose values are not used, whatever they are
	take     *raw.Take

	row           []float64 // read last, by column of the table
	line          int       // of that row
	due           int       // line in which the next frame would follow on
	timeless      int       // rows without a latency
	firstTimeless int       // line of the first of them
}

// read reads the rows.
func (m *motion) read(r io.Reader) error {
	rows, err := delimited.NewRows(r, m.in.Name, '\t')
	if err != nil {
		return err
	}
	m.row = make([]float64, len(m.channels))
	for {
		var plain bool
		if m.line, plain = rows.Numbers(m.row); !plain {
			fields, line, err := rows.Text()
			if err == io.EOF {
				break
			}
			if err != nil {
				return err
			}
			m.line = line
			if m.isHeader(fields) {
				m.in.Notice("has a header, which motion in BIDS has not; it is passed over", "")
				continue
			}
			if err := m.fields(fields); err != nil {
				return err
			}
		}
		m.add()
	}
	if len(m.take.Time) == 0 {
		return m.fault(0, "", "has no rows", "leave it out or record it again")
	}
	return nil
}

// isHeader tells whether the first row repeats the names of the channels.
func (m *motion) isHeader(fields [][]byte) bool {
	return len(m.take.Time) == 0 && slices.EqualFunc(fields, m.channels, func(f []byte, ch channel) bool {
		return strings.TrimSpace(string(f)) == ch.name
	})
}

// fields reads a row that is not plain numbers into m.row.
func (m *motion) fields(fields [][]byte) error {
	if len(m.take.Time) == 0 && !slices.ContainsFunc(fields, isValue) {
		return m.fault(m.line, "", "is words, where motion in BIDS has numbers from the first row on", "remove the header; "+m.channels[0].file+" names the columns")
	}
	if len(fields) != len(m.channels) {
		return m.fault(m.line, "", fmt.Sprintf("has %d fields where %s describes %d channels", len(fields), m.channels[0].file, len(m.channels)),
			"repair the line, or describe every column there; fields are separated by tabs, and n/a stands for no value")
	}
	for i, f := range fields {
		v, _, err := delimited.Number(f)
		if err != nil && !m.unread[i] && m.absence.word != strings.TrimSpace(string(f)) {
			return m.fault(m.line, m.channels[i].name, err.Error(), "repair the value, or write n/a")
		}
		m.row[i] = v
	}
	return nil
}

// isValue tells whether a field is a number, or says that there is none.
func isValue(field []byte) bool {
	_, _, err := delimited.Number(field)
	return err == nil
}

// add adds m.row to the take.
func (m *motion) add() {
	t := m.take
	had := len(t.Data)
	if cap(t.Data) < had+len(m.kept) {
		t.Data = slices.Grow(t.Data, had+len(m.kept)) // doubled: by less, a long take is copied often
	}
	for _, column := range m.kept {
		t.Data = append(t.Data, m.row[column])
	}
	if m.absence.isNumber {
		m.blank(t.Data[had:])
	}
	m.stand()
	m.addTime()
}

// stand notes the line of the frame about to be added.
func (m *motion) stand() {
	t := m.take
	switch {
	case len(t.Time) == 0:
		t.Line = m.line
	case m.line != m.due:
		t.Jumps = append(t.Jumps, raw.Jump{Frame: len(t.Time), Line: m.line})
	}
	m.due = m.line + 1
}

// blank makes the number that stands for missing values NaN.
func (m *motion) blank(frame []float64) {
	for i, v := range frame {
		if v == m.absence.number {
			frame[i] = math.NaN()
		}
	}
}

// addTime adds the latency of m.row, NaN where there is none. Whether it comes
// after the one before is for the stages behind to judge.
func (m *motion) addTime() {
	now := math.NaN()
	if m.clock != nil {
		now = m.row[m.clock.column]
	}
	if math.IsNaN(now) {
		if m.timeless == 0 {
			m.firstTimeless = m.line
		}
		m.timeless++
	}
	m.take.Time = append(m.take.Time, now)
}
