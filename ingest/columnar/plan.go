package columnar

import (
	"fmt"
	"strings"

	"strandwise/channels"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
	"strandwise/ingest/table"
)

// none is the column of what no column states.
const none = -1

// plan says what the columns of a table are for.
type plan struct {
	byTake   bool // a row is a take, not a frame
	keys     []keyColumn
	clock    int   // none counts the frames
	start    int   // column of a time added to the clock, or none
	origin   int   // column that tells synthetic takes, or none
	channels []int // in the order of the layout
	layout   *raw.Layout
	time     table.Clock
}

// keyColumn is a column of identity.
type keyColumn struct {
	name string // as in table.Keys
	leaf int
}

// planner makes the plan of a table that no layout describes.
type planner struct {
	plan
	leaves []leaf
	in     raw.Input
	frame  int // column that numbers the frames, or none
	typed  int // first column of instants that no name makes the clock, or none
	seen   map[string]bool
}

// makePlan reads the roles of columns from their names and types.
func makePlan(leaves []leaf, in raw.Input) (*plan, error) {
	p := &planner{
		plan:   plan{clock: none, start: none, origin: none, layout: &raw.Layout{}},
		leaves: leaves, in: in, frame: none, typed: none, seen: map[string]bool{},
	}
	for _, l := range leaves {
		p.byTake = p.byTake || l.list && p.isChannel(l)
	}
	if err := p.findClock(); err != nil {
		return nil, err
	}
	for i := range leaves {
		if err := p.assign(i); err != nil {
			return nil, err
		}
	}
	if len(p.channels) == 0 {
		return nil, p.fault("", "has no channels: no column but those of identity and time holds numbers", "check what the file holds")
	}
	return &p.plan, nil
}

// leftOut tells whether the user leaves out a column that neither identifies nor
// is named as the clock.
func leftOut(in raw.Input, name string) bool {
	if in.LeaveOut == nil {
		return false
	}
	c, _ := channels.ParseHeader(name)
	return in.LeaveOut(name) || in.LeaveOut(c.Name)
}

// isChannel tells whether a column holds the values of a channel.
func (p *planner) isChannel(l leaf) bool {
	_, isTime := table.IsTime(l.name)
	named := isTime || table.IsFrame(l.name) || table.Key(l.name) != "" || strings.HasPrefix(l.name, pandasIndex)
	return (l.kind == number || l.kind == integer) && !named && !leftOut(p.in, l.name)
}

// pandasIndex begins the name under which pandas stores the numbers of rows.
const pandasIndex = "__index_level_"

// findClock chooses the clock: by name, by type, or the number of the frame.
func (p *planner) findClock() error {
	single := none // a time that is no list, beside channels that are
	for i, l := range p.leaves {
		_, isTime := table.IsTime(l.name)
		switch {
		case l.kind == other || table.Key(l.name) != "":
		case leftOut(p.in, l.name) && !isTime && !table.IsFrame(l.name):
		case l.list != p.byTake:
			if isTime || l.kind == instant {
				single = i
			}
		case isTime && p.clock == none:
			p.clock = i
		case l.kind == instant && p.typed == none:
			p.typed = i
		case table.IsFrame(l.name) && l.kind != text && p.frame == none:
			p.frame = i
		}
	}
	if p.clock == none {
		p.clock = p.typed
	}
	switch {
	case p.clock != none:
		return p.readClock(p.leaves[p.clock])
	case single != none && p.byTake:
		return p.fault(p.leaves[single].name, "is one time for each row, but the channels hold lists",
			"write the times as a list too, or one row per frame with x, y and z as columns of their own")
	}
	p.time.Frames = true
	if p.clock = p.frame; p.clock != none {
		p.time.Name = p.leaves[p.clock].name
	}
	return nil
}

// readClock finds the unit of the clock.
func (p *planner) readClock(l leaf) error {
	p.time.Name = l.name
	if l.kind == instant {
		p.time.Unit = l.unit
		return nil
	}
	if l.kind == text { // dates, in seconds
		p.time.Unit = "s"
		return nil
	}
	named, _ := table.IsTime(l.name)
	stated, known := table.TimeUnit(l.unit)
	switch {
	case l.unit != "" && !known:
		return p.fault(l.name, fmt.Sprintf("is in the unit %q, which is no unit of time", l.unit), "correct its metadata: s, ms, us or ns")
	case named != "" && stated != "" && named != stated:
		return p.fault(l.name, fmt.Sprintf("is in %s by its name and in %s by its metadata", named, stated), "correct one of them")
	case stated != "":
		named = stated
	case named == "":
		named = p.in.TimeUnit
	}
	p.time.Unit = named
	return nil
}

// assign gives a column its role.
func (p *planner) assign(i int) error {
	l := p.leaves[i]
	key := table.Key(l.name)
	switch {
	case i == p.clock:
	case key != "" && !l.list && l.kind != other && l.kind != instant:
		for _, k := range p.keys {
			if k.name == key {
				return p.fault("", "two columns are named "+key, "rename one of them")
			}
		}
		p.keys = append(p.keys, keyColumn{key, i})
	case l.list == p.byTake && p.isChannel(l):
		return p.addChannel(i)
	case !leftOut(p.in, l.name):
		p.in.Notice(fmt.Sprintf("column %q is no channel and is left out", l.name), p.whyNot(l))
	}
	return nil
}

// whyNot says why a column is no channel.
func (p *planner) whyNot(l leaf) string {
	switch _, isTime := table.IsTime(l.name); {
	case l.kind == other:
		return "it holds " + l.what
	case l.kind == text:
		return "it holds text"
	case l.list != p.byTake && p.byTake:
		return "it holds one value for each take"
	case l.kind == instant || isTime || table.IsFrame(l.name):
		return "it is a second clock"
	case strings.HasPrefix(l.name, pandasIndex):
		return "it numbers the rows"
	}
	return "it holds lists"
}

func (p *planner) addChannel(i int) error {
	l := p.leaves[i]
	if what := table.Unclean(l.name); what != "" {
		return p.fault("", fmt.Sprintf("the name of column %d %s", i+1, what), "rename it")
	}
	c, unit := channels.ParseHeader(l.name)
	switch {
	case c.Name == "":
		return p.fault("", fmt.Sprintf("column %d holds numbers but has no name", i+1), "name it")
	case p.seen[c.Name]:
		return p.fault("", "two columns are named "+c.Name, "rename one of them")
	case unit != "" && l.unit != "" && unit != l.unit:
		return p.fault(c.Name, fmt.Sprintf("is in %s by its name and in %s by its metadata", unit, l.unit), "correct one of them")
	case unit == "":
		unit = l.unit
	}
	if _, err := channels.ParseUnit(unit); err != nil && unit != "" && c.Quantity == channels.Misc {
		p.in.Notice(fmt.Sprintf("has channels in %s, whose numbers stay as recorded", unit), c.Name)
		unit = ""
	}
	p.seen[c.Name] = true
	p.channels = append(p.channels, i)
	p.layout.Columns = append(p.layout.Columns, raw.Column{Channel: c, Unit: unit})
	return nil
}

func (p *planner) fault(channel, problem, remedy string) error {
	return &fault.Error{File: p.in.Name, Channel: channel, Problem: problem, Remedy: remedy}
}
