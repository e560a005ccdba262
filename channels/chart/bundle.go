package chart

import (
	"slices"

	"strandwise/channels"
)

// bundle is channels of one group that are varied in one way: vectors of two
// or three axes, axis by axis, or scalars.
type bundle struct {
	way
	axes int
	list []int // channels; those of a vector stand together as x, y, z
}

// way is how channels may be varied.
type way struct {
	kind  Kind
	field bool // a field that a sensor sees in its own frame, and that turns about zero
}

// bundles sorts the channels of a group by what may be done with them, in the
// order in which they come first.
func bundles(l *channels.Layout, list []int) []bundle {
	var out []bundle
	add := func(w way, axes int, list ...int) {
		i := slices.IndexFunc(out, func(b bundle) bool { return b.way == w && b.axes == axes })
		if i < 0 {
			i, out = len(out), append(out, bundle{way: w, axes: axes})
		}
		out[i].list = append(out[i].list, list...)
	}
	axes := vectors(l, list)
	done := make(map[int]bool)
	for _, i := range list {
		v := axes[i]
		switch {
		case done[i]:
		case len(v) == 0:
			add(wayOf(l.Channels[i]), 0, i)
		default:
			add(wayOf(l.Channels[i]), len(v), v...)
			for _, k := range v {
				done[k] = true
			}
		}
	}
	return out
}

// source is what the axes of one vector have in common.
type source struct {
	point    string
	quantity channels.Quantity
}

// vectors finds the channels that are axes of one vector: x and y, and z where
// there is one, of one tracked point and quantity. Two or three channels of
// unknown quantity, which are all there is and are not called anything else,
// are one too. Angles are no vectors.
func vectors(l *channels.Layout, list []int) map[int][]int {
	found := make(map[source]map[string]int)
	for _, i := range list {
		c := l.Channels[i]
		s := source{c.TrackedPoint, c.Quantity}
		if found[s] == nil {
			found[s] = make(map[string]int)
		}
		if _, twice := found[s][c.Component]; twice || angles(c.Quantity) {
			found[s]["?"] = -1 // no vector, whatever else there is
		}
		found[s][c.Component] = i
	}
	out := make(map[int][]int)
	if bare(l, list) && (len(list) == 2 || len(list) == 3) {
		for _, i := range list {
			out[i] = list
		}
		return out
	}
	for _, i := range list {
		c := l.Channels[i]
		out[i] = axesOf(found[source{c.TrackedPoint, c.Quantity}])
	}
	return out
}

// bare tells whether channels are of one quantity, no angle, and none is called
// an axis.
func bare(l *channels.Layout, list []int) bool {
	return !slices.ContainsFunc(list, func(i int) bool {
		c := l.Channels[i]
		return c.Component != "" || angles(c.Quantity) || c.Quantity != l.Channels[list[0]].Quantity
	})
}

func angles(q channels.Quantity) bool {
	return q == channels.Orientation || q == channels.JointAngle
}

// axesOf returns the channels by the name of their component as a vector, nil
// where they are none.
func axesOf(named map[string]int) []int {
	names := []string{"x", "y", "z"}
	if len(named) == 2 {
		names = names[:2]
	}
	if len(named) != len(names) {
		return nil
	}
	var out []int
	for _, name := range names {
		i, ok := named[name]
		if !ok {
			return nil
		}
		out = append(out, i)
	}
	return out
}

// wayOf returns how a channel that is a coordinate as it is may be varied.
func wayOf(c channels.Channel) way {
	switch c.Quantity {
	case channels.AngularRate, channels.Velocity:
		return way{kind: Rate}
	case channels.AngularAcceleration:
		return way{kind: Linear}
	case channels.MagneticField:
		return way{kind: Free, field: true}
	}
	return way{kind: Free}
}
