package group

import (
	"bytes"
	"encoding/json"
	"fmt"
	"slices"
	"strings"
	"unicode/utf8"

	"strandwise/channels"
)

// String writes the rule as a plan has it: NAME@LIMB=CHANNELS.
func (r Rule) String() string {
	name := r.Name
	if r.Limb != "" {
		name += "@" + r.Limb
	}
	return name + "=" + strings.Join(r.Channels, ",")
}

// ParseRule reads a rule as a plan has it, NAME=CHANNELS or
// NAME@LIMB=CHANNELS.
func ParseRule(text string) (Rule, error) {
	name, patterns, ok := strings.Cut(text, "=")
	name, limb, _ := strings.Cut(strings.TrimSpace(name), "@")
	if !ok || name == "" || strings.TrimSpace(patterns) == "" {
		return Rule{}, fmt.Errorf("%q is not NAME=CHANNELS or NAME@LIMB=CHANNELS, such as left=c0-c2,c6-c8", text)
	}
	return Rule{Name: name, Limb: limb, Channels: strings.Split(patterns, ",")}, nil
}

// Rules writes groups as rules that [ParseRule] and [FromRules] turn into the
// same groups again, but for characters of their names that rules cannot hold,
// which become underscores. Channels numbered one after the other are written
// as ranges. A channel name that no pattern can tell from the others, such as
// one of two equal names, is an error.
func Rules(list []channels.Channel, groups []channels.Group) ([]Rule, error) {
	var out []Rule
	for _, g := range groups {
		r := Rule{Name: ruleName(g.Name), Limb: ruleName(g.Limb)}
		for rest := g.Channels; len(rest) > 0; {
			pattern, n := patternOf(list, rest)
			if n == 0 {
				return nil, fmt.Errorf("group %s: channel %q cannot be told from others in a rule; rename the column", g.Name, list[rest[0]].Name)
			}
			r.Channels, rest = append(r.Channels, pattern), rest[n:]
		}
		out = append(out, r)
	}
	return out, nil
}

// ruleName makes a name that a rule can hold.
func ruleName(name string) string {
	name = strings.TrimSpace(strings.Map(func(r rune) rune {
		if r == '@' || r == '=' {
			return '_'
		}
		return r
	}, name))
	if name == "" {
		return "_"
	}
	return name
}

// patternOf returns the pattern of the first channels of a list, and of how
// many: a range where the list allows, else a name. It returns 0 when none
// will do.
func patternOf(list []channels.Channel, at []int) (pattern string, n int) {
	means := func(pattern string, want []int) bool {
		got, err := Match(list, pattern)
		return err == nil && slices.Equal(got, want) && utf8.ValidString(pattern) && strings.TrimSpace(pattern) != ""
	}
	run := 1
	for run < len(at) && at[run] == at[run-1]+1 && run < runLength(list[at[0]:]) {
		run++
	}
	first := list[at[0]].Name
	if run > 1 {
		if p := first + "-" + list[at[run-1]].Name; means(p, at[:run]) {
			return p, run
		}
	}
	// A comma parts patterns; the glob for one character stands in for it.
	for _, p := range []string{first, strings.ReplaceAll(first, ",", "?")} {
		if means(p, at[:1]) {
			return p, 1
		}
	}
	return "", 0
}

// PlanLines writes rules as the plan's key "group", a TOML array of texts, one
// line a rule.
func PlanLines(rules []Rule) []string {
	out := []string{"group = ["}
	for _, r := range rules {
		var text bytes.Buffer
		e := json.NewEncoder(&text) // JSON's escapes are legal in TOML
		e.SetEscapeHTML(false)
		if err := e.Encode(r.String()); err != nil {
			panic("group: " + err.Error()) // a text always encodes
		}
		out = append(out, "  "+strings.TrimSpace(text.String())+",")
	}
	return append(out, "]")
}
