package delimited

import (
	"fmt"
	"slices"
	"strings"

	"strandwise/channels"
	"strandwise/ingest/raw"
	"strandwise/ingest/table"
)

// role says what a column is for.
type role int

const (
	channelRole role = iota
	identityRole
	clockRole
	blankRole   // no name and no values: a separator at the end of every line
	leftOutRole // text, or a second clock
)

// The identity columns, in the order of table.keys.
const (
	takeKey = iota
	labelKey
	subjectKey
	sessionKey
	splitKey
	keys
)

var keyNames = [keys]string{"take", "label", "subject", "session", "split"}

// column is one column of a table.
type column struct {
	name string
	role role
}

// header is what the header and the first row say about the columns.
type header struct {
	columns []column
	keys    [keys]int // column of each identity, -1 for none
	clock   clock
	layout  *raw.Layout
}

// readHeader gives each column its role by name. Whether a channel column in
// truth holds text is left to settle.
func readHeader(names []string) (*header, error) {
	t := &header{columns: make([]column, len(names)), keys: [keys]int{-1, -1, -1, -1, -1}}
	frame := -1
	for i, name := range names {
		c := &t.columns[i]
		c.name = strings.TrimSpace(name)
		key := slices.Index(keyNames[:], table.Key(c.name))
		unit, isTime := table.IsTime(c.name)
		switch {
		case c.name == "":
			c.role = blankRole
		case key >= 0 && t.keys[key] >= 0:
			return nil, fmt.Errorf("two columns are named %s", keyNames[key])
		case key >= 0:
			c.role, t.keys[key] = identityRole, i
		case isTime && t.clock.Name == "":
			c.role, t.clock = clockRole, clock{Clock: table.Clock{Name: c.name, Unit: unit}}
		case table.IsFrame(c.name) && frame < 0:
			c.role, frame = leftOutRole, i
		case isTime || table.IsFrame(c.name):
			c.role = leftOutRole
		}
	}
	if t.clock.Name == "" {
		t.clock.Frames = true
		if frame >= 0 {
			t.columns[frame].role, t.clock.Name = clockRole, t.columns[frame].name
		}
	}
	return t, nil
}

// settle finishes the table with the first row: a channel column that the user
// leaves out or whose first value is text is left out, and the rest make the
// layout.
func (t *header) settle(isText, leaveOut func(column int) bool) error {
	t.layout = &raw.Layout{}
	seen := map[string]bool{}
	for i := range t.columns {
		c := &t.columns[i]
		if c.role != channelRole {
			continue
		}
		if leaveOut(i) || isText(i) {
			c.role = leftOutRole
			continue
		}
		ch, unit := channels.ParseHeader(c.name)
		if seen[ch.Name] {
			return fmt.Errorf("two columns are named %s", ch.Name)
		}
		seen[ch.Name] = true
		t.layout.Columns = append(t.layout.Columns, raw.Column{Channel: ch, Unit: unit})
	}
	return nil
}
