package channels

import (
	"fmt"
	"slices"
	"strings"
)

// Layout is what the takes of one run share: their channels in order, and the
// groups that partition them. It is read-only once takes refer to it.
type Layout struct {
	Channels []Channel
	Groups   []Group
}

// Group is a set of channels that move as one body part or sensor: one
// trajectory in its own space.
type Group struct {
	Name     string // "left_wrist.accel"
	Limb     string // the limb or device it is fixed to; groups of one limb share its timing
	Channels []int  // indices into Layout.Channels, ascending
}

// Names returns the channel names in order.
func (l *Layout) Names() []string {
	out := make([]string, len(l.Channels))
	for i, c := range l.Channels {
		out[i] = c.Name
	}
	return out
}

// Index returns the position of the named channel, or -1.
func (l *Layout) Index(name string) int {
	return slices.IndexFunc(l.Channels, func(c Channel) bool { return c.Name == name })
}

// Limbs returns the names of the limbs in the order of their first group.
func (l *Layout) Limbs() []string {
	var out []string
	for _, g := range l.Groups {
		if !slices.Contains(out, g.Limb) {
			out = append(out, g.Limb)
		}
	}
	return out
}

// WithGroups returns a copy of the layout with these groups, which must hold
// every channel exactly once. A group without a limb is a limb of its own.
func (l *Layout) WithGroups(groups []Group) (*Layout, error) {
	holder := make([]int, len(l.Channels)) // number of the group that holds a channel, from 1
	out := &Layout{Channels: l.Channels, Groups: make([]Group, len(groups))}
	for i, g := range groups {
		if g.Limb == "" {
			g.Limb = g.Name
		}
		g.Channels = slices.Sorted(slices.Values(g.Channels))
		if len(g.Channels) == 0 {
			return nil, fmt.Errorf("group %s holds no channel", g.Name)
		}
		for _, c := range g.Channels {
			if c < 0 || c >= len(holder) {
				return nil, fmt.Errorf("group %s: no channel at position %d", g.Name, c)
			}
			if h := holder[c]; h > 0 {
				return nil, fmt.Errorf("channel %s is in two groups, %s and %s", l.Channels[c].Name, groups[h-1].Name, g.Name)
			}
			holder[c] = i + 1
		}
		out.Groups[i] = g
	}
	var left []string
	for c, h := range holder {
		if h == 0 {
			left = append(left, l.Channels[c].Name)
		}
	}
	if len(left) > 0 {
		return nil, fmt.Errorf("no group holds %s", strings.Join(left, ", "))
	}
	return out, nil
}
