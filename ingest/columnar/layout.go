package columnar

import (
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"slices"

	"strandwise/channels"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
	"strandwise/ingest/table"
)

// layoutKey is the metadata key under which the tables of a set describe
// themselves, layoutFormat the form of what stands there.
const (
	layoutKey    = "strandwise.layout"
	layoutFormat = "strandwise.layout/1"
)

// The tables of a set that hold takes.
const (
	takesTable  = "takes"
	framesTable = "frames"
)

// layout is what a table of a set says about itself.
type layout struct {
	Format   string
	Table    string
	Channels []struct {
		Name         string
		Column       string
		TrackedPoint string `json:"tracked_point"`
		Quantity     channels.Quantity
		Component    string
		Unit         string
	}
	Groups []raw.Group
}

// parseLayout reads a layout. The error is a fault.
func parseLayout(text string, in raw.Input) (*layout, error) {
	var l layout
	e := &fault.Error{File: in.Name, Problem: "its metadata " + layoutKey + " cannot be read", Remedy: "grow the set again"}
	if err := json.Unmarshal([]byte(text), &l); err != nil {
		e.Err = err
		return nil, e
	}
	switch {
	case l.Format != layoutFormat:
		e.Problem = fmt.Sprintf("its metadata are in the form %q, not %q, the one this program reads", l.Format, layoutFormat)
		e.Remedy = "read it with the program that wrote it"
	case l.Table != takesTable && l.Table != framesTable:
		e.Problem = fmt.Sprintf("is table %q of a set, which holds no takes", l.Table)
		e.Remedy = "read the table takes"
	case len(l.Channels) == 0:
		e.Problem = "its metadata " + layoutKey + " name no channels"
	default:
		return &l, nil
	}
	return nil, e
}

// repeats tells whether the file belongs to the table frames of a set that has
// the same takes in the table takes.
func (l *layout) repeats(in raw.Input) bool {
	path, err := filepath.Abs(in.Path)
	if l.Table != framesTable || in.Path == "" || err != nil {
		return false
	}
	folder := filepath.Dir(filepath.Dir(path))
	info, err := os.Stat(filepath.Join(filepath.Dir(folder), takesTable))
	return filepath.Base(folder) == framesTable && err == nil && info.IsDir()
}

// plan finds the columns of a set's table.
func (l *layout) plan(leaves []leaf, in raw.Input) (*plan, error) {
	find := func(name string) int {
		return slices.IndexFunc(leaves, func(x leaf) bool { return x.name == name })
	}
	p := &plan{byTake: l.Table == takesTable, start: none, origin: none, layout: &raw.Layout{Groups: l.Groups}}
	for _, name := range table.Keys() {
		column := name
		if name == "take" && p.byTake {
			column = "id"
		}
		if i := find(column); i >= 0 && leaves[i].kind == text && !leaves[i].list {
			p.keys = append(p.keys, keyColumn{name, i})
		}
	}
	if p.byTake {
		p.start, p.origin = find("start_s"), find("origin")
	}
	p.time = table.Clock{Name: "time_s", Unit: "s"}
	p.clock = find(p.time.Name)
	numbers := []int{p.clock}
	for _, c := range l.Channels {
		if in.LeaveOut != nil && in.LeaveOut(c.Name) {
			continue
		}
		i := find(c.Column)
		numbers = append(numbers, i)
		p.channels = append(p.channels, i)
		p.layout.Columns = append(p.layout.Columns, raw.Column{
			Channel: channels.Channel{Name: c.Name, TrackedPoint: c.TrackedPoint, Quantity: c.Quantity, Component: c.Component, Unit: c.Unit},
			Unit:    c.Unit,
		})
	}
	for k, i := range numbers {
		if i < 0 || leaves[i].kind != number || leaves[i].list != p.byTake {
			name := p.time.Name
			if k > 0 {
				name = p.layout.Columns[k-1].Channel.Name
			}
			return nil, &fault.Error{File: in.Name, Problem: fmt.Sprintf("has no column of numbers for %s, which its metadata name", name), Remedy: "write its metadata and its columns alike"}
		}
	}
	return p, l.check(p, leaves, in)
}

// check refuses columns of other types than a set has, and channels that come
// twice.
func (l *layout) check(p *plan, leaves []leaf, in raw.Input) error {
	seen := map[string]bool{}
	for _, c := range l.Channels {
		if c.Name == "" || seen[c.Name] || c.Quantity.SI() == "" && c.Quantity != channels.Misc {
			return &fault.Error{File: in.Name, Channel: c.Name, Problem: "its metadata name the channel twice, or give it no known quantity", Remedy: "grow the set again"}
		}
		seen[c.Name] = true
	}
	if p.start >= 0 && (leaves[p.start].kind != number || leaves[p.start].list) {
		return &fault.Error{File: in.Name, Problem: "its column start_s does not hold numbers", Remedy: "grow the set again"}
	}
	if p.origin >= 0 && (leaves[p.origin].kind != text || leaves[p.origin].list) {
		return &fault.Error{File: in.Name, Problem: "its column origin does not hold text", Remedy: "grow the set again"}
	}
	return nil
}
