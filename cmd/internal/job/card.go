package job

import (
	"fmt"
	"slices"
	"strings"

	"strandwise/augment/gate"
	"strandwise/export"
)

// card is what the set's card says beside what the set knows of itself.
func (g *growing) card() export.Card {
	c := g.writing.card()
	c.Method = fmt.Sprintf("Each recorded take that trains has up to %d synthetic ones, made by %s.", g.plan.PerTake, strings.Join(g.plan.Method, ", "))
	if g.known.Measured != nil {
		var b strings.Builder
		if err := g.known.Measured.Table(&b, false); err == nil { // a builder never fails
			c.Variation = b.String()
		}
	}
	if g.known.Gates != nil {
		for _, name := range gate.All() {
			if slices.Contains(g.making.gates.Off, name) {
				continue
			}
			c.Gates = append(c.Gates, export.Gate{Name: name.String(), Wants: wants(name)}) // what they refused is tallied
		}
	}
	if g.done.Score != nil {
		c.Score = g.writing.texts(append([]string{g.done.Score.Verdict}, g.done.Score.Notes...))
	}
	return c
}

// wants tells what a gate wants of a take.
func wants(name gate.Gate) string {
	switch name {
	case gate.Finite:
		return "finite numbers on a clock that runs on"
	case gate.Range:
		return "values within what its channels were recorded at"
	case gate.Jerk:
		return "no more jerk than recorded takes"
	case gate.Bandwidth:
		return "no more fast movement than recorded takes"
	case gate.Bones:
		return "bones that keep their length"
	case gate.Stray:
		return "nearer to recorded takes of its label than to those of others"
	case gate.Copy:
		return "not the same as its source"
	}
	return ""
}
