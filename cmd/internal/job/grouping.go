package job

import (
	"context"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"strandwise/channels/group"
)

// Propose proposes channel groups and limbs for the plan's recordings, from
// those that train. Merge is the ρ from which limbs are one; 0 is the default.
func (p *Plan) Propose(ctx context.Context, in io.Reader, merge float64, progress Progress, notice func(string)) (*group.Proposal, error) {
	s, err := p.survey(ctx, in, mostScoredGrown, progress, notice)
	if err != nil {
		return nil, err
	}
	takes := s.training()
	if len(takes) == 0 {
		return nil, fmt.Errorf("every take is in the test split; groups are proposed from training takes")
	}
	return group.Propose(takes, group.Options{Seed: p.Seed, Merge: merge})
}

// WriteGroups writes a proposal into the plan file in place of the groups that
// stand there, with the coupling of every pair of limbs as a comment. The file
// is replaced whole or not at all.
func (p *Plan) WriteGroups(proposal *group.Proposal) error {
	if p.file == "" {
		return &UsageError{Where: "--write", Problem: "there is no plan to write into; name it with --plan"}
	}
	var lines []string
	lines = append(lines, proposed+sources(proposal)+".")
	if proposal.Coupling != nil {
		for _, c := range proposal.Coupling.Comments() {
			lines = append(lines, "# "+c)
		}
	}
	lines = append(lines, group.PlanLines(proposal.Rules)...)
	text := strings.Join(p.spliced(lines), "\n")
	temporary := filepath.Join(filepath.Dir(p.file), "."+filepath.Base(p.file)+".new")
	if err := os.WriteFile(temporary, []byte(text), 0o666); err != nil {
		return err
	}
	if err := os.Rename(temporary, p.file); err != nil {
		os.Remove(temporary)
		return err
	}
	return nil
}

// sources lists what the groups and limbs of a proposal come from.
func sources(proposal *group.Proposal) string {
	var out []string
	for _, found := range slices.Concat(proposal.Groups, proposal.Limbs) {
		for _, from := range found.From {
			if !slices.Contains(out, string(from)) && from != group.Nothing {
				out = append(out, string(from))
			}
		}
	}
	return strings.Join(out, ", ")
}

// spliced returns the lines of the plan file with the key group, and the
// comments of a former proposal before it, replaced by these lines; or with
// them at the end of the keys.
func (p *Plan) spliced(lines []string) []string {
	old := strings.Split(strings.TrimRight(p.text, "\n"), "\n")
	from := p.find("group")
	if from < 0 {
		return slices.Concat(old, []string{""}, lines, []string{""})
	}
	to, open := from+1, unclosed(old[from])
	for ; open > 0 && to < len(old); to++ {
		open += unclosed(old[to])
	}
	for from > 0 && (strings.HasPrefix(old[from-1], proposed) || strings.HasPrefix(old[from-1], "# ") && strings.Contains(old[from-1], "ρ = ")) {
		from--
	}
	return slices.Concat(old[:from], lines, old[to:], []string{""})
}

// proposed begins the comment above groups that were proposed.
const proposed = "# Proposed from "

// unclosed returns how many more brackets a line opens than it closes, outside
// of texts and comments.
func unclosed(line string) int {
	n, quote := 0, rune(0)
	for _, c := range line {
		switch {
		case quote != 0:
			if c == quote {
				quote = 0
			}
		case c == '"' || c == '\'':
			quote = c
		case c == '#':
			return n
		case c == '[':
			n++
		case c == ']':
			n--
		}
	}
	return n
}
