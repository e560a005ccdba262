package ingest

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"strandwise/channels"
	"strandwise/channels/group"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// frame is what all takes of a run share, fixed by the first of them.
type frame struct {
	leaveOut func(name string) bool
	layout   *channels.Layout
	file     string          // that fixed it
	rules    []channels.Unit // unit the rules give each channel; no symbol for none
	stated   []bool          // the first file states a unit
	units    []channels.Unit // the first file is in: by rule, as it states, or else as held
}

// fixFrame makes the layout of a run from the first file.
func fixFrame(first *raw.Layout, file string, o *Options, leaveOut func(string) bool) (*frame, error) {
	f := &frame{file: file, leaveOut: leaveOut}
	wanted := f.wanted(first)
	if len(wanted) == 0 {
		return nil, &UsageError{Key: "leave_out", Problem: fmt.Sprintf("no channel of %s is left", file)}
	}
	list := make([]channels.Channel, len(wanted))
	f.stated, f.units = make([]bool, len(list)), make([]channels.Unit, len(list))
	for i, c := range wanted {
		list[i] = c.Channel
	}
	var err error
	if f.rules, err = applyRules(list, o.Units); err != nil {
		return nil, err
	}
	for i, c := range wanted {
		f.stated[i] = c.Unit != ""
		if list[i], _, err = f.convert(c.Channel, i, c.Unit, file); err != nil {
			return nil, err
		}
		f.units[i] = f.recordedIn(i, cmp.Or(c.Unit, list[i].Unit))
	}
	f.layout, err = f.grouped(list, o.Groups, first.Groups)
	return f, err
}

// wanted returns the columns of a file that are not left out.
func (f *frame) wanted(l *raw.Layout) []raw.Column {
	return slices.DeleteFunc(slices.Clone(l.Columns), func(c raw.Column) bool { return f.leaveOut(c.Channel.Name) })
}

// applyRules finds the unit the rules give each channel; the last rule holds.
func applyRules(list []channels.Channel, rules []UnitRule) ([]channels.Unit, error) {
	out := make([]channels.Unit, len(list))
	for _, r := range rules {
		found, err := group.Match(list, r.Pattern)
		if err != nil {
			return nil, &UsageError{Key: "unit", Problem: fmt.Sprintf("unit %s", r.Unit.Symbol), Err: err}
		}
		for _, c := range found {
			if _, _, err := list[c].In(r.Unit); err != nil {
				return nil, &UsageError{Key: "unit", Problem: fmt.Sprintf("unit %s for %q", r.Unit.Symbol, r.Pattern), Err: err}
			}
			out[c] = r.Unit
		}
	}
	return out, nil
}

// grouped makes the layout of a run: grouped by the rules of the user, failing
// these as the first file states, or else by the names of the channels.
func (f *frame) grouped(list []channels.Channel, rules []group.Rule, stated []raw.Group) (*channels.Layout, error) {
	layout := &channels.Layout{Channels: list}
	if len(rules) == 0 {
		if out, err := layout.WithGroups(f.found(list, stated)); err == nil {
			return out, nil
		}
		return layout.WithGroups(group.FromNames(list))
	}
	groups, err := group.FromRules(list, rules)
	if err == nil {
		layout, err = layout.WithGroups(groups)
	}
	if err != nil {
		return nil, &UsageError{Key: "group", Problem: "channel groups", Err: err}
	}
	return layout, nil
}

// found finds the channels of the groups a file states, those left out aside.
// It returns nil when a group has no name or names a channel that is not there.
func (f *frame) found(list []channels.Channel, stated []raw.Group) []channels.Group {
	at := make(map[string]int, len(list))
	for i, c := range list {
		at[c.Name] = i
	}
	var out []channels.Group
	for _, s := range stated {
		g := channels.Group{Name: s.Name, Limb: s.Limb}
		for _, name := range s.Channels {
			i, ok := at[name]
			switch {
			case ok:
				g.Channels = append(g.Channels, i)
			case !f.leaveOut(name):
				return nil
			}
		}
		switch {
		case s.Name == "":
			return nil
		case len(g.Channels) > 0:
			out = append(out, g)
		}
	}
	return out
}

