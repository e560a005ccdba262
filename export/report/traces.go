package report

import (
	"cmp"
	"fmt"
	"iter"
	"slices"
	"strings"

	"strandwise/channels"
)

// Bounds on what is drawn of one label.
const (
	mostGroups   = 8 // those that move most
	mostChannels = 6 // of a group, those that move most
	mostPaths    = 4 // of tracked points, those that move most
)

// Points of one line: as many as keep the page small, within bounds.
const (
	pointBudget   = 400_000
	mostPerTrace  = 120
	fewestInTrace = 24
)

// The measures of a panel of traces.
const (
	traceHeight = 160
	traceLeft   = 48
	traceRight  = panelWidth - 8
	traceTop    = 6
	traceBottom = 122
)

// drawing is what the takes of one label are drawn with.
type drawing struct {
	label  Label
	id     string // of the section
	layout *channels.Layout
	time   linear
	points int // of a line
}

// newDrawing returns what draws the takes of a label; the label has a take to
// draw.
func newDrawing(l Label, id string, points int) *drawing {
	d := &drawing{label: l, id: id, points: points}
	longest := 0.0
	for t := range d.takes() {
		if d.layout == nil {
			d.layout = t.Layout
		}
		longest = max(longest, t.Duration())
	}
	if longest == 0 {
		longest = 1
	}
	d.time = linear{0, longest, traceLeft, traceRight}
	return d
}

// takes yields the takes drawn, with their class; recorded ones last, so that
// they lie on top.
func (d *drawing) takes() iter.Seq2[*channels.Take, string] {
	return func(yield func(*channels.Take, string) bool) {
		for _, t := range d.label.Synthetic {
			if !yield(t, classSynthetic) {
				return
			}
		}
		for _, t := range d.label.Recorded {
			if !yield(t, classRecorded) {
				return
			}
		}
	}
}

// clock draws the time axis that all panels of the label share.
func (d *drawing) clock() panel {
	p := panel{Width: panelWidth, Height: traceHeight}
	p.xAxis(d.time, traceTop, traceBottom, "seconds from the first frame")
	return p
}

// groups returns the groups to draw, in the layout's order, and how many move
// too little to be among them.
func (d *drawing) groups() (list []channels.Group, left int) {
	list = d.layout.Groups
	if len(list) == 0 {
		all := channels.Group{Name: "all channels"}
		for c := range d.layout.Channels {
			all.Channels = append(all.Channels, c)
		}
		return []channels.Group{all}, 0
	}
	if len(list) <= mostGroups {
		return list, 0
	}
	size := make([]float64, len(list))
	for g, group := range list {
		for _, c := range group.Channels {
			size[g] = max(size[g], d.movement(c)/d.unit(c))
		}
	}
	return pick(list, size, mostGroups), len(list) - mostGroups
}

// unit makes movements of different quantities comparable: the largest movement
// of a channel in the same unit.
func (d *drawing) unit(channel int) float64 {
	most := 0.0
	for c, ch := range d.layout.Channels {
		if ch.Unit == d.layout.Channels[channel].Unit {
			most = max(most, d.movement(c))
		}
	}
	return cmp.Or(most, 1)
}

// movement is the mean over the takes drawn of a channel's range.
func (d *drawing) movement(channel int) float64 {
	sum, n := 0.0, 0
	for t := range d.takes() {
		e := channelExtent(t, channel)
		sum += e.high - e.low
		n++
	}
	return sum / float64(max(n, 1))
}

func channelExtent(t *channels.Take, channel int) extent {
	var e extent
	for i := channel; i < len(t.Data); i += t.Width() {
		e.add(t.Data[i])
	}
	return e
}

// pick returns the n elements of the largest sizes, in the order of the list.
func pick[T any](list []T, size []float64, n int) []T {
	places := make([]int, len(list))
	for i := range places {
		places[i] = i
	}
	slices.SortStableFunc(places, func(a, b int) int { return cmp.Compare(size[b], size[a]) })
	places = places[:min(n, len(places))]
	slices.Sort(places)
	var out []T
	for _, i := range places {
		out = append(out, list[i])
	}
	return out
}

