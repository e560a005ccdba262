package report_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"golang.org/x/net/html"

	"strandwise/channels"
	"strandwise/export/report"
)

// twoWrists is the layout of an accelerometer and a tracked hand.
func twoWrists(t testing.TB) *channels.Layout {
	t.Helper()
	l := &channels.Layout{}
	for _, name := range []string{"left_wrist.accel.x", "left_wrist.accel.y", "right_hand.pos.x", "right_hand.pos.y", "right_hand.pos.z"} {
		c, _ := channels.ParseHeader(name)
		c.Unit = c.Quantity.SI()
		l.Channels = append(l.Channels, c)
	}
	l, err := l.WithGroups([]channels.Group{{Name: "left_wrist.accel", Limb: "left_arm", Channels: []int{0, 1}}, {Name: "right_hand.pos", Limb: "right_arm", Channels: []int{2, 3, 4}}})
	if err != nil {
		t.Fatal(err)
	}
	return l
}

// waved returns an invented take of so many frames at 50 Hz.
func waved(l *channels.Layout, id, label, subject string, frames int, r *rand.Rand) *channels.Take {
	t := &channels.Take{ID: id, Label: label, Subject: subject, Layout: l}
	size, phase := 1+0.2*r.Float64(), r.Float64()
	for i := range frames {
		t.Time = append(t.Time, float64(i)/50)
		for c := range l.Channels {
			t.Data = append(t.Data, size*math.Sin(phase+float64(c+1)*2*float64(i)/float64(frames)))
		}
	}
	return t
}

// made marks a take as a synthetic one.
func made(t *channels.Take, source string) *channels.Take {
	t.Made = &channels.Making{Source: source, Method: "recipe"}
	return t
}

// theatre returns invented takes, recorded and synthetic.
func theatre(t testing.TB, labels []string, recorded, synthetic, frames int) []*channels.Take {
	l := twoWrists(t)
	r := rand.New(rand.NewPCG(1, 1))
	var out []*channels.Take
	for _, label := range labels {
		for k := range recorded {
			source := waved(l, fmt.Sprint(label, "_", k), label, fmt.Sprint("puppeteer ", k%2), frames+r.IntN(3), r)
			out = append(out, source)
			for d := range synthetic {
				out = append(out, made(waved(l, fmt.Sprint(source.ID, "~", d), label, source.Subject, frames+r.IntN(3), r), source.ID))
			}
		}
	}
	return out
}

// collected returns a collector that has seen these takes.
func collected(takes []*channels.Take) *report.Collector {
	c := report.NewCollector()
	for _, t := range takes {
		c.Add(t)
	}
	return c
}

func of[T any](v T) *T { return &v }

// whole returns an input in which every part of the page has something to say.
func whole(t testing.TB, labels ...string) report.Input {
	c := collected(theatre(t, labels, 4, 2, 12))
	sizes := func(label string) []report.Size {
		return []report.Size{
			{Label: label, What: "timing", Unit: "log", Measured: 0.21, Low: 0.17, High: 0.26, Used: 0.2, Pairs: 24, Takes: 8},
			{Label: label, What: "trim", Unit: "of take", Measured: 0.03, Low: 0.01, High: 0.05, Used: 0.04, Pairs: 24, Takes: 8},
			{Label: label, What: "orientation", Of: "right_hand.pos", Unit: "rad", Used: 0.15, Default: true, Why: "no three axes"},
			{Label: label, What: "noise", Of: "left_wrist.accel.x", Unit: "m/s²", Measured: 0.05, Low: 0.04, High: 0.06, Used: 0.05, Takes: 8},
		}
	}
	in := report.Input{
		Title: "Lantern Street cues", Verdict: "Synthetic takes help: 9 errors in 16 tests become 4.",
		Cautions:  []string{"Synthetic takes are no evidence about people who were never recorded."},
		Notices:   []string{"one recording had no subject"},
		Counts:    append(c.Counts(), report.Count{Label: labels[0], Subject: "puppeteer 9", Split: channels.Test, Recorded: 3}),
		Repairs:   []report.Repair{{What: "frames filled in short gaps", Count: 1234}, {What: "lines out of order", Count: 0}},
		Making:    []string{"Each recorded take that trains has 2 synthetic ones."},
		Variation: append(sizes(""), sizes(labels[0])...),
		Labels:    c.Labels(nil),
		Coupling: []report.Pair{
			{A: "left_arm", B: "right_arm", Rho: 0.62, Low: 0.41, High: 0.8, P: 0.001, Takes: 8},
			{Label: labels[0], A: "left_arm", B: "right_arm", Takes: 4, TooFew: true},
		},
		Gates: report.Gates{Wanted: 20, Made: 18, Checked: 25, Passed: 18, List: []report.Gate{
			{Name: "jerk", Wants: "at most 1.5 times the recorded rms jerk", Failed: 6, Checked: 25}, {Name: "bones", Wants: "bones keep their length"},
		}},
		Harm: &report.Harm{LeftOut: "subjects", PerTake: 2},
		Provenance: report.Provenance{Program: "strandwise 1.0", Command: "strandwise grow --plan plan.toml --out set", Seed: 18446744073709551615,
			Plan:       "seed = 7\nper_take = 2\n",
			Recordings: []report.File{{Path: "recordings/bow_1.csv", Bytes: 12345, SHA256: strings.Repeat("ab", 32)}},
			Files:      []report.File{{Path: "takes/split=train/part-00000.parquet", Bytes: 3, SHA256: strings.Repeat("cd", 32)}}},
	}
	in.Score = scoreOf(labels)
	for _, label := range labels {
		in.Harm.Labels = append(in.Harm.Labels, report.LabelHarm{Learner: "euclidean-dependent", Label: label, Tested: 4, Recorded: 2, Synthetic: 1, Gain: 0.25, Low: -0.2, High: 0.6, P: 0.5, Finding: "no difference shown"})
	}
	return in
}

