package export

import (
	"encoding/binary"
	"math"

	"strandwise/channels"
	"strandwise/export/pages"
)

// The columns of the table frames, in order; the channels follow.
const (
	frameTake = iota
	frameNumber
	frameTime
	frameChannels
)

func fixedFrameColumns() []pages.Column {
	return []pages.Column{
		frameTake:   {Name: "take", Kind: pages.Text},
		frameNumber: {Name: "frame", Kind: pages.Int32},
		frameTime:   {Name: "time_s", Kind: pages.Float64},
	}
}

func frameColumns(l *channels.Layout) []pages.Column {
	return withChannels(fixedFrameColumns(), l, pages.Float32)
}

// frameBlock is the number of frames written between two looks at the size of
// the row group, so that a take of hours does not become one row group.
const frameBlock = 1 << 14

// addFrames writes a take as one row per frame.
func (t *table) addFrames(take *channels.Take) error {
	for from := 0; from < take.Frames(); from += frameBlock {
		if err := t.begin(); err != nil {
			return err
		}
		if from == 0 {
			t.part.facts.rate.take(take.Rate())
		}
		n := min(frameBlock, take.Frames()-from)
		t.addBlock(take, from, n)
		if err := t.endRows(n, int64(4*n*take.Width())); err != nil {
			return err
		}
	}
	return nil
}

// addBlock writes n frames from the given one on.
func (t *table) addBlock(take *channels.Take, from, n int) {
	p, width := t.part.pages, take.Width()
	p.AppendText(frameTake, take.ID, n)
	numbers, clock := p.Fixed(frameNumber, n), p.Fixed(frameTime, n)
	for i := range n {
		binary.LittleEndian.PutUint32(numbers[4*i:], uint32(from+i))
		binary.LittleEndian.PutUint64(clock[8*i:], math.Float64bits(take.Time[from+i]))
	}
	data := take.Data[from*width : (from+n)*width]
	for c := range width {
		putChannel(p.Fixed(frameChannels+c, n), data, width, c)
	}
}
