package report

import "fmt"

// gates is the section on what draws had to pass.
type gates struct {
	Missing string
	Text    string
	Figure  *figure
}

func (b *builder) gates() gates {
	g := b.in.Gates
	if len(g.List) == 0 {
		return gates{Missing: missing("No gates were applied", b.in.Absent.Gates)}
	}
	out := gates{Text: g.told()}
	f := &figure{
		Caption: "The share of draws that each gate refused. A draw may fail several. A long bar says that the variation asked for is more than the recordings bear there, or that the gate stands too narrow.",
		Numbers: &table{Caption: "Draws refused", Head: []string{"gate", "wants of a draw", "checked", "refused", "share"}},
	}
	var rows []row
	for _, gate := range g.List {
		row := row{Text: fmt.Sprintf("%s: %s refused", gate.Name, whole(gate.Failed))}
		checked, share := figures("not applied"), figures("–")
		if gate.Checked > 0 {
			v := float64(gate.Failed) / float64(gate.Checked)
			if v > 0 {
				row.Marks = []mark{{Class: barHarm, Value: 100 * v}}
			}
			checked, share = figures(whole(gate.Checked)), figures(percent(v))
		}
		rows = append(rows, row)
		f.Numbers.add(text(gate.Name), text(gate.Wants), checked, figures(whole(gate.Failed)), share)
	}
	f.Panels = rowCharts("Share of draws refused, by gate", "draws refused, %", rows)
	out.Figure = b.number(f)
	return out
}

// told says how many draws it took.
func (g Gates) told() string {
	s := ""
	if g.Checked > 0 {
		s = fmt.Sprintf("Of %s checked, %s passed every gate (%s).", counted(g.Checked, "draw", "draws"), whole(g.Passed), percent(float64(g.Passed)/float64(g.Checked)))
	}
	if g.Wanted > 0 {
		s += fmt.Sprintf(" %s asked for and %s made.", counted(g.Wanted, "take was", "takes were"), whole(g.Made))
		if short := g.Wanted - g.Made; short > 0 {
			s += fmt.Sprintf(" The other %s: their draws kept failing, and nothing was put in their place.", counted(short, "is missing", "are missing"))
		}
	}
	return s
}