// scoreOf returns an invented score with one and two takes per label.
func scoreOf(labels []string) *report.Score {
	s := &report.Score{Protocol: "pooled", PerTake: 2, LabelNames: slices.Sorted(slices.Values(labels)), Takes: 8, Resampled: "splits and takes", Notes: []string{"few takes"}, Verdict: "Synthetic takes help."}
	for k := 1; k <= 2; k++ {
		before := report.Result{Distance: "euclidean-dependent", TakesPerLabel: &k, Method: "none", Tested: 16, Errors: 10 - k, Error: float64(10-k) / 16, Low: 0.3, High: 0.8}
		after := before
		after.Method, after.Errors, after.Error, after.Low, after.High, after.Finding = "recipe", 5-k, float64(5-k)/16, 0.1, 0.5, "helps"
		after.Reduction, after.ReductionLow, after.ReductionHigh, after.P = of(0.5), of(0.2), of(0.8), of(0.003)
		after.Curve = []report.CurvePoint{{PerTake: 0, Error: before.Error, Low: before.Low, High: before.High}, {PerTake: 1, Error: 0.4, Low: 0.2, High: 0.6}}
		after.Rejection = &report.Rejection{Threshold: 1.5, Error: 0.2, Low: 0.1, High: 0.3}
		for i := range s.LabelNames {
			row, better := make([]int, len(labels)), make([]int, len(labels))
			row[i], row[0], better[i] = 3, row[0]+5, 8
			before.Confusion, after.Confusion = append(before.Confusion, row), append(after.Confusion, better)
			after.PerLabel = append(after.PerLabel, report.LabelResult{Label: s.LabelNames[i], Tested: 8, Recorded: 4, Synthetic: of(3 + 2*(i%2)), P: of(0.04), Finding: []string{"helps", "hurts"}[i%2]})
		}
		s.Results = append(s.Results, before, after)
	}
	s.Overall = []report.Overall{{Distance: "euclidean-dependent", Method: "recipe", Tested: 32, Recorded: 17, Errors: 7, Error: 0.22, Low: 0.1, High: 0.4, Reduction: of(0.59), ReductionLow: of(0.2), ReductionHigh: of(0.8), P: of(0.002), Finding: "helps"}}
	return s
}

// written returns the page of an input.
func written(t testing.TB, in report.Input) string {
	t.Helper()
	var b strings.Builder
	if err := report.Write(&b, in); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// parsed returns the elements of a page in order.
func parsed(t testing.TB, page string) []*html.Node {
	t.Helper()
	root, err := html.Parse(strings.NewReader(page))
	if err != nil {
		t.Fatal(err)
	}
	var out []*html.Node
	for n := range root.Descendants() {
		if n.Type == html.ElementNode {
			out = append(out, n)
		}
	}
	return out
}

func attribute(n *html.Node, name string) (string, bool) {
	for _, a := range n.Attr {
		if a.Key == name {
			return a.Val, true
		}
	}
	return "", false
}

// content is the text in an element.
func content(n *html.Node) string {
	var b strings.Builder
	for d := range n.Descendants() {
		if d.Type == html.TextNode {
			b.WriteString(d.Data)
		}
	}
	return b.String()
}

var (
	notANumber = math.NaN()
	inf        = math.Inf(1)
)
