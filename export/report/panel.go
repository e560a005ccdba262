package report

import (
	"math"
	"strconv"
)

// panel is one drawing of a figure, an SVG of Width × Height units of about a
// pixel. Colours and line widths are classes of the style sheet.
type panel struct {
	Name   string // text alternative: what kind of drawing it is of what
	Title  name   // above the drawing; empty for none
	Width  int
	Height int
	Shapes []shape
}

// shape is one mark of a panel: a path where D is set, a reference to a shared
// one where Use is set, else a text.
type shape struct {
	Class  string
	D      string
	Fine   bool // D counts in quarters of a unit
	Use    string
	X, Y   string
	Anchor string // of a text: "", "middle" or "end"
	Text   string
}

func (p *panel) path(class, d string) {
	if d != "" {
		p.Shapes = append(p.Shapes, shape{Class: class, D: d})
	}
}

func (p *panel) fine(class, d string) {
	if d != "" {
		p.Shapes = append(p.Shapes, shape{Class: class, D: d, Fine: true})
	}
}

func (p *panel) text(class string, x, y float64, anchor, text string) {
	p.Shapes = append(p.Shapes, shape{Class: class, X: short(x), Y: short(y), Anchor: anchor, Text: text})
}

// The classes of marks. Each kind differs from the others by more than its
// colour: by width, by form, or by a pattern.
const (
	classRecorded  = "r" // line of recorded takes
	classSynthetic = "s" // line of synthetic takes
	classGrid      = "g"
	classAxis      = "a"
	classTick      = "t" // small text
	className      = "n" // text of a row
	dotRecorded    = "rd"
	dotSynthetic   = "sd" // a diamond
	barRecorded    = "rb"
	barSynthetic   = "sb"
	barGain        = "gb"
	barHarm        = "hb"
	gapFill        = "f" // area between two lines
)

// short writes a coordinate with one decimal at most.
func short(v float64) string {
	return strconv.FormatFloat(math.Round(v*10)/10+0, 'f', -1, 64)
}

// finite tells whether a number can be drawn.
func finite(v float64) bool { return !math.IsNaN(v) && !math.IsInf(v, 0) }

// linear maps values of an axis to a stretch of the drawing.
type linear struct{ low, high, from, to float64 }

// at returns where a value stands. Values beyond the axis stand at its end.
func (l linear) at(v float64) float64 {
	u := 0.5
	if l.high > l.low {
		u = (v - l.low) / (l.high - l.low)
	}
	return l.from + (l.to-l.from)*min(1, max(0, u))
}

// line returns the path through points, in units.
func line(points ...float64) string {
	b := make([]byte, 0, 8*len(points))
	for i := 0; i+1 < len(points); i += 2 {
		switch i {
		case 0:
			b = append(b, 'M')
		default:
			b = append(b, 'L')
		}
		b = append(b, short(points[i])...)
		b = append(b, ' ')
		b = append(b, short(points[i+1])...)
	}
	return string(b)
}

// box returns the path of a rectangle.
func box(x, y, w, h float64) string {
	return "M" + short(x) + " " + short(y) + "h" + short(w) + "v" + short(h) + "h" + short(-w) + "z"
}

// dot returns a path of no length, which round ends make a dot.
func dot(x, y float64) string { return "M" + short(x) + " " + short(y) + "h0" }

// diamond returns the path of a diamond.
func diamond(x, y, r float64) string {
	return line(x-r, y, x, y-r, x+r, y, x, y+r) + "z"
}

// fineLine returns the path through points whose coordinates count in quarters
// of a unit, written as whole steps from one to the next.
func fineLine(b []byte, xs, ys []float64) []byte {
	x, y := 0, 0
	for i := range xs {
		nx, ny := int(math.Round(4*xs[i])), int(math.Round(4*ys[i]))
		switch i {
		case 0:
			b = append(b, 'M')
			b = strconv.AppendInt(b, int64(nx), 10)
			b = step(b, ny)
			b = append(b, 'l')
		default:
			if i > 1 && nx-x >= 0 {
				b = append(b, ' ')
			}
			b = strconv.AppendInt(b, int64(nx-x), 10)
			b = step(b, ny-y)
		}
		x, y = nx, ny
	}
	if len(xs) == 1 {
		b = append(b, "0 0"...)
	}
	return b
}

// step appends a second coordinate, whose sign parts it from the first where it
// has one.
func step(b []byte, v int) []byte {
	if v >= 0 {
		b = append(b, ' ')
	}
	return strconv.AppendInt(b, int64(v), 10)
}
