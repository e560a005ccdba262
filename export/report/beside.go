package report

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"strandwise/channels"
)

// mostDrawn is how many labels the page draws the takes of.
const mostDrawn = 48

// beside is the section of recorded and synthetic takes.
type beside struct {
	Missing string
	Text    string
	Summary *table
	Labels  []labelView
}

// labelView is the part on one label.
type labelView struct {
	ID     string
	Number int
	Name   name
	Text   string
	Clock  panel // the time axis that its panels share
	Groups []groupView
	Left   string // groups that are not drawn
	Paths  *figure
	Spread *figure
	None   string // why there is no figure of distances
}

type groupView struct {
	Name   name
	Figure *figure
}

// drawn lists the labels whose takes are drawn: all, or where there are too
// many those whose synthetic takes are least like the recorded ones.
func (in Input) drawn() []Label {
	var list []Label
	for _, l := range in.Labels {
		if len(l.Recorded)+len(l.Synthetic) > 0 {
			list = append(list, l)
		}
	}
	if len(list) <= mostDrawn {
		return list
	}
	unlike := make([]float64, len(list))
	for i, l := range list {
		if unlike[i] = l.relative(); math.IsNaN(unlike[i]) {
			unlike[i] = -1
		}
	}
	return pick(list, unlike, mostDrawn)
}

func (b *builder) beside() beside {
	var out beside
	if len(b.in.Labels) == 0 {
		out.Missing = missing("There are no takes to look at", b.in.Absent.Labels)
		return out
	}
	list := b.in.drawn()
	out.Summary = b.likeness()
	out.Text = b.besideText(list)
	n := perTrace(list)
	for _, l := range list {
		out.Labels = append(out.Labels, b.labelView(l, n))
	}
	return out
}

// besideText says what is drawn and what is not.
func (b *builder) besideText(list []Label) string {
	s := "A few takes of each label, chosen by chance, are drawn over each other. Distances are those of whole takes brought to one length, the movement of each channel group divided by its rms size over all takes."
	if n := len(b.in.Labels) - len(list); n > 0 {
		s += fmt.Sprintf(" Of %d labels those %d are drawn whose synthetic takes are least like the recorded ones, as far as there are takes to draw.", len(b.in.Labels), len(list))
	}
	if !slices.ContainsFunc(list, func(l Label) bool { return len(trackedPoints(newDrawing(l, "", 0).layout)) > 0 }) {
		s += " There are no paths of hands, because no channels of these recordings are known to be positions."
	}
	return s
}

// likeness is the table of how like recorded takes the synthetic ones are.
func (b *builder) likeness() *table {
	t := &table{Caption: "How far takes are from the middle of their label: the Wasserstein-1 distance between the distances of recorded and of synthetic takes, as a share of the mean distance of the recorded ones. 0 is alike; the bar ends at 1.",
		Head: []string{"no.", "label", "Wasserstein-1 distance", "recorded, mean", "synthetic, mean"}}
	for _, l := range b.in.Labels {
		share, r, s := figures("–"), "–", "–"
		if v := l.relative(); finite(v) {
			share = cell{Text: percent(v), Number: true, Bars: []bar{{barSynthetic, box(0, 2, max(0.5, 100*min(v, 1)), 8)}}}
			r, s = number(mean(l.RecordedDistances)), number(mean(l.SyntheticDistances))
		}
		t.add(text(fmt.Sprint(b.places[l.Name]+1)), b.linked(l.Name), share, figures(r), figures(s))
	}
	return t
}

func mean(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x
	}
	return sum / float64(len(v))
}

// perTrace returns how many points a line may have so that the page stays
// small.
func perTrace(list []Label) int {
	lines := 0
	for _, l := range list {
		d := newDrawing(l, "", 0)
		groups, _ := d.groups()
		for _, g := range groups {
			lines += min(len(g.Channels), mostChannels) * (len(l.Recorded) + len(l.Synthetic))
		}
	}
	return min(mostPerTrace, max(fewestInTrace, pointBudget/max(lines, 1)))
}

func (b *builder) labelView(l Label, points int) labelView {
	d := newDrawing(l, b.id(l.Name), points)
	v := labelView{ID: d.id, Number: b.places[l.Name] + 1, Name: named(l.Name, "no label"), Clock: d.clock(), Text: b.drawnText(l)}
	groups, left := d.groups()
	for i, g := range groups {
		v.Groups = append(v.Groups, groupView{named(cmp.Or(g.Name, fmt.Sprint("group ", i+1)), ""), b.number(d.traces(g))})
	}
	if left > 0 {
		v.Left = fmt.Sprintf("Drawn are the %d channel groups that move most; %s not.", len(groups), counted(left, "other is", "others are"))
	}
	v.Paths = b.number(d.paths())
	if v.Spread = b.number(spread(l)); v.Spread == nil {
		v.None = "Distances to the middle of the label are not shown: it takes three recorded takes that train, and a synthetic one."
	}
	return v
}

// drawnText says how many takes of a label are drawn of how many.
func (b *builder) drawnText(l Label) string {
	recorded, synthetic := 0, 0
	for _, c := range b.in.Counts {
		if c.Label == l.Name {
			if c.Split != channels.Test {
				recorded += c.Recorded
			}
			synthetic += c.Synthetic
		}
	}
	of := func(n, all int, what string) string {
		if all < n {
			return fmt.Sprintf("%d %s", n, what)
		}
		return fmt.Sprintf("%d of %s %s", n, whole(all), what)
	}
	return fmt.Sprintf("Drawn: %s and %s takes.", of(len(l.Recorded), recorded, "recorded (training)"), of(len(l.Synthetic), synthetic, "synthetic"))
}
