package template

import (
	"fmt"
	"maps"
	"slices"
	"strings"

	"strandwise/channels"
)

// part is a share of a distance that is measured by itself: the distance is
// the sum over parts of weight × part.
type part struct {
	groups [][]int // channels; several groups only of the direction cosine
	width  int     // values per frame
	before int     // values per frame of the parts before this one
	weight float64
}

// parts cuts the distance of takes of the layout into its parts. The error
// lists the legal groups when the weights name none of them.
func (m Metric) parts(l *channels.Layout) ([]part, error) {
	if err := m.checkGroups(l); err != nil {
		return nil, err
	}
	var out []part
	for i, groups := range m.weighed(l) {
		if weight := m.weight(l, i); weight > 0 {
			out = m.cut(out, weight, groups)
		}
	}
	for i := range out {
		if i > 0 {
			out[i].before = out[i-1].before + out[i-1].width
		}
	}
	return out, nil
}

// cut appends the parts of the distance of some groups.
func (m Metric) cut(dst []part, weight float64, groups [][]int) []part {
	switch m.Distance {
	case DirectionCosine:
		return append(dst, direction(weight, groups))
	case EuclideanDependent, DTWDependent:
		return append(dst, part{groups: groups, width: len(groups[0]), weight: weight})
	}
	for _, c := range groups[0] {
		dst = append(dst, part{groups: [][]int{{c}}, width: 1, weight: weight})
	}
	return dst
}

// direction returns the part that is weight times the mean over groups and
// steps of 1 minus the cosine, see [preparer.directions].
func direction(weight float64, groups [][]int) part {
	p := part{groups: groups, weight: weight / float64(2*steps*len(groups))}
	for _, g := range groups {
		p.width += len(g) + 1
	}
	return p
}

// weighed returns the sets of groups that are compared together: each group
// alone when there are weights, else all channels.
func (m Metric) weighed(l *channels.Layout) [][][]int {
	switch {
	case len(m.Weights) > 0:
		return slices.Collect(slices.Chunk(groupsOf(l), 1))
	case m.Distance == DirectionCosine:
		return [][][]int{groupsOf(l)}
	}
	return [][][]int{{every(l)}}
}

func (m Metric) weight(l *channels.Layout, group int) float64 {
	if len(m.Weights) > 0 {
		if w, ok := m.Weights[l.Groups[group].Name]; ok {
			return w
		}
	}
	return 1
}

// checkGroups reports a weight whose group the layout does not have, and
// weights that leave nothing to compare.
func (m Metric) checkGroups(l *channels.Layout) error {
	var names []string
	heavy := len(m.Weights) == 0
	for i, g := range l.Groups {
		names = append(names, g.Name)
		heavy = heavy || m.weight(l, i) > 0
	}
	for _, name := range slices.Sorted(maps.Keys(m.Weights)) {
		if len(names) == 0 {
			return fmt.Errorf("weight of group %q: the channels have no groups; name groups, or give no weights", name)
		}
		if !slices.Contains(names, name) {
			return fmt.Errorf("weight of group %q, which the channels do not have; their groups are %s", name, strings.Join(names, ", "))
		}
	}
	if !heavy {
		return fmt.Errorf("every group has weight 0; give one of %s a weight above 0", strings.Join(names, ", "))
	}
	return nil
}

// groupsOf returns the channels of each group; all together when the layout
// has no groups.
func groupsOf(l *channels.Layout) [][]int {
	if len(l.Groups) == 0 {
		return [][]int{every(l)}
	}
	groups := make([][]int, len(l.Groups))
	for i, g := range l.Groups {
		groups[i] = g.Channels
	}
	return groups
}

// every returns all channels.
func every(l *channels.Layout) []int {
	all := make([]int, len(l.Channels))
	for c := range all {
		all[c] = c
	}
	return all
}
