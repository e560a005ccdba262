package export

import (
	"encoding/binary"
	"fmt"
	"math"

	"strandwise/channels"
	"strandwise/export/pages"
)

// WindowsKey is the key of [WindowsLayout] in the metadata of files of the table
// windows.
const WindowsKey = "strandwise.windows"

// windowsFormat names the form of WindowsLayout.
const windowsFormat = "strandwise.windows/1"

// Padding says what becomes of frames at the end of a take that no whole window
// holds.
type Padding string

// The paddings.
const (
	PadHold Padding = "hold" // one more window, its end filled with the take's last frame
	PadZero Padding = "zero" // one more window, its end filled with zeros
	PadNone Padding = "none" // those frames stand in no window
)

// ParsePadding reads a padding's name; an empty text is hold. The error lists
// the legal ones.
func ParsePadding(text string) (Padding, error) {
	switch p := Padding(text); p {
	case "":
		return PadHold, nil
	case PadHold, PadZero, PadNone:
		return p, nil
	}
	return "", fmt.Errorf("unknown padding %q; legal ones are hold, zero and none", text)
}

// Windowing says how takes are cut for the table windows.
//
// Window k of a take holds its frames k·Hop to k·Hop+Length, the last excluded,
// for k = 0, 1, 2 … as long as they are there. If frames are left after the last
// whole window, or the take is shorter than one, Padding says what becomes of
// them; with PadNone a take shorter than a window has no row. A Hop above Length
// leaves out the frames between two windows.
//
// A window lies within one take, and a take carries one label: a recording of
// several gestures was cut into takes by its annotations before. So the label
// that holds for most frames of a window, which is that of all of them, is the
// take's label.
type Windowing struct {
	Length  int     // frames; 0 means DefaultWindowLength
	Hop     int     // frames from the start of one window to that of the next; 0 means half the length
	Padding Padding // empty means hold

	// Scale, if it is not empty, has the values written as 16-bit whole numbers:
	// one scale per channel, in the channel's unit, by which a number of the file
	// is multiplied to give the value. A value is rounded to the nearest number, a
	// half to the even one; one beyond ±32767 becomes that, and is counted as
	// saturated. See [Ranges.Scale].
	Scale []float64
}

// The limits of a window, so that one row of all channels fits a page.
const (
	DefaultWindowLength = 64
	maxWindowLength     = 1 << 20
)

// withDefaults returns the windows with defaults filled in, or why they cannot
// be cut from takes of so many channels.
func (w Windowing) withDefaults(width int) (Windowing, error) {
	if w.Length == 0 {
		w.Length = DefaultWindowLength
	}
	if w.Hop == 0 {
		w.Hop = max(1, w.Length/2)
	}
	var err error
	if w.Padding, err = ParsePadding(string(w.Padding)); err != nil {
		return w, err
	}
	if w.Length < 1 || w.Length > maxWindowLength || w.Hop < 1 || w.Hop > math.MaxInt32 {
		return w, fmt.Errorf("windows of %d frames every %d: legal are 1 to %d frames, every 1 or more", w.Length, w.Hop, maxWindowLength)
	}
	if len(w.Scale) > 0 && len(w.Scale) != width {
		return w, fmt.Errorf("%d scales of windows for %d channels", len(w.Scale), width)
	}
	for _, s := range w.Scale {
		if !(s > 0) || math.IsInf(s, 0) {
			return w, fmt.Errorf("a scale of windows is %g, which is no number above 0", s)
		}
	}
	return w, nil
}

// Count returns the number of windows in a take of so many frames.
func (w Windowing) Count(frames int) int {
	whole := 0
	if frames >= w.Length {
		whole = (frames-w.Length)/w.Hop + 1
	}
	covered := 0
	if whole > 0 {
		covered = (whole-1)*w.Hop + w.Length
	}
	if w.Padding != PadNone && covered < frames && whole*w.Hop < frames {
		return whole + 1
	}
	return whole
}

// The columns of the table windows, in order; the channels follow.
const (
	windowTake = iota
	windowNumber
	windowLabel
	windowSubject
	windowSession
	windowOrigin
	windowSource
	windowRank
	windowFrames
	windowRate
	windowStart
	windowChannels
)

func fixedWindowColumns() []pages.Column {
	return []pages.Column{
		windowTake:    {Name: "take", Kind: pages.Text},
		windowNumber:  {Name: "window", Kind: pages.Int32},
		windowLabel:   {Name: "label", Kind: pages.Text},
		windowSubject: {Name: "subject", Kind: pages.Text},
		windowSession: {Name: "session", Kind: pages.Text},
		windowOrigin:  {Name: "origin", Kind: pages.Text},
		windowSource:  {Name: "source", Kind: pages.Text, Optional: true},
		windowRank:    {Name: "rank", Kind: pages.Int32, Optional: true},
		windowFrames:  {Name: "frames", Kind: pages.Int32},
		windowRate:    {Name: "rate_hz", Kind: pages.Float64},
		windowStart:   {Name: "start_s", Kind: pages.Float64},
	}
}

func windowColumns(l *channels.Layout, w Windowing) []pages.Column {
	kind := pages.Float32List
	if len(w.Scale) > 0 {
		kind = pages.Int16List
	}
	return withChannels(fixedWindowColumns(), l, kind)
}

// windowBlock is the size of floats written between two looks at the size of the
// row group.
const windowBlock = 1 << 20

