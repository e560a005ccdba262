package group

import (
	"fmt"
	"io"
	"strings"
	"text/tabwriter"
)

// Write writes the proposal as text: groups, limbs with their evidence, the
// coupling of every pair of limbs by label, the merges, and the notes.
func (p *Proposal) Write(w io.Writer) error {
	t := &table{out: tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)}
	t.row("GROUP", "LIMB", "CHANNELS", "FROM")
	for _, g := range p.Groups {
		t.row(g.Name, g.Limb, few(g.Channels), sources(g.From))
	}
	t.gap()
	t.row("LIMB", "FROM", "EVIDENCE")
	for _, l := range p.Limbs {
		t.evidence(l)
	}
	if len(p.Merges) > 0 {
		t.gap()
		t.row("MEAN ρ", "JOINED", "LIMBS")
		for _, m := range p.Merges {
			joined := "no"
			if m.Done {
				joined = "yes"
			}
			t.row(fmt.Sprintf("%.2f", m.Similarity), joined, strings.Join(m.Members, " "))
		}
	}
	t.flush()
	if t.err != nil {
		return t.err
	}
	if len(p.Coupling.Limbs) > 1 {
		if _, err := fmt.Fprintf(w, "\nLimbs are one from ρ = %.2f.\n\n", p.Threshold); err != nil {
			return err
		}
		if err := p.Coupling.Write(w); err != nil {
			return err
		}
	}
	for _, n := range p.Notes {
		if _, err := fmt.Fprintf(w, "\nnote: %s\n", n); err != nil {
			return err
		}
	}
	return nil
}

// Write writes the coupling as a table: each pair of limbs, label by label and
// then over all labels.
func (c *Coupling) Write(w io.Writer) error {
	t := &table{out: tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)}
	t.row("LIMBS", "LABEL", "TAKES", "ρ", "95 %", "SHAPE", "p", "COUPLED")
	for i := range c.Pooled.Pairs {
		for k := range c.Labels {
			t.pair(&c.Labels[k], i, c.Labels[k].Label)
		}
		t.pair(&c.Pooled, i, "all")
	}
	t.flush()
	return t.err
}

// table writes rows of cells, and keeps the first error.
type table struct {
	out *tabwriter.Writer
	err error
}

func (t *table) row(cells ...string) {
	if t.err == nil {
		_, t.err = fmt.Fprintln(t.out, strings.Join(cells, "\t"))
	}
}

// gap ends a table of its own columns.
func (t *table) gap() {
	t.flush()
	t.row()
}

func (t *table) flush() {
	if t.err == nil {
		t.err = t.out.Flush()
	}
}

func (t *table) evidence(l Proposed) {
	lines := l.Evidence
	if len(lines) == 0 {
		lines = []string{"nothing says that it moves with another"}
	}
	name, from := l.Name, sources(l.From)
	for _, line := range lines {
		t.row(name, from, line)
		name, from = "", ""
	}
}

func (t *table) pair(e *Estimate, i int, label string) {
	p := &e.Pairs[i]
	t.row(p.A+" "+p.B, label, fmt.Sprint(e.Takes), fmt.Sprintf("%.2f", p.Rho), fmt.Sprintf("%.2f to %.2f", p.Low, p.High),
		fmt.Sprintf("%.2f", p.Shape), fmt.Sprintf("%.3f", p.P), p.Verdict(e))
}

// Verdict says in a word or two whether the pair moves together: "yes", "no",
// or that there are too few takes to tell in e, the estimate it is from. A yes
// needs no more than p ≤ 0.05, a no also takes enough to see a coupling.
func (p *Pair) Verdict(e *Estimate) string {
	switch {
	case p.P <= significance:
		return "yes"
	case p.OK:
		return "no"
	case e.Need.Takes > e.Takes:
		return fmt.Sprintf("too few takes, about %d would do", e.Need.Takes)
	}
	return "cannot be told"
}

func sources(list []Source) string {
	out := make([]string, len(list))
	for i, s := range list {
		out[i] = string(s)
	}
	return strings.Join(out, ", ")
}

// few lists names, leaving out the middle of a long list.
func few(list []string) string {
	if len(list) > 4 {
		return fmt.Sprintf("%s, %s, … %s (%d)", list[0], list[1], list[len(list)-1], len(list))
	}
	return strings.Join(list, ", ")
}

// Comments returns a line for each pair of limbs with its ρ and p, for a
// comment in a plan.
func (c *Coupling) Comments() []string {
	var out []string
	for _, p := range c.Pooled.Pairs {
		out = append(out, fmt.Sprintf("%s and %s: ρ = %.2f (%.2f to %.2f), p = %.3f, %d takes; coupled: %s",
			p.A, p.B, p.Rho, p.Low, p.High, p.P, c.Pooled.Takes, p.Verdict(&c.Pooled)))
	}
	return out
}
