package report

import (
	"cmp"
	"fmt"
	"slices"
)

// labelGains draws what synthetic takes did to each label.
func labelGains(r Result) *figure {
	list := slices.Clone(r.PerLabel)
	gain := func(l LabelResult) float64 {
		if l.Synthetic == nil || l.Tested == 0 {
			return 0
		}
		return float64(l.Recorded-*l.Synthetic) / float64(l.Tested)
	}
	slices.SortStableFunc(list, func(a, b LabelResult) int { return cmp.Compare(gain(a), gain(b)) })
	f := &figure{
		Key: changeKeys(),
		Caption: fmt.Sprintf("Errors saved on each label by %s with %s, in percentage points of its tests; labels that lost most come first. Bars to the left are harm. With few tests a bar is often chance: p is corrected for the number of labels (Holm).",
			r.learner(), perLabelText(r.TakesPerLabel)),
		Numbers: &table{Caption: "Errors by label", Head: []string{"label", "tests", "errors, recorded", "errors, with synthetic", "change, points", "p (Holm)", "finding"}},
	}
	var rows []row
	for _, l := range list {
		g := gain(l)
		class := barGain
		if g < 0 {
			class = barHarm
		}
		with := "–"
		if l.Synthetic != nil {
			with = whole(*l.Synthetic)
		}
		r := row{Text: fmt.Sprintf("%s · %s", isolated(l.Label, 28, "no label"), points(g))}
		if g != 0 {
			r.Marks = []mark{{Class: class, Value: 100 * g}}
		}
		rows = append(rows, r)
		f.Numbers.add(nameCell(l.Label, "no label"), figures(whole(l.Tested)), figures(whole(l.Recorded)), figures(with), figures(points(g)), figures(optional(l.P, pValue)), finding(l.Finding))
	}
	f.Panels = rowCharts("Errors saved by label", "errors saved, percentage points", rows)
	return f
}

// harm adds what an inner validation found.
func (b *builder) harm(out *scored) {
	h := b.in.Harm
	if h == nil || len(h.Labels) == 0 {
		out.HarmText = missing("Whether growing harms a label was not looked at on the training takes alone", b.in.Absent.Harm)
		return
	}
	f := &figure{
		Key: []key{{"k-rd", "errors saved, with its 95 % interval"}},
		Caption: "Errors saved on training takes that were left out, by label, as a share of the takes tested. Intervals wholly to the left of 0 are harm; they are not corrected for the number of labels, of which one in " +
			"forty is to be expected on either side by chance.",
		Numbers: &table{Caption: "Errors on training takes left out", Head: []string{"label", "takes", "errors, recorded", "errors, with synthetic", "change, points", "95 % interval", "p", "finding"}},
	}
	var rows []row
	first := h.Labels[0].Learner
	for _, l := range h.Labels {
		if l.Learner != first {
			continue
		}
		r := row{Text: fmt.Sprintf("%s · %s", isolated(l.Label, 28, "no label"), points(l.Gain))}
		if l.Tested > 0 {
			r.Marks = []mark{{Class: dotRecorded, Value: 100 * l.Gain, Low: 100 * l.Low, High: 100 * l.High, Interval: true}}
		}
		rows = append(rows, r)
		f.Numbers.add(nameCell(l.Label, "no label"), figures(whole(l.Tested)), figures(whole(l.Recorded)), figures(whole(l.Synthetic)), figures(points(l.Gain)), figures(between(l.Low, l.High, points)), figures(pValue(l.P)), finding(l.Finding))
	}
	f.Panels = rowCharts("Errors saved on training takes by label", "errors saved, percentage points", rows)
	out.Harm = b.number(f)
	out.HarmText = fmt.Sprintf("Training takes were dealt into parts, each left out once by whole %s, and recognised by %s from the rest with %s for each recorded one.", cmp.Or(h.LeftOut, "takes"), first, counted(h.PerTake, "synthetic take", "synthetic takes"))
}