// addWindows writes a take as one row per window.
func (t *table) addWindows(take *channels.Take) error {
	w := t.set.options.Windowing
	rowBytes := 4 * w.Length * take.Width()
	block := max(1, windowBlock/rowBytes)
	for from, n := 0, w.Count(take.Frames()); from < n; from += block {
		if err := t.begin(); err != nil {
			return err
		}
		p := t.part
		if from == 0 {
			p.facts.rate.take(take.Rate())
		}
		if p.saturated == nil {
			p.saturated = make([]int64, take.Width())
		}
		rows := min(block, n-from)
		addWindowBlock(p.pages, take, w, from, rows, p.saturated)
		if err := t.endRows(rows, int64(rows)*int64(rowBytes)); err != nil {
			return err
		}
	}
	return nil
}

// addWindowBlock adds the rows of some windows of a take and counts the values
// of each channel that were saturated.
func addWindowBlock(p *pages.Writer, take *channels.Take, w Windowing, from, rows int, saturated []int64) {
	p.AppendText(windowTake, take.ID, rows)
	p.AppendText(windowLabel, take.Label, rows)
	p.AppendText(windowSubject, take.Subject, rows)
	p.AppendText(windowSession, take.Session, rows)
	p.AppendText(windowOrigin, string(take.Origin()), rows)
	if take.Made == nil {
		p.AppendNull(windowSource, rows)
		p.AppendNull(windowRank, rows)
	} else {
		p.AppendText(windowSource, take.Made.Source, rows)
	}
	for k := from; k < from+rows; k++ {
		start := k * w.Hop
		if take.Made != nil {
			p.AppendInt32(windowRank, int32(take.Made.Rank))
		}
		p.AppendInt32(windowNumber, int32(k))
		p.AppendInt32(windowFrames, int32(min(w.Length, take.Frames()-start)))
		p.AppendFloat64(windowRate, take.Rate())
		p.AppendFloat64(windowStart, take.Time[start])
		for c := range take.Width() {
			saturated[c] += w.put(p.List(windowChannels+c, w.Length), take, start, c)
		}
	}
}

// put fills dst with one channel of the window that begins at a frame, and
// returns how many of its values were saturated.
func (w Windowing) put(dst []byte, take *channels.Take, start, channel int) (saturated int64) {
	width := take.Width()
	frames := min(w.Length, take.Frames()-start)
	data := take.Data[start*width : (start+frames)*width]
	if len(w.Scale) == 0 {
		putChannel(dst, data, width, channel)
	} else {
		saturated = putWhole(dst, data, width, channel, w.Scale[channel])
	}
	filled := dst[:4*frames]
	for rest := dst[4*frames:]; len(rest) > 0; rest = rest[4:] {
		if w.Padding == PadZero {
			clear(rest[:4])
		} else {
			copy(rest, filled[len(filled)-4:])
		}
	}
	return saturated
}

// putWhole fills dst with one channel of frame-major data as whole numbers of
// the scale, and returns how many were saturated. What is not a number becomes 0
// and counts too.
func putWhole(dst []byte, data []float64, width, channel int, scale float64) (saturated int64) {
	for i := channel; i < len(data); i += width {
		v := math.RoundToEven(data[i] / scale)
		if !(v >= -math.MaxInt16 && v <= math.MaxInt16) {
			saturated++
			switch {
			case v > 0:
				v = math.MaxInt16
			case v < 0:
				v = -math.MaxInt16
			default:
				v = 0
			}
		}
		binary.LittleEndian.PutUint32(dst, uint32(int32(v)))
		dst = dst[4:]
	}
	return saturated
}

// WindowsLayout is what the metadata of a file of the table windows say of them,
// as JSON under [WindowsKey].
type WindowsLayout struct {
	Format  string        `json:"format"` // "strandwise.windows/1"
	Length  int           `json:"length"` // frames: the length of every list
	Hop     int           `json:"hop"`    // frames
	Padding Padding       `json:"padding"`
	Label   string        `json:"label"`  // how a window comes by its label
	Values  string        `json:"values"` // "float32" or "int16"
	Scales  []WindowScale `json:"scales"` // of int16 values, one per channel; empty otherwise
}

// WindowScale says how 16-bit numbers of a channel are read: value = scale ×
// number, in the channel's unit.
type WindowScale struct {
	Channel   string  `json:"channel"`
	Scale     float64 `json:"scale"`
	Saturated int64   `json:"saturated"` // values of this file beyond ±32767
}

// windowLabelRule is what WindowsLayout says of labels.
const windowLabelRule = "the take's: a window lies within one take, and a take has one label"

func (w Windowing) layout(l *channels.Layout, saturated []int64) WindowsLayout {
	out := WindowsLayout{
		Format: windowsFormat, Length: w.Length, Hop: w.Hop, Padding: w.Padding,
		Label: windowLabelRule, Values: "float32", Scales: []WindowScale{},
	}
	for c, s := range w.Scale {
		out.Values = "int16"
		out.Scales = append(out.Scales, WindowScale{Channel: l.Channels[c].Name, Scale: s, Saturated: saturated[c]})
	}
	return out
}

// metadata returns what only files of the table windows say.
func (w Windowing) metadata(l *channels.Layout, saturated []int64) ([]pages.KeyValue, error) {
	text, err := marshal(w.layout(l, saturated), "")
	if err != nil {
		return nil, err
	}
	schema, err := arrowSchema(windowColumns(l, w), w.Length)
	if err != nil {
		return nil, err
	}
	return []pages.KeyValue{{Key: WindowsKey, Value: string(text)}, {Key: arrowSchemaKey, Value: schema}}, nil
}
