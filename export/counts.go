package export

import (
	"cmp"
	"maps"
	"slices"

	"strandwise/channels"
)

// Count is the number of takes of one label, split and origin.
type Count struct {
	Split  channels.Split  `json:"split"`
	Label  string          `json:"label"`
	Origin channels.Origin `json:"origin"`
	Takes  int64           `json:"takes"`
	Frames int64           `json:"frames"`
}

type countKey struct {
	split  channels.Split
	label  string
	origin channels.Origin
}

type counts map[countKey]*Count

func (c counts) add(split channels.Split, label string, origin channels.Origin, takes, frames int64) {
	key := countKey{split, label, origin}
	if c[key] == nil {
		c[key] = &Count{Split: split, Label: label, Origin: origin}
	}
	c[key].Takes += takes
	c[key].Frames += frames
}

// distinct lists what the counts say of one thing, sorted, each once.
func (m *Manifest) distinct(of func(Count) string) []string {
	var out []string
	for _, c := range m.Counts {
		out = append(out, of(c))
	}
	slices.Sort(out)
	return slices.Compact(out)
}

// list returns the counts in the order of split, label and origin.
func (c counts) list() []Count {
	out := make([]Count, 0, len(c))
	for n := range maps.Values(c) {
		out = append(out, *n)
	}
	slices.SortFunc(out, func(a, b Count) int {
		return cmp.Or(cmp.Compare(a.Split, b.Split), cmp.Compare(a.Label, b.Label), cmp.Compare(a.Origin, b.Origin))
	})
	return out
}