// traces draws the channels of one group over time.
func (d *drawing) traces(g channels.Group) *figure {
	list := g.Channels
	if len(list) > mostChannels {
		size := make([]float64, len(list))
		for i, c := range list {
			size[i] = d.movement(c)
		}
		list = pick(list, size, mostChannels)
	}
	f := &figure{Key: lineKeys(), Numbers: &table{Caption: "Lowest, mean and highest value of the takes drawn", Head: []string{"channel", "unit", "recorded", "synthetic"}}}
	span := d.commonSpan(list)
	for _, c := range list {
		f.Panels = append(f.Panels, d.trace(c, span))
		f.Numbers.add(nameCell(d.layout.Channels[c].Name, fmt.Sprint("channel ", c)), text(unitText(d.layout.Channels[c].Unit)), d.summary(c, d.label.Recorded), d.summary(c, d.label.Synthetic))
	}
	f.Caption = "Every line is one take, all on one clock. Look whether the synthetic lines go where recorded ones go, differ as much among themselves, and are as smooth."
	if span > 0 && len(list) > 1 {
		f.Caption += " The panels share one scale, each about its own middle."
	}
	if n := len(g.Channels) - len(list); n > 0 {
		f.Caption += fmt.Sprintf(" Drawn are the %d channels that move most; %s not.", len(list), counted(n, "other is", "others are"))
	}
	return f
}

// commonSpan returns the widest range of these channels, 0 where their units
// differ.
func (d *drawing) commonSpan(list []int) float64 {
	span := 0.0
	for _, c := range list {
		if a, b := d.layout.Channels[c], d.layout.Channels[list[0]]; a.Unit != b.Unit || a.Quantity != b.Quantity {
			return 0
		}
		e := d.extent(c)
		span = max(span, e.high-e.low)
	}
	return span
}

// extent is the range of a channel over all takes drawn.
func (d *drawing) extent(channel int) extent {
	var e extent
	for t := range d.takes() {
		if x := channelExtent(t, channel); x.some {
			e.add(x.low, x.high)
		}
	}
	return e
}

// trace draws one channel of all takes on an axis of a span, or of the range of
// the channel where that is wider.
func (d *drawing) trace(channel int, span float64) panel {
	e := d.extent(channel)
	if gap := span - (e.high - e.low); e.some && gap > 0 {
		e.low, e.high = e.low-gap/2, e.high+gap/2
	}
	ch := d.layout.Channels[channel]
	low, high := e.padded(0.04)
	y := linear{low, high, traceBottom, traceTop}
	p := panel{Width: panelWidth, Height: traceHeight, Title: name{Short: isolated(ch.Name, mostShown, fmt.Sprint("channel ", channel)) + ", " + isolated(unitText(ch.Unit), 24, "")}, Name: "Lines over time of " + shortened(ch.Name, mostShown) + ", " + unitText(ch.Unit)}
	p.Shapes = append(p.Shapes, shape{Use: d.id + "-time"})
	p.yAxis(y, traceLeft, traceRight)
	var recorded, synthetic []byte
	for t, class := range d.takes() {
		if class == classRecorded {
			recorded = d.appendTrace(recorded, t, channel, y)
		} else {
			synthetic = d.appendTrace(synthetic, t, channel, y)
		}
	}
	p.fine(classSynthetic, string(synthetic))
	p.fine(classRecorded, string(recorded))
	return p
}

// appendTrace appends the line of one channel of a take. Values that are not
// finite are left out.
func (d *drawing) appendTrace(b []byte, t *channels.Take, channel int, y linear) []byte {
	var xs, ys []float64
	for i, at := range t.Time {
		if v := t.Frame(i)[channel]; finite(v) {
			xs, ys = append(xs, d.time.at(at-t.Time[0])), append(ys, y.at(v))
		}
	}
	xs, ys = chosen(xs, ys, d.points)
	return fineLine(b, xs, ys)
}

// chosen returns the points of a line that are drawn.
func chosen(xs, ys []float64, n int) (x, y []float64) {
	for _, i := range thin(xs, ys, n) {
		x, y = append(x, xs[i]), append(y, ys[i])
	}
	return x, y
}

// summary writes the lowest, mean and highest value of a channel over takes.
func (d *drawing) summary(channel int, takes []*channels.Take) cell {
	var e extent
	sum, n := 0.0, 0
	for _, t := range takes {
		for i := channel; i < len(t.Data); i += t.Width() {
			if v := t.Data[i]; finite(v) {
				e.add(v)
				sum += v
				n++
			}
		}
	}
	if n == 0 {
		return figures("–")
	}
	return figures(strings.Join([]string{number(e.low), number(sum / float64(n)), number(e.high)}, ", "))
}

// unitText writes a unit, or that there is none.
func unitText(unit string) string {
	switch unit {
	case "":
		return "unit not stated"
	case "1":
		return "a pure number"
	case "log":
		return "natural log"
	}
	return shortened(strings.NewReplacer("^2", "²", "^3", "³").Replace(unit), 24)
}
