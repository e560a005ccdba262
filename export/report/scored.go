package report

import (
	"cmp"
	"fmt"
	"slices"
)

// scored is the section on the score.
type scored struct {
	Missing    string
	Text       string
	Notes      []string
	Overall    *table
	Errors     *figure // errors with intervals
	Curve      *figure // over recorded takes per label
	NoCurve    string
	PerTake    *figure // over synthetic takes per recorded one
	Labels     *figure // per label gain or harm
	NoLabels   string
	Confusion  *figure
	Mistakes   *table
	Rejection  *table
	Harm       *figure
	HarmText   string
	Unfinished bool
}

func (b *builder) scored() scored {
	out := scored{}
	b.harm(&out)
	s := b.in.Score
	if s == nil || len(s.Results) == 0 {
		out.Missing = missing("Nothing was scored", b.in.Absent.Score)
		return out
	}
	out.Text, out.Notes, out.Unfinished = s.told(), s.Notes, s.Unfinished
	out.Overall = s.overall()
	out.Errors = b.number(s.errors())
	out.Curve, out.NoCurve = s.curve()
	out.Curve = b.number(out.Curve)
	out.PerTake = b.number(s.perTake())
	before, after, ok := s.last()
	if !ok {
		out.NoLabels = "No synthetic takes were scored, so there is neither gain nor harm to show."
		return out
	}
	out.Labels = b.number(labelGains(after))
	out.Confusion = b.number(b.confusion(before, after))
	out.Mistakes = b.mistakes(before, after)
	out.Rejection = s.rejections()
	return out
}

// told says how the score was made.
func (s *Score) told() string {
	how := map[string]string{
		"given":   "Takes kept for the test were recognised by what was learnt from the others.",
		"subject": "The takes of each subject were recognised by what was learnt from the other subjects.",
		"session": "The takes of each session were recognised by what was learnt from the other sessions.",
		"pooled":  "Takes drawn at random were recognised by what was learnt from others.",
	}[s.Protocol]
	if how == "" {
		how = "The protocol is " + s.Protocol + "."
	}
	out := fmt.Sprintf("%s Both sides saw the same splits and the same tested takes: recorded takes alone, and with %s for each recorded one. Synthetic takes were never tested, nor made from a tested take.",
		how, counted(s.PerTake, "synthetic take", "synthetic takes"))
	if s.Resampled != "" {
		out += " Intervals hold at 95 %; those of reductions come from resampling " + s.Resampled + "."
	}
	return out
}

// overall is the table of all comparisons.
func (s *Score) overall() *table {
	if len(s.Overall) == 0 {
		return nil
	}
	t := &table{Caption: "Errors with recorded takes alone and with synthetic ones, over all numbers of takes per label",
		Head: []string{"learner", "method", "tests", "errors, recorded", "errors, with synthetic", "errors saved", "p", "finding"}}
	for _, o := range s.Overall {
		t.add(text(o.learner()), text(o.Method), figures(whole(o.Tested)), figures(whole(o.Recorded)),
			cell{Text: whole(o.Errors), Small: "error " + percent(o.Error) + ", " + between(o.Low, o.High, percent), Number: true},
			saved(o.Reduction, o.ReductionLow, o.ReductionHigh), figures(optional(o.P, pValue)), finding(o.Finding))
	}
	return t
}

// saved writes the share of errors saved with its interval.
func saved(v, low, high *float64) cell {
	c := cell{Text: optional(v, percent), Number: true}
	switch {
	case low != nil && high != nil:
		c.Small = between(*low, *high, percent)
	case high != nil:
		c.Small = "up to " + percent(*high)
	}
	return c
}

func optional(v *float64, write func(float64) string) string {
	if v == nil {
		return "–"
	}
	return write(*v)
}

// finding writes a finding with a mark that is no colour.
func finding(f string) cell {
	switch f {
	case "helps":
		return text("▲ helps")
	case "hurts":
		return text("▼ hurts")
	}
	return text(cmp.Or(f, "–"))
}

