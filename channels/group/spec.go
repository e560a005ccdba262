package group

import (
	"fmt"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"strandwise/channels"
)

// Rule names the channels of one group, as a user writes it.
type Rule struct {
	Name     string   // of the group: "left_wrist.accel"
	Limb     string   // limb or device it is fixed to; empty is a limb of its own
	Channels []string // patterns as in [Match]
}

// Match returns the positions of the channels a pattern names, ascending and
// without repeats. A pattern is a comma list of names ("c0"), globs
// ("left_*", where * is any run of characters and ? any one), and numbered
// ranges ("c3-c5", both ends included). A name always stands for itself, even
// when it could be read as a glob or a range. An element that matches no
// channel is an error that lists the channels there are.
func Match(list []channels.Channel, pattern string) ([]int, error) {
	var out []int
	for element := range strings.SplitSeq(pattern, ",") {
		element = strings.TrimSpace(element)
		found, err := matchElement(list, element)
		if err != nil {
			return nil, err
		}
		if len(found) == 0 {
			return nil, unmatched(list, element)
		}
		out = append(out, found...)
	}
	slices.Sort(out)
	return slices.Compact(out), nil
}

// FromRules builds the groups that rules describe, in the order of the rules.
// Every channel must be named by a rule; those that are not are an error that
// lists them. Whether a channel is named twice is checked by
// [channels.Layout.WithGroups].
func FromRules(list []channels.Channel, rules []Rule) ([]channels.Group, error) {
	out := make([]channels.Group, len(rules))
	named := make([]bool, len(list))
	for i, r := range rules {
		if len(r.Channels) == 0 {
			return nil, fmt.Errorf("group %s names no channels", r.Name)
		}
		found, err := Match(list, strings.Join(r.Channels, ","))
		if err != nil {
			return nil, fmt.Errorf("group %s: %w", r.Name, err)
		}
		for _, c := range found {
			named[c] = true
		}
		out[i] = channels.Group{Name: r.Name, Limb: r.Limb, Channels: found}
	}
	var left []channels.Channel
	for c, ok := range named {
		if !ok {
			left = append(left, list[c])
		}
	}
	if len(left) > 0 {
		return nil, fmt.Errorf("no group holds %s; add a group for what is left, or name the channels in one of the groups", abbreviate(left))
	}
	return out, nil
}

var numberedRange = regexp.MustCompile(`^(.*?)(\d+)-(.*?)(\d+)$`)

func matchElement(list []channels.Channel, element string) ([]int, error) {
	if i := slices.IndexFunc(list, func(c channels.Channel) bool { return c.Name == element }); i >= 0 {
		return []int{i}, nil
	}
	if strings.ContainsAny(element, "*?") {
		return matchGlob(list, element), nil
	}
	if m := numberedRange.FindStringSubmatch(element); m != nil && (m[3] == m[1] || m[3] == "") {
		return matchRange(list, m[1], m[2], m[4])
	}
	return nil, nil
}

func matchGlob(list []channels.Channel, glob string) []int {
	expr := regexp.QuoteMeta(glob)
	expr = strings.NewReplacer(`\*`, ".*", `\?`, ".").Replace(expr)
	re := regexp.MustCompile("^(?s:" + expr + ")$")
	var out []int
	for i, c := range list {
		if re.MatchString(c.Name) {
			out = append(out, i)
		}
	}
	return out
}

// matchRange finds the channels prefix+number with from <= number <= to. The
// channels at both ends must exist, so that a mistyped end is noticed.
func matchRange(list []channels.Channel, prefix, from, to string) ([]int, error) {
	lo, errLo := strconv.Atoi(from)
	hi, errHi := strconv.Atoi(to)
	if errLo != nil || errHi != nil || lo > hi {
		return nil, fmt.Errorf("range %s%s-%s%s runs backwards; write the smaller number first", prefix, from, prefix, to)
	}
	var out []int
	first, last := false, false
	for i, c := range list {
		digits, ok := strings.CutPrefix(c.Name, prefix)
		n, err := strconv.Atoi(digits)
		if !ok || err != nil || digits[0] < '0' || digits[0] > '9' || n < lo || n > hi {
			continue
		}
		first, last = first || n == lo, last || n == hi
		out = append(out, i)
	}
	if !first {
		return nil, unmatched(list, prefix+from)
	}
	if !last {
		return nil, unmatched(list, prefix+to)
	}
	return out, nil
}

func unmatched(list []channels.Channel, element string) error {
	if len(list) == 0 {
		return fmt.Errorf("no channel matches %q: there are no channels", element)
	}
	return fmt.Errorf("no channel matches %q; the channels are %s", element, abbreviate(list))
}

// abbreviate lists channel names, leaving out the middle of a long list.
func abbreviate(list []channels.Channel) string {
	const head, tail = 12, 3
	var b strings.Builder
	for i, c := range list {
		if len(list) > head+tail+1 && i >= head && i < len(list)-tail {
			if i == head {
				fmt.Fprintf(&b, ", … (%d more)", len(list)-head-tail)
			}
			continue
		}
		if i > 0 {
			b.WriteString(", ")
		}
		b.WriteString(c.Name)
	}
	return b.String()
}
