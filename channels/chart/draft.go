package chart

import (
	"strings"

	"strandwise/channels"
)

// draft is a chart in the making.
type draft struct {
	layout *channels.Layout
	held   []bool         // channels that a sheet has taken
	group  []int          // of each channel
	at     map[string]int // channels by name
}

func newDraft(l *channels.Layout) *draft {
	d := &draft{l, make([]bool, len(l.Channels)), make([]int, len(l.Channels)), make(map[string]int)}
	for i, c := range l.Channels {
		d.at[c.Name] = i
	}
	for g, group := range l.Groups {
		for _, i := range group.Channels {
			d.group[i] = g
		}
	}
	return d
}

// find returns the channels of a tracked point's quantity in the order of these
// components. It is not ok when one is missing, is there twice or is held, or
// when they are not all in one group.
func (d *draft) find(point string, q channels.Quantity, components []string) (list []int, ok bool) {
	for _, name := range components {
		at := -1
		for i, c := range d.layout.Channels {
			if c.TrackedPoint != point || c.Quantity != q || c.Component != name {
				continue
			}
			if at >= 0 || d.held[i] {
				return nil, false
			}
			at = i
		}
		if at < 0 || len(list) > 0 && d.group[at] != d.group[list[0]] {
			return nil, false
		}
		list = append(list, at)
	}
	return list, true
}

// claim is find that takes the channels.
func (d *draft) claim(point string, q channels.Quantity, components []string) (list []int, ok bool) {
	if list, ok = d.find(point, q, components); ok {
		d.hold(list)
	}
	return list, ok
}

func (d *draft) hold(list []int) {
	for _, i := range list {
		d.held[i] = true
	}
}

// carriesSensor tells whether the tracked point has an accelerometer or a
// gyroscope, whose readings are in its own frame.
func (d *draft) carriesSensor(point string) bool {
	for _, c := range d.layout.Channels {
		if c.TrackedPoint == point && (c.Quantity == channels.Acceleration || c.Quantity == channels.AngularRate) {
			return true
		}
	}
	return false
}

// part describes the three coordinates from first on, which belong to the group
// of a channel.
func (d *draft) part(channel int, what string, kind Kind, axes, first int) Part {
	g := d.group[channel]
	name := d.layout.Groups[g].Name
	if what != "" {
		name += " " + what
	}
	return Part{
		Name: name, Limb: d.layout.Groups[g].Limb, Kind: kind, Group: g, Axes: axes, Follows: -1,
		Mix:         kind != Fixed,
		Scaled:      kind != Turn && kind != Fixed,
		Coordinates: []int{first, first + 1, first + 2},
	}
}

// named returns the channels of a joint's quantity in the order of these
// components. It is not ok when one is missing or held, or when they are not
// all in one group.
func (d *draft) named(joint string, q channels.Quantity, components []string) (list []int, ok bool) {
	for _, component := range components {
		i, ok := d.at[strings.Join([]string{joint, q.Word(), component}, ".")]
		if !ok || d.held[i] || len(list) > 0 && d.group[i] != d.group[list[0]] {
			return nil, false
		}
		list = append(list, i)
	}
	return list, true
}
