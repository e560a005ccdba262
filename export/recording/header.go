package recording

import (
	"fmt"
	"regexp"
	"strings"

	"strandwise/channels"
)

// fixedColumns returns the columns before the channels.
func fixedColumns(splits bool) []string {
	if splits {
		return []string{"take", "label", "subject", "session", "split", "frame", "time_s"}
	}
	return []string{"take", "label", "subject", "session", "frame", "time_s"}
}

// clockNames returns names that programs which look for a clock by name may
// take for one.
func clockNames() []string {
	return []string{"time", "t", "timestamp", "elapsed", "index", "frame_index"}
}

// header returns the names of all columns of a CSV file.
func header(l *channels.Layout, splits bool) ([]string, error) {
	names := columnNames(l.Channels)
	seen := make(map[string]string, len(names))
	for i, name := range names {
		if other, twice := seen[name]; twice {
			return nil, fmt.Errorf("channels %s and %s would share the column %s; leave one out", other, l.Channels[i].Name, name)
		}
		seen[name] = l.Channels[i].Name
	}
	return append(fixedColumns(splits), names...), nil
}

// columnNames returns the name of each channel's column: the full name where
// that tells the channel apart, else its own.
func columnNames(list []channels.Channel) []string {
	out, uses := make([]string, len(list)), map[string]int{}
	for i, c := range list {
		out[i] = columnName(fullName(c))
		uses[out[i]]++
	}
	for i, c := range list {
		if uses[out[i]] > 1 {
			out[i] = columnName(c.Name)
		}
	}
	return out
}

// fullName returns tracked point, type and component, if all three are known,
// else the channel's own name.
func fullName(c channels.Channel) string {
	if c.TrackedPoint == "" || c.Component == "" || c.Quantity == channels.Misc {
		return c.Name
	}
	return pointName(c) + "." + c.Quantity.Word() + "." + c.Component
}

var separators = regexp.MustCompile(`[._\-\s:/]+`)

// pointName returns the tracked point as the recording writes it: the words of
// TrackedPoint are joined by underscores, those of the name perhaps otherwise.
func pointName(c channels.Channel) string {
	for i := range c.Name {
		if separators.ReplaceAllString(c.Name[:i], "_") == c.TrackedPoint {
			return c.Name[:i]
		}
	}
	return c.TrackedPoint
}

// columnName returns a name without units in brackets, which must not be
// believed any more, told apart from those of the other columns.
func columnName(name string) string {
	for unit := "?"; unit != ""; {
		var c channels.Channel
		c, unit = channels.ParseHeader(name)
		name = c.Name
	}
	for _, taken := range append(fixedColumns(true), clockNames()...) {
		if strings.EqualFold(name, taken) {
			return name + "_channel"
		}
	}
	return name
}
