package export

import (
	"encoding/binary"
	"math"

	"strandwise/channels"
	"strandwise/export/pages"
)

// The columns of the table takes, in order; the channels follow.
const (
	takeID = iota
	takeLabel
	takeSubject
	takeSession
	takeOrigin
	takeSource
	takeDraw
	takeRank
	takeMethod
	takeParameters
	takeFrames
	takeRate
	takeStart
	takeTime
	takeChannels
)

// fixedTakeColumns describes the columns before the channels.
func fixedTakeColumns() []pages.Column {
	return []pages.Column{
		takeID:         {Name: "id", Kind: pages.Text},
		takeLabel:      {Name: "label", Kind: pages.Text},
		takeSubject:    {Name: "subject", Kind: pages.Text},
		takeSession:    {Name: "session", Kind: pages.Text},
		takeOrigin:     {Name: "origin", Kind: pages.Text},
		takeSource:     {Name: "source", Kind: pages.Text, Optional: true},
		takeDraw:       {Name: "draw", Kind: pages.Int32, Optional: true},
		takeRank:       {Name: "rank", Kind: pages.Int32, Optional: true},
		takeMethod:     {Name: "method", Kind: pages.Text, Optional: true},
		takeParameters: {Name: "parameters", Kind: pages.Text, Optional: true},
		takeFrames:     {Name: "frames", Kind: pages.Int32},
		takeRate:       {Name: "rate_hz", Kind: pages.Float64},
		takeStart:      {Name: "start_s", Kind: pages.Float64},
		takeTime:       {Name: "time_s", Kind: pages.Float32List},
	}
}

// takeSplit is the column that a file which stands alone may have in place of
// the folders of a set. It stands after the channels.
const takeSplit = "split"

// TakeRows lays takes out as rows of the table takes, one row for each take: in
// the files of a set, and in a file that stands alone.
type TakeRows struct {
	layout *channels.Layout
	split  int // column of the split, -1 for none
	text   parameterText
}

// NewTakeRows returns the rows of takes of this layout. With split they end in
// a text column of that name, for a file that no folder places in a split;
// without, the split is not part of a row.
func NewTakeRows(l *channels.Layout, split bool) *TakeRows {
	r := &TakeRows{layout: l, split: -1}
	if split {
		r.split = takeChannels + len(l.Channels)
	}
	return r
}

// Columns returns the columns of the rows, in order.
func (r *TakeRows) Columns() []pages.Column {
	out := withChannels(fixedTakeColumns(), r.layout, pages.Float32List)
	if r.split >= 0 {
		out = append(out, pages.Column{Name: takeSplit, Kind: pages.Text})
	}
	return out
}

// Rows receives rows column by column: what [pages.Writer], which is one, does
// with them. A list is filled by the caller before its next call.
type Rows interface {
	AppendText(column int, text string, n int)
	AppendNull(column, n int)
	AppendInt32(column int, v int32)
	AppendFloat64(column int, v float64)
	List(column, n int) []byte // of n little-endian 32-bit floats
}

// Append adds a take of one frame or more as one row. It copies what it needs.
func (r *TakeRows) Append(dst Rows, t *channels.Take) {
	n := t.Frames()
	dst.AppendText(takeID, t.ID, 1)
	dst.AppendText(takeLabel, t.Label, 1)
	dst.AppendText(takeSubject, t.Subject, 1)
	dst.AppendText(takeSession, t.Session, 1)
	dst.AppendText(takeOrigin, string(t.Origin()), 1)
	r.appendMaking(dst, t.Made)
	dst.AppendInt32(takeFrames, int32(n))
	dst.AppendFloat64(takeRate, t.Rate())
	dst.AppendFloat64(takeStart, t.Time[0])
	putClock(dst.List(takeTime, n), t.Time)
	for c, width := 0, t.Width(); c < width; c++ {
		putChannel(dst.List(takeChannels+c, n), t.Data, width, c)
	}
	if r.split >= 0 {
		dst.AppendText(r.split, string(t.Split), 1)
	}
}

// appendMaking adds how a take was made, or nulls for a recorded one.
func (r *TakeRows) appendMaking(dst Rows, m *channels.Making) {
	if m == nil {
		for c := takeSource; c <= takeParameters; c++ {
			dst.AppendNull(c, 1)
		}
		return
	}
	dst.AppendText(takeSource, m.Source, 1)
	dst.AppendInt32(takeDraw, int32(m.Draw))
	dst.AppendInt32(takeRank, int32(m.Rank))
	dst.AppendText(takeMethod, m.Method, 1)
	dst.AppendText(takeParameters, r.text.encode(m.Parameters), 1)
}

// addTake writes a take as one row.
func (t *table) addTake(take *channels.Take) error {
	if err := t.begin(); err != nil {
		return err
	}
	if err := t.part.facts.Note(take); err != nil {
		return err
	}
	t.takes.Append(t.part.pages, take)
	return t.endRows(1, int64(4*take.Frames()*(1+take.Width())))
}

// putClock fills dst with the seconds since the first frame.
func putClock(dst []byte, times []float64) {
	for i, at := range times {
		binary.LittleEndian.PutUint32(dst[4*i:], math.Float32bits(float32(at-times[0])))
	}
}

// putChannel fills dst with one channel of frame-major data, four bytes to a
// frame.
func putChannel(dst []byte, data []float64, width, channel int) {
	for i := channel; i < len(data) && len(dst) >= 4; i += width {
		binary.LittleEndian.PutUint32(dst, math.Float32bits(float32(data[i])))
		dst = dst[4:]
	}
}
