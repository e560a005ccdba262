package report

import (
	"fmt"
	"math"

	"strandwise/channels"
)

// The measures of a panel of paths.
const (
	pathHeight = 270
	pathTop    = 8
	pathBottom = 232
)

// paths draws the ways of tracked points; nil where the takes hold no
// positions.
func (d *drawing) paths() *figure {
	list := trackedPoints(d.layout)
	if len(list) == 0 || len(d.label.Recorded) == 0 {
		return nil
	}
	f := &figure{Key: append(lineKeys(), key{"k-o", "start of a take"}), Numbers: &table{
		Caption: "Length of the way, mean over the takes drawn",
		Head:    []string{"point", "unit", "recorded", "synthetic", "movement that lies in the plane shown"},
	}}
	left := len(list) - mostPaths
	if left > 0 {
		size := make([]float64, len(list))
		for i, p := range list {
			for _, c := range p.axes {
				size[i] += d.movement(c)
			}
		}
		list = pick(list, size, mostPaths)
	}
	space := false
	for _, p := range list {
		panel, pl := d.path(p)
		space = space || len(p.axes) == 3
		f.Panels = append(f.Panels, panel)
		f.Numbers.add(nameCell(p.name, "a point"), text(unitText(p.unit)), figures(d.way(p, d.label.Recorded)), figures(d.way(p, d.label.Synthetic)), figures(percent(pl.share)))
	}
	f.Caption = "The ways of tracked points. Synthetic ways should have the shape of recorded ones without lying on top of any."
	if space {
		f.Caption += " Ways in space are seen along the direction in which the recorded ones move least; the axes say which way they run, and 0 is the mean recorded place."
	}
	if left > 0 {
		f.Caption += fmt.Sprintf(" Drawn are the %d points that move most; %s not.", len(list), counted(left, "other is", "others are"))
	}
	return f
}

// path draws the ways of one point.
func (d *drawing) path(p tracked) (panel, plane) {
	var recorded [][]float64
	for _, t := range d.label.Recorded {
		recorded = append(recorded, p.positions(t)...)
	}
	pl := bestPlane(recorded, len(p.axes))
	var ex, ey extent
	for t := range d.takes() {
		for _, at := range p.positions(t) {
			x, y := pl.at(at)
			ex.add(x)
			ey.add(y)
		}
	}
	x, y := alike(ex, ey)
	out := panel{Name: "Ways of " + shortened(p.name, mostShown), Title: named(p.name, "a point"), Width: panelWidth, Height: pathHeight}
	out.xAxis(x, pathTop, pathBottom, "→ "+direction(pl.across, p.names)+", "+isolated(unitText(p.unit), 16, ""))
	out.yAxis(y, traceLeft, traceRight)
	out.text(classTick, traceLeft+5, pathTop+11, "", "↑ "+direction(pl.up, p.names)+", "+isolated(unitText(p.unit), 16, ""))
	d.ways(&out, p, pl, x, y)
	return out, pl
}

// ways draws the lines of all takes, and where each begins.
func (d *drawing) ways(out *panel, p tracked, pl plane, x, y linear) {
	lines, starts := map[string][]byte{}, map[string]string{}
	for t, class := range d.takes() {
		var xs, ys []float64
		for _, at := range p.positions(t) {
			px, py := pl.at(at)
			xs, ys = append(xs, x.at(px)), append(ys, y.at(py))
		}
		if len(xs) > 0 {
			starts[class] += dot(xs[0], ys[0])
			xs, ys = everyNth(xs, d.points), everyNth(ys, d.points)
			lines[class] = fineLine(lines[class], xs, ys)
		}
	}
	for _, class := range []string{classSynthetic, classRecorded} {
		out.fine(class, string(lines[class]))
		out.path(class+" o", starts[class])
	}
}

// everyNth returns at most n values, evenly spread from the first to the last.
// A path turns back on itself, so it cannot be thinned as a function of time is.
func everyNth(v []float64, n int) []float64 {
	if len(v) <= n {
		return v
	}
	out := make([]float64, n)
	for k := range out {
		out[k] = v[k*(len(v)-1)/(n-1)]
	}
	return out
}

// alike returns axes of one scale that hold both ranges.
func alike(ex, ey extent) (x, y linear) {
	xl, xh := ex.padded(0.05)
	yl, yh := ey.padded(0.05)
	const width, height = traceRight - traceLeft, pathBottom - pathTop
	unit := max((xh-xl)/width, (yh-yl)/height)
	mx, my := (xl+xh)/2, (yl+yh)/2
	return linear{mx - unit*width/2, mx + unit*width/2, traceLeft, traceRight},
		linear{my - unit*height/2, my + unit*height/2, pathBottom, pathTop}
}

// way writes the mean length of the way of a point.
func (d *drawing) way(p tracked, takes []*channels.Take) string {
	sum := 0.0
	for _, t := range takes {
		list := p.positions(t)
		for i := 1; i < len(list); i++ {
			square := 0.0
			for k := range list[i] {
				square += (list[i][k] - list[i-1][k]) * (list[i][k] - list[i-1][k])
			}
			sum += math.Sqrt(square)
		}
	}
	return number(sum / float64(len(takes)))
}
