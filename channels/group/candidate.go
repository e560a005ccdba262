package group

import (
	"regexp"
	"slices"
	"strconv"

	"strandwise/channels"
)

// Source says what a group or limb was proposed from.
type Source string

// The sources of groups and limbs.
const (
	Stated   Source = "stated"   // in the plan or the recordings
	Names    Source = "names"    // of the channels
	Numbers  Source = "numbers"  // runs of numbered channels, three axes each
	Skeleton Source = "skeleton" // the tree of joints
	Bones    Source = "bones"    // points that keep their distance
	Data     Source = "data"     // timing that is shared
	Nothing  Source = "nothing"  // says that they are apart
)

// candidates are groups with limbs that may turn out to be one.
type candidates struct {
	groups []channels.Group
	of     Source // what the groups come from
	limbs  Source // what their limbs come from
}

// candidatesOf finds groups and limbs without looking at the data.
func candidatesOf(t *channels.Take) candidates {
	l := t.Layout
	names := FromNames(l.Channels)
	stated := len(l.Groups) > 0 && !sameGroups(l.Groups, names)
	switch {
	case stated:
		return candidates{l.Groups, Stated, Stated}
	case nameless(l.Channels):
		return candidates{numbered(l.Channels), Numbers, Nothing}
	}
	c := candidates{names, Names, Names}
	if t.Skeleton != nil {
		if groups, ok := fromSkeleton(names, l.Channels, t.Skeleton); ok {
			c.groups, c.limbs = groups, Skeleton
		}
	}
	return c
}

func sameGroups(a, b []channels.Group) bool {
	return slices.EqualFunc(a, b, func(x, y channels.Group) bool {
		return x.Name == y.Name && x.Limb == y.Limb && slices.Equal(x.Channels, y.Channels)
	})
}

var columnNumber = regexp.MustCompile(`^([A-Za-z]*)(\d{1,9})$`)

// nameless tells whether no channel's name says more than which column it is.
func nameless(list []channels.Channel) bool {
	for _, c := range list {
		if c.Component != "" || limbOf(c.TrackedPoint) != "" || c.Quantity != channels.Misc && !columnNumber.MatchString(c.Name) {
			return false
		}
	}
	return true
}

// numbered parts channels into runs of numbers that follow each other, of one
// quantity, and the runs into groups of three axes where that goes without a
// rest. Channels without numbers are one group. A group is named by its
// channels: "c0-c2".
func numbered(list []channels.Channel) []channels.Group {
	var out []channels.Group
	var rest []int
	for i := 0; i < len(list); {
		n := runLength(list[i:])
		if n == 0 {
			rest = append(rest, i)
			i++
			continue
		}
		each := n
		if n%3 == 0 {
			each = 3
		}
		for k := i; k < i+n; k += each {
			name := list[k].Name
			if each > 1 {
				name += "-" + list[k+each-1].Name
			}
			out = append(out, channels.Group{Name: name, Limb: name, Channels: sequence(k, each)})
		}
		i += n
	}
	switch {
	case len(rest) == len(list):
		return []channels.Group{everything(list)}
	case len(rest) > 0:
		out = append(out, channels.Group{Name: "other", Limb: "other", Channels: rest})
	}
	return out
}

// runLength returns how many channels from the first on are numbered one after
// the other.
func runLength(list []channels.Channel) int {
	first := columnNumber.FindStringSubmatch(list[0].Name)
	if first == nil {
		return 0
	}
	number, _ := strconv.Atoi(first[2])
	n := 1
	for ; n < len(list); n++ {
		m := columnNumber.FindStringSubmatch(list[n].Name)
		if m == nil || m[1] != first[1] || list[n].Quantity != list[0].Quantity {
			break
		}
		if k, _ := strconv.Atoi(m[2]); k != number+n {
			break
		}
	}
	return n
}

func sequence(first, n int) []int {
	out := make([]int, n)
	for i := range out {
		out[i] = first + i
	}
	return out
}
