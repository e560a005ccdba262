package report

import "slices"

// figure is one figure of the page.
type figure struct {
	Number  int
	Key     []key
	Panels  []panel
	Shown   *table // a table that is the figure itself, in place of panels
	Wide    bool   // one drawing that scrolls rather than shrinks
	Caption string // what to see
	Numbers *table // the figures behind the drawing; nil where the drawing is a table
}

// key explains one kind of mark.
type key struct{ Mark, Text string }

// The keys of figures that show recorded and synthetic takes.
func lineKeys() []key {
	return []key{{"k-r", "recorded"}, {"k-s", "synthetic"}}
}

func dotKeys() []key {
	return []key{{"k-rd", "recorded takes alone"}, {"k-sd", "with synthetic takes"}}
}

func changeKeys() []key {
	return []key{{"k-gb", "fewer errors"}, {"k-hb", "more errors"}}
}

// table is a table of the page.
type table struct {
	Caption string
	Head    []string
	Rows    [][]cell
}

// add appends a row, whose first cell heads it.
func (t *table) add(cells ...cell) {
	cells[0].Header = true
	t.Rows = append(t.Rows, cells)
}

// cell is one cell: a text of ours, or a name, with a bar beside it where there
// is one.
type cell struct {
	Text   string
	Name   *name
	Link   string // id of what the name stands for
	Header bool
	Number bool
	Bars   []bar
	Small  string // a second line
	Mono   bool   // a hash
}

// bar is a bar in a cell of 100 × 12 units.
type bar struct{ Class, D string }

// Numeric tells whether the cells of a column are numbers.
func (t *table) Numeric(column int) bool {
	return len(t.Rows) > 0 && column < len(t.Rows[0]) && t.Rows[0][column].Number
}

// longCell is the length from which a cell breaks into lines.
const longCell = 30

// Class is the cell's class of the style sheet.
func (c cell) Class() string {
	shown := c.Text
	if c.Name != nil {
		shown = c.Name.Short
	}
	switch {
	case c.Number:
		return "num"
	case c.Mono:
		return "mono"
	case len(shown) > longCell:
		return "long"
	}
	return ""
}

// heading shortens a name for the head of a column.
func heading(s, nameless string) string {
	return shortened(named(s, nameless).Short, 24)
}

func text(s string) cell { return cell{Text: s} }

func figures(s string) cell { return cell{Text: s, Number: true} }

func nameCell(s, nameless string) cell {
	n := named(s, nameless)
	return cell{Name: &n}
}

// row is one line of a chart of rows: a name, and marks on an axis below it.
type row struct {
	Text  string
	Marks []mark
}

// mark is a dot, diamond or bar at a value, with the line of an interval where
// Low and High are set.
type mark struct {
	Class     string // dotRecorded, dotSynthetic, barGain, barHarm, barRecorded or barSynthetic
	Value     float64
	Low, High float64
	Interval  bool
}

// The measures of a chart of rows.
const (
	panelWidth = 320
	rowHeight  = 36
	rowsShown  = 12 // in one panel
	rowColumns = 46 // of text above a row
)

// rowCharts draws rows on one axis, in as many panels as they need. The axis
// holds 0 and every mark.
func rowCharts(what, axis string, rows []row) []panel {
	var e extent
	e.add(0)
	for _, r := range rows {
		for _, m := range r.Marks {
			e.add(m.Value)
			if m.Interval {
				e.add(m.Low, m.High)
			}
		}
	}
	if e.low == e.high {
		e.high = 1
	}
	x := linear{e.low, e.high, 12, panelWidth - 14}
	var out []panel
	each := len(rows)
	if n := (len(rows) + rowsShown - 1) / rowsShown; n > 0 {
		each = (len(rows) + n - 1) / n
	}
	for part := range slices.Chunk(rows, max(1, each)) {
		out = append(out, rowChart(what, axis, part, x))
	}
	return out
}

func rowChart(what, axis string, rows []row, x linear) panel {
	bottom := float64(len(rows)*rowHeight + 2)
	p := panel{Name: what, Width: panelWidth, Height: int(bottom) + 34}
	p.xAxis(x, 0, bottom, axis)
	if x.low < 0 {
		p.path(classAxis, line(x.at(0), 0, x.at(0), bottom))
	}
	for i, r := range rows {
		top := float64(i * rowHeight)
		p.text(className, x.from-10, top+14, "", shortened(r.Text, rowColumns))
		for k, m := range r.Marks {
			p.mark(m, x, top+26+5*float64(k)-2.5*float64(len(r.Marks)-1))
		}
	}
	return p
}

// xAxis draws grid, ticks and title of a horizontal axis.
func (p *panel) xAxis(x linear, top, bottom float64, title string) {
	p.xAxisAt(ticks(x.low, x.high, 5), x, top, bottom, title)
}

func (p *panel) xAxisAt(list []float64, x linear, top, bottom float64, title string) {
	grid, gap := "", 0.0
	if len(list) > 1 {
		gap = list[1] - list[0]
	}
	for _, v := range list {
		grid += line(x.at(v), top, x.at(v), bottom)
		p.text(classTick, x.at(v), bottom+13, "middle", tickText(v, gap))
	}
	p.path(classGrid, grid)
	p.text(classTick, (x.from+x.to)/2, bottom+29, "middle", title)
}

// yAxis draws grid and ticks of a vertical axis.
func (p *panel) yAxis(y linear, left, right float64) {
	list := ticks(y.low, y.high, 4)
	grid, gap := "", 0.0
	if len(list) > 1 {
		gap = list[1] - list[0]
	}
	for _, v := range list {
		grid += line(left, y.at(v), right, y.at(v))
		p.text(classTick, left-5, y.at(v)+4, "end", tickText(v, gap))
	}
	p.path(classGrid, grid)
}

// mark draws one mark at a height.
func (p *panel) mark(m mark, x linear, y float64) {
	if m.Interval && finite(m.Low) && finite(m.High) {
		class := classRecorded
		if m.Class == dotSynthetic {
			class = classSynthetic
		}
		p.path(class+" i", line(x.at(m.Low), y, x.at(m.High), y))
	}
	if !finite(m.Value) {
		return
	}
	at := x.at(m.Value)
	switch m.Class {
	case dotRecorded:
		p.path(m.Class, dot(at, y))
	case dotSynthetic:
		p.path(m.Class, diamond(at, y, 4.5))
	default:
		zero := x.at(0)
		p.path(m.Class, box(min(zero, at), y-4, max(1, max(zero, at)-min(zero, at)), 8))
	}
}