// perLabelText writes a number of takes per label.
func perLabelText(k *int) string {
	if k == nil {
		return "the training takes there are"
	}
	return counted(*k, "take per label", "takes per label")
}

// errors draws the errors of every learner.
func (s *Score) errors() *figure {
	f := &figure{
		Key:     dotKeys(),
		Caption: "Share of tests that went wrong, with 95 % intervals. Diamonds to the left of their dots mean fewer errors. Both sides met the same tests, so intervals that overlap may still differ: the table of comparisons tells.",
		Numbers: &table{Caption: "Errors", Head: []string{"learner", "learnt from", "method", "tests", "errors", "share", "95 % interval"}},
	}
	for _, learner := range s.learners() {
		var rows []row
		for _, r := range s.Results {
			if r.learner() != learner {
				continue
			}
			m := mark{Class: dotRecorded, Value: 100 * r.Error, Low: 100 * r.Low, High: 100 * r.High, Interval: true}
			what := "recorded"
			if r.Method != recordedOnly {
				m.Class, what = dotSynthetic, "with "+r.Method
			}
			rows = append(rows, row{Text: what + " · " + perLabelText(r.TakesPerLabel), Marks: []mark{m}})
			f.Numbers.add(text(learner), text(perLabelText(r.TakesPerLabel)), text(what), figures(whole(r.Tested)), figures(whole(r.Errors)), figures(percent(r.Error)), figures(between(r.Low, r.High, percent)))
		}
		charts := rowCharts("Errors of "+learner, "errors, % of tests", rows)
		charts[0].Title = named(learner, "a learner")
		f.Panels = append(f.Panels, charts...)
	}
	return f
}

// point is one point of a curve: a share in per cent with its interval.
type point struct{ x, y, low, high float64 }

// curves draws lines of errors over a number, one for recorded takes and one
// with synthetic ones. A list without points draws nothing.
func curves(title, axis string, recorded, synthetic []point) panel {
	p := panel{Name: "Errors of " + title + " over " + axis, Title: named(title, "a learner"), Width: panelWidth, Height: 200}
	var ex, ey extent
	ey.add(0)
	for _, q := range slices.Concat(recorded, synthetic) {
		ex.add(q.x)
		ey.add(q.y, q.low, q.high)
	}
	xl, xh := ex.padded(0.06)
	_, yh := ey.padded(0.05)
	x, y := linear{xl, xh, traceLeft, traceRight}, linear{0, yh, 162, 16}
	p.xAxisAt(wholeTicks(xl, xh), x, 16, 162, axis)
	p.yAxis(y, traceLeft, traceRight)
	p.text(classTick, 2, 10, "", "errors, % of tests")
	p.curve(classRecorded, recorded, x, y, -1.5)
	p.curve(classSynthetic, synthetic, x, y, 1.5)
	return p
}

// curve draws one line, its points and their intervals, which stand a little
// aside so that those of two lines do not cover each other.
func (p *panel) curve(class string, list []point, x, y linear, aside float64) {
	var at []float64
	intervals, marks := "", ""
	for _, q := range list {
		if !finite(q.y) || !finite(q.low) || !finite(q.high) {
			continue
		}
		at = append(at, x.at(q.x)+aside, y.at(q.y))
		intervals += line(x.at(q.x)+aside, y.at(q.low), x.at(q.x)+aside, y.at(q.high))
		if class == classRecorded {
			marks += dot(x.at(q.x)+aside, y.at(q.y))
		} else {
			marks += diamond(x.at(q.x)+aside, y.at(q.y), 4.5)
		}
	}
	p.path(class+" i", intervals)
	p.path(class+" w", line(at...))
	p.path(class+"d", marks)
}