// convert returns the channel at position i as it is held, and the factor that
// turns the values a file states in this unit into it.
func (f *frame) convert(c channels.Channel, i int, stated, file string) (channels.Channel, float64, error) {
	unit := f.rules[i]
	switch {
	case unit.Symbol != "":
	case stated == "" || stated == c.Unit:
		return c, 1, nil
	default:
		var err error
		if unit, err = channels.ParseUnit(stated); err != nil {
			return c, 0, &fault.Error{File: file, Channel: c.Name, Problem: err.Error(), Remedy: "correct the header, or state the unit with --unit"}
		}
	}
	held, factor, err := c.In(unit)
	if err != nil {
		return c, 0, &fault.Error{File: file, Problem: err.Error(), Remedy: "correct the header, or state the unit with --unit"}
	}
	return held, factor, nil
}

// recordedIn returns the unit of the values of channel i as recorded: that of a
// rule, or else the one of this symbol. Numbers without a unit count as they
// are.
func (f *frame) recordedIn(i int, symbol string) channels.Unit {
	if f.rules[i].Symbol != "" {
		return f.rules[i]
	}
	u, err := channels.ParseUnit(symbol)
	if err != nil {
		return channels.Unit{Symbol: symbol, Factor: 1}
	}
	return u
}

// unstated lists the channels of known quantity for which neither the file nor
// a rule states a unit: they are taken to be in the unit they are held in.
func (f *frame) unstated() []string {
	var out []string
	for i, c := range f.layout.Channels {
		if c.Unit != "" && c.Unit != "1" && !f.stated[i] && f.rules[i].Symbol == "" {
			out = append(out, c.Name)
		}
	}
	return out
}

// fit is how the columns of one file become the channels of the run.
type fit struct {
	columns int       // of the file
	from    []int     // channel i is column from[i]
	factor  []float64 // and is multiplied by factor[i]
	plain   bool      // every channel is its own column, unchanged
}

// fit matches the columns of a file with the channels by name, in any order.
func (f *frame) fit(l *raw.Layout, file string) (*fit, error) {
	n := len(f.layout.Channels)
	out := &fit{from: make([]int, n), factor: make([]float64, n), columns: len(l.Columns), plain: len(l.Columns) == n}
	for i, c := range f.layout.Channels {
		at := slices.IndexFunc(l.Columns, func(x raw.Column) bool { return x.Channel.Name == c.Name })
		if at < 0 {
			return nil, f.mismatch(file, c.Name, "is missing; "+f.file+" has it")
		}
		stated := l.Columns[at].Unit
		if (stated != "") != f.stated[i] && f.rules[i].Symbol == "" {
			return nil, f.unitMismatch(file, c.Name, stated)
		}
		_, factor, err := f.convert(c, i, stated, file)
		if err != nil {
			return nil, err
		}
		out.from[i], out.factor[i] = at, factor
		out.plain = out.plain && at == i && factor == 1
	}
	if wanted := f.wanted(l); len(wanted) > n {
		for _, x := range wanted {
			if f.layout.Index(x.Channel.Name) < 0 {
				return nil, f.mismatch(file, x.Channel.Name, "is extra; "+f.file+" does not have it")
			}
		}
	}
	return out, nil
}

func (f *frame) mismatch(file, channel, problem string) error {
	return &fault.Error{File: file, Channel: channel, Problem: problem, Remedy: "give all recordings the same channels, or read them apart"}
}

func (f *frame) unitMismatch(file, channel, stated string) error {
	problem := fmt.Sprintf("states the unit %s, but %s states none", stated, f.file)
	if stated == "" {
		problem = fmt.Sprintf("states no unit, but %s does", f.file)
	}
	return &fault.Error{File: file, Channel: channel, Problem: problem, Remedy: "state the unit in every header, or with --unit"}
}

// apply returns the values of a take in the channels of the run, reordered and
// converted in place.
func (t *fit) apply(data []float64) []float64 {
	if t.plain || t.columns == 0 {
		return data
	}
	n, row := len(t.from), make([]float64, t.columns)
	out := data[:0] // never ahead of what is read: there are no more channels than columns
	for ; len(data) >= t.columns; data = data[t.columns:] {
		copy(row, data)
		for i := range n {
			out = append(out, row[t.from[i]]*t.factor[i])
		}
	}
	return out
}

// abbreviate joins names, leaving out most of a long list.
func abbreviate(names []string) string {
	const most = 6
	if len(names) <= most {
		return strings.Join(names, ", ")
	}
	return fmt.Sprintf("%s and %d more", strings.Join(names[:most], ", "), len(names)-most)
}
