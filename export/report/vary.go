package report

import (
	"fmt"
	"math"
	"strings"
)

// meanings says what the sizes of variation are, in the order of the page.
var meanings = [...]struct{ what, meaning string }{
	{"timing", "how much faster and slower a take runs here and there than another, as the deviation of the logarithm of its rate"},
	{"timing length", "how long a faster or slower stretch is"},
	{"trim", "how much earlier or later a take begins and ends"},
	{"duration", "how much longer or shorter a take is as a whole"},
	{"orientation", "by what angle a take is turned against another, as by a sensor worn askew"},
	{"amplitude", "how much larger or smaller a group's movement is as a whole"},
	{"gain", "how much larger or smaller it is in some stretches than in others"},
	{"channel gain", "the same of single channels; it is not measured"},
	{"offset", "how far the mean of a channel lies from that of another take, against the size of the movement"},
	{"shape", "what still differs when all of the above is accounted for, against the size of the movement"},
	{"shape length", "how long such a difference lasts"},
	{"straighten", "how far evening out the steps of a path changes a take as much as shape does"},
	{"noise", "how much a sensor at rest trembles"},
}

// plainly says a size in words, empty where its number says all.
func plainly(unit string, v float64) string {
	switch {
	case !finite(v):
		return ""
	case unit == "log":
		return "up or down × " + number(math.Exp(math.Abs(v)))
	case unit == "of take":
		return percent(v) + " of the take"
	case unit == "of size":
		return percent(v) + " of the movement"
	case unit == "rad":
		return minus(fmt.Sprintf("%.1f", v*180/math.Pi)) + "°"
	}
	return ""
}

// sizes returns the table of the sizes of one label, or of all of them in a
// table with the labels' names.
func sizes(list []Size, names bool) *table {
	t := &table{Caption: "Sizes of variation of all labels together", Head: []string{"what", "of", "unit", "measured", "used", "from"}}
	if names {
		t.Caption = "Sizes of variation, label by label"
		t.Head = append([]string{"label"}, t.Head...)
	}
	for _, s := range list {
		measured := cell{Text: "–", Number: true}
		if !s.Default {
			measured = cell{Text: number(s.Measured), Small: between(s.Low, s.High, number), Number: true}
		}
		row := []cell{text(s.What), nameCell(s.Of, "the whole take"), text(unitText(s.Unit)), measured,
			{Text: number(s.Used), Small: plainly(s.Unit, s.Used), Number: true}, {Text: s.from(), Small: s.evidence()}}
		if names {
			row = append([]cell{nameCell(s.Label, "all labels")}, row...)
		}
		t.add(row...)
	}
	return t
}

// from says where the used size comes from.
func (s Size) from() string {
	source := "measured"
	if s.Default {
		source = "default"
	}
	if s.Why != "" {
		source += ": " + s.Why
	}
	return source
}

// evidence says how much is behind a size.
func (s Size) evidence() string {
	switch {
	case s.Takes == 0:
		return ""
	case s.Pairs == 0:
		return counted(s.Takes, "take", "takes")
	}
	return counted(s.Pairs, "pair", "pairs") + " of " + counted(s.Takes, "take", "takes")
}

// mostSizes is how many sizes of one unit are drawn.
const mostSizes = 36

// sizesFigure draws the sizes of all labels together, one panel or more for
// each unit.
func sizesFigure(list []Size) *figure {
	f := &figure{
		Key: []key{{"k-rd", "measured, with its 95 % interval"}, {"k-sd", "used"}},
		Caption: "Each size as the recordings show it and as takes were made with. The used size lies between the measured one and a default, nearer the default the fewer takes there are; " +
			"a diamond alone is a default.",
		Numbers: sizes(list, false),
	}
	left := 0
	for _, unit := range units(list) {
		var rows []row
		for _, s := range list {
			if s.Unit != unit {
				continue
			}
			if len(rows) == mostSizes {
				left++
				continue
			}
			rows = append(rows, s.row())
		}
		f.Panels = append(f.Panels, rowCharts("Sizes of variation in "+unitText(unit)+", measured and used", axisOf(unit), rows)...)
	}
	if left > 0 {
		f.Caption += fmt.Sprintf(" Of each unit the first %d are drawn; %s in the table only.", mostSizes, counted(left, "other is", "others are"))
	}
	return f
}

func (s Size) row() row {
	r := row{Text: s.What}
	if s.Of != "" {
		r.Text += " · " + isolated(s.Of, 26, "")
	}
	if !s.Default {
		r.Marks = append(r.Marks, mark{Class: dotRecorded, Value: s.Measured, Low: s.Low, High: s.High, Interval: true})
	}
	r.Marks = append(r.Marks, mark{Class: dotSynthetic, Value: s.Used})
	return r
}

// units lists the units of sizes in the order in which they come.
func units(list []Size) []string {
	var out []string
	seen := map[string]bool{}
	for _, s := range list {
		if !seen[s.Unit] {
			seen[s.Unit] = true
			out = append(out, s.Unit)
		}
	}
	return out
}

// axisOf writes what an axis of a unit shows.
func axisOf(unit string) string {
	switch unit {
	case "log":
		return "deviation of the natural logarithm"
	case "of take":
		return "share of the take"
	case "of size":
		return "multiple of the group's rms size"
	case "rad":
		return "angle, rad"
	}
	return "size, " + strings.TrimSpace(unitText(unit))
}

// variation is the section on how takes vary.
type variation struct {
	Making   []string
	Missing  string
	Figure   *figure
	ByLabel  *table
	Meanings []meaning
}

type meaning struct{ What, Meaning string }

func (b *builder) variation() variation {
	v := variation{Making: allVisible(b.in.Making)}
	var all, labels []Size
	for _, s := range b.in.Variation {
		if s.Label == "" {
			all = append(all, s)
		} else {
			labels = append(labels, s)
		}
	}
	if len(all)+len(labels) == 0 {
		v.Missing = missing("No sizes of variation were measured for this set", b.in.Absent.Variation)
		return v
	}
	if len(all) > 0 {
		v.Figure = b.number(sizesFigure(all))
	}
	if len(labels) > 0 {
		v.ByLabel = sizes(labels, true)
	}
	named := map[string]bool{}
	for _, s := range b.in.Variation {
		named[s.What] = true
	}
	for _, m := range meanings {
		if named[m.what] {
			v.Meanings = append(v.Meanings, meaning{m.what, m.meaning})
		}
	}
	return v
}