// curve draws errors over recorded takes per label; the text says why there is
// none.
func (s *Score) curve() (*figure, string) {
	f := &figure{
		Key:     dotKeys(),
		Caption: "Errors over the number of recorded takes per label that were learnt from, with 95 % intervals. Where the lower line meets the height of the upper one at fewer takes, synthetic takes have spared recordings.",
		Numbers: &table{Caption: "Errors over recorded takes per label", Head: []string{"learner", "takes per label", "recorded", "with synthetic"}},
	}
	for _, learner := range s.learners() {
		recorded, synthetic := curvePoints(s.results(learner, recordedOnly)), curvePoints(s.results(learner, s.method()))
		if len(recorded) < 2 {
			continue
		}
		if s.method() == recordedOnly {
			synthetic = nil
		}
		f.Panels = append(f.Panels, curves(learner, "recorded takes per label", recorded, synthetic))
		for i, q := range recorded {
			with := "–"
			if i < len(synthetic) {
				with = percent(synthetic[i].y / 100)
			}
			f.Numbers.add(text(learner), figures(number(q.x)), figures(percent(q.y/100)), figures(with))
		}
	}
	if len(f.Panels) == 0 {
		return nil, "There is no curve over recorded takes per label: it takes a score with several numbers of them (protocol pooled), and this one has " + s.only() + "."
	}
	return f, ""
}

// only says which number of takes per label the score was made with.
func (s *Score) only() string { return perLabelText(s.Results[0].TakesPerLabel) }

func curvePoints(list []Result) []point {
	var out []point
	for _, r := range list {
		if r.TakesPerLabel != nil {
			out = append(out, point{float64(*r.TakesPerLabel), 100 * r.Error, 100 * r.Low, 100 * r.High})
		}
	}
	return out
}

// perTake draws errors over synthetic takes per recorded one; nil where the
// score has no such curve.
func (s *Score) perTake() *figure {
	f := &figure{
		Key:     []key{{"k-sd", "with synthetic takes"}},
		Caption: "Errors over the number of synthetic takes for each recorded one, the best choice first, with 95 % intervals; 0 is recorded takes alone. Where the line runs level, more takes bring nothing.",
		Numbers: &table{Caption: "Errors over synthetic takes per recorded one", Head: []string{"learner", "synthetic takes", "share", "95 % interval"}},
	}
	for _, learner := range s.learners() {
		list := s.results(learner, s.method())
		if len(list) == 0 || len(list[len(list)-1].Curve) == 0 {
			continue
		}
		r, points := list[len(list)-1], []point(nil)
		for _, c := range append(slices.Clone(r.Curve), CurvePoint{s.PerTake, r.Error, r.Low, r.High}) {
			if n := len(points); n > 0 && points[n-1].x == float64(c.PerTake) {
				continue
			}
			points = append(points, point{float64(c.PerTake), 100 * c.Error, 100 * c.Low, 100 * c.High})
			f.Numbers.add(text(learner), figures(whole(c.PerTake)), figures(percent(c.Error)), figures(between(c.Low, c.High, percent)))
		}
		title := learner + ", " + perLabelText(r.TakesPerLabel)
		f.Panels = append(f.Panels, curves(title, "synthetic takes per recorded one", nil, points))
	}
	if len(f.Panels) == 0 {
		return nil
	}
	return f
}

// rejections tells of movements that are no gesture; nil where that was not
// asked.
func (s *Score) rejections() *table {
	t := &table{Caption: "Telling gestures from movements that are none, by distance", Head: []string{"learner", "learnt from", "takes", "distance", "errors either way", "95 % interval"}}
	for _, r := range s.Results {
		if x := r.Rejection; x != nil {
			what := "recorded"
			if r.Method != recordedOnly {
				what = "with " + r.Method
			}
			t.add(text(r.learner()), text(perLabelText(r.TakesPerLabel)), text(what), figures(number(x.Threshold)), figures(percent(x.Error)), figures(between(x.Low, x.High, percent)))
		}
	}
	if len(t.Rows) == 0 {
		return nil
	}
	return t
}
