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

func takeColumns(l *channels.Layout) []pages.Column {
	return withChannels(fixedTakeColumns(), l, pages.Float32List)
}

// addTake writes a take as one row.
func (t *table) addTake(take *channels.Take) error {
	if err := t.begin(); err != nil {
		return err
	}
	p, n := t.part.pages, take.Frames()
	p.AppendText(takeID, take.ID, 1)
	p.AppendText(takeLabel, take.Label, 1)
	p.AppendText(takeSubject, take.Subject, 1)
	p.AppendText(takeSession, take.Session, 1)
	p.AppendText(takeOrigin, string(take.Origin()), 1)
	t.addMaking(p, take.Made)
	rate := take.Rate()
	t.part.rate.take(rate)
	p.AppendInt32(takeFrames, int32(n))
	p.AppendFloat64(takeRate, rate)
	p.AppendFloat64(takeStart, take.Time[0])
	putClock(p.List(takeTime, n), take.Time)
	for c, width := 0, take.Width(); c < width; c++ {
		putChannel(p.List(takeChannels+c, n), take.Data, width, c)
	}
	return t.endRows(1, int64(4*n*(1+take.Width())))
}

// addMaking writes how a take was made, or nulls for a recorded one.
func (t *table) addMaking(p *pages.Writer, m *channels.Making) {
	if m == nil {
		for c := takeSource; c <= takeParameters; c++ {
			p.AppendNull(c, 1)
		}
		return
	}
	p.AppendText(takeSource, m.Source, 1)
	p.AppendInt32(takeDraw, int32(m.Draw))
	p.AppendInt32(takeRank, int32(m.Rank))
	p.AppendText(takeMethod, m.Method, 1)
	p.AppendText(takeParameters, t.text.encode(m.Parameters), 1)
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
