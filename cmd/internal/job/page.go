package job

import (
	"bytes"
	"cmp"
	"context"
	"encoding/json"
	"fmt"
	"slices"
	"strings"

	"github.com/BurntSushi/toml"

	"strandwise/augment"
	"strandwise/augment/gate"
	"strandwise/channels"
	"strandwise/channels/group"
	"strandwise/export"
	"strandwise/export/report"
	"strandwise/ingest"
)

// sourcesShown is how many recorded takes of each label the page shows synthetic
// takes of. They are made again for it, which a run that goes on, or one of many
// shards, can do as well as one that makes all takes.
const sourcesShown = 6

// page adds report.html to the set.
func (g *growing) page(ctx context.Context, w *export.Writer, s *survey, maker *augment.Maker) error {
	g.progress.Begin("reporting", -1, "takes")
	shown, tally, err := g.show(ctx, s, maker)
	if err != nil {
		return err
	}
	in := report.Input{
		Title: g.plan.Title, Verdict: "Nothing was scored.", Cautions: export.Cautions(), Notices: g.writing.texts(g.done.Notices),
		Counts: g.counted(s), Repairs: repaired(g.recordings.Repairs()),
		Making:    []string{fmt.Sprintf("Each recorded take that trains has up to %d synthetic ones, made by %s.", g.plan.PerTake, strings.Join(g.plan.Method, ", "))},
		Variation: g.sizesShown(), Labels: shown.Labels(&s.scales), Coupling: pairsShown(g.known.Coupling), Gates: g.gatesShown(tally),
	}
	if g.done.Score != nil {
		in.Verdict = g.writing.texts([]string{g.done.Score.Verdict})[0]
		if in.Score, err = reread[report.Score](g, g.done.Score); err != nil {
			return err
		}
	}
	if g.done.Harm != nil {
		if in.Harm, err = reread[report.Harm](g, g.done.Harm); err != nil {
			return err
		}
	}
	if in.Provenance, err = g.provenance(); err != nil {
		return err
	}
	var page bytes.Buffer
	if err := report.Write(&page, in); err != nil {
		return fmt.Errorf("report.html: %w", err)
	}
	return w.Attach("report.html", page.Bytes())
}

// show makes the takes that the page shows.
func (g *growing) show(ctx context.Context, s *survey, maker *augment.Maker) (*report.Collector, augment.Tally, error) {
	shown, of, all := report.NewCollector(), map[string]int{}, augment.Tally{}
	for _, t := range s.training() {
		shown.Add(g.writing.take(t.Clone()))
		if of[t.Label]++; of[t.Label] > sourcesShown || slices.Contains(g.plan.Spare, t.Label) || g.plan.PerTake == 0 {
			continue
		}
		if err := ctx.Err(); err != nil {
			return nil, all, err
		}
		source, err := maker.Source(t)
		if err != nil {
			return nil, all, err
		}
		made, tally := source.Takes(g.plan.PerTake)
		all.Merge(tally)
		if g.plan.Keep > 0 {
			made = made[:min(g.plan.Keep, len(made))]
		}
		for _, m := range made {
			shown.Add(g.writing.take(m))
		}
	}
	return shown, all, nil
}

// counted returns the takes of the set by label, subject and split. Where draws
// failed the gates there are fewer synthetic ones: the manifest counts them.
func (g *growing) counted(s *survey) []report.Count {
	each := g.plan.PerTake
	if g.plan.Keep > 0 {
		each = min(each, g.plan.Keep)
	}
	var out []report.Count
	for key, n := range s.counts {
		c := report.Count{Label: key.label, Subject: g.writing.text(key.subject), Split: key.split, Recorded: n}
		if key.split != channels.Test && !slices.Contains(g.plan.Spare, key.label) {
			c.Synthetic = n * each
		}
		out = append(out, c)
	}
	slices.SortFunc(out, func(a, b report.Count) int {
		return cmp.Or(cmp.Compare(a.Label, b.Label), cmp.Compare(a.Subject, b.Subject), cmp.Compare(a.Split, b.Split))
	})
	return out
}

func repaired(r ingest.Repairs) []report.Repair {
	var out []report.Repair
	for _, one := range []struct {
		what string
		n    int
	}{
		{"recordings put onto a uniform clock", r.Recordings}, {"frames sorted", r.Sorted}, {"frames merged into others of the same time", r.Merged},
		{"frames moved", r.Moved}, {"short gaps filled", r.Gaps}, {"frames made to fill them", r.Made}, {"missing values filled", r.Values},
		{"frames left out", r.LeftOut}, {"recordings split at long gaps", r.Splits}, {"sensors brought to another rate", r.Rates}, {"takes cut from longer recordings", r.Cuts},
	} {
		if one.n > 0 {
			out = append(out, report.Repair{What: one.what, Count: int64(one.n)})
		}
	}
	return out
}

// sizesShown returns the variation of all labels together.
func (g *growing) sizesShown() []report.Size {
	var out []report.Size
	for _, f := range g.known.Measured.Figures {
		if f.Label == "" {
			out = append(out, report.Size{
				What: string(f.Part), Of: f.Of, Unit: f.Unit, Measured: f.Measured, Low: f.Low, High: f.High,
				Used: f.Used, Default: f.Default, Pairs: f.Pairs, Takes: f.Takes, Why: f.Why,
			})
		}
	}
	return out
}

func pairsShown(c *group.Coupling) []report.Pair {
	if c == nil {
		return nil
	}
	var out []report.Pair
	for _, e := range append([]group.Estimate{c.Pooled}, c.Labels...) {
		for _, p := range e.Pairs {
			out = append(out, report.Pair{Label: e.Label, A: p.A, B: p.B, Rho: p.Rho, Low: p.Low, High: p.High, P: p.P, Takes: e.Takes, TooFew: !p.OK})
		}
	}
	return out
}

// gatesShown tells what the gates said of the draws made for the page.
func (g *growing) gatesShown(t augment.Tally) report.Gates {
	out := report.Gates{Wanted: int64(t.Wanted), Made: int64(t.Made), Checked: int64(t.Gates.Checked), Passed: int64(t.Gates.Passed)}
	for _, name := range gate.All() {
		one := report.Gate{Name: name.String(), Wants: wants(name), Failed: int64(t.Gates.Failed[name]), Checked: int64(t.Gates.Checked)}
		if slices.Contains(g.making.gates.Off, name) {
			one.Checked = 0
		}
		out.List = append(out.List, one)
	}
	return out
}

// provenance says where the set comes from.
func (g *growing) provenance() (report.Provenance, error) {
	var plan bytes.Buffer
	if err := toml.NewEncoder(&plan).Encode(g.plan.settings()); err != nil {
		return report.Provenance{}, fmt.Errorf("plan: %w", err)
	}
	p := report.Provenance{
		Program: "strandwise " + g.version, Command: "strandwise grow --plan plan.toml --out set",
		Seed: g.plan.Seed, Plan: g.writing.texts([]string{plan.String()})[0],
	}
	for _, f := range g.recordings.Files() {
		p.Recordings = append(p.Recordings, report.File{Path: g.writing.texts([]string{f.Path})[0], Bytes: f.Bytes, SHA256: f.SHA256})
	}
	return p, nil
}

// reread returns a document as another package reads it, with names hidden as in
// the set.
func reread[T any](g *growing, document any) (*T, error) {
	text, err := json.Marshal(document)
	if err != nil {
		return nil, err
	}
	out := new(T)
	return out, json.Unmarshal(g.writing.json(text), out)
}
