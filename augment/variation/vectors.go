package variation

import (
	"slices"

	"strandwise/channels"
)

// newForm works out what the takes of a layout have in common.
func newForm(layout *channels.Layout, scales *channels.Scales, frames int) *form {
	f := &form{frames: frames, width: len(layout.Channels), layout: layout, scales: scales, limbNames: layout.Limbs()}
	for _, name := range f.limbNames {
		var list []int
		for _, g := range layout.Groups {
			if g.Limb == name {
				list = append(list, g.Channels...)
			}
		}
		f.limbs = append(f.limbs, slices.Sorted(slices.Values(list)))
	}
	for _, f.axes = range []int{3, 2, 0} {
		f.vectors, f.groupVectors = nil, nil
		for _, g := range layout.Groups {
			v := vectors(layout, g.Channels, f.axes)
			f.groupVectors = append(f.groupVectors, v)
			f.vectors = append(f.vectors, v...)
		}
		if len(f.vectors) > 0 {
			break
		}
	}
	return f
}

// vectors finds the vectors of space among the channels of a group: the x, y
// and z, or where there are two axes the x and y, of one tracked point and
// quantity. A group of nothing but as many channels of which nothing is known
// is one too. Angles and quaternions are no vectors.
func vectors(l *channels.Layout, list []int, axes int) [][]int {
	if axes == 0 {
		return nil
	}
	if len(list) == axes && !slices.ContainsFunc(list, func(i int) bool { return named(l.Channels[i]) }) {
		return [][]int{list}
	}
	var out [][]int
	names := []string{"x", "y", "z"}[:axes]
	for _, i := range list {
		c := l.Channels[i]
		if c.Component != "x" || c.Quantity == channels.Orientation || c.Quantity == channels.JointAngle {
			continue
		}
		var v []int
		for _, name := range names {
			v = append(v, slices.IndexFunc(list, func(k int) bool {
				d := l.Channels[k]
				return d.TrackedPoint == c.TrackedPoint && d.Quantity == c.Quantity && d.Component == name
			}))
		}
		if slices.Contains(v, -1) {
			continue
		}
		for k, at := range v {
			v[k] = list[at]
		}
		out = append(out, v)
	}
	return out
}

func named(c channels.Channel) bool { return c.Component != "" || c.Quantity != channels.Misc }
