package chart

import (
	"slices"

	"strandwise/channels"
)

// triad is the three axes of one sensor, in one group.
type triad struct {
	point    string // tracked point, empty for axes that are not called x, y and z
	limb     string
	channels []int // x, y, z
	bare     bool  // the axes are the only channels of their quantity in the group, in order
}

// triads finds the sensors of a quantity: x, y and z of one tracked point, or
// three channels that are not called axes and are all there are of the quantity
// in a group.
func (d *draft) triads(q channels.Quantity) []triad {
	var out []triad
	for _, group := range d.layout.Groups {
		of := slices.DeleteFunc(slices.Clone(group.Channels), func(i int) bool {
			return d.held[i] || d.layout.Channels[i].Quantity != q
		})
		if len(of) == 3 && bare(d.layout, of) {
			out = append(out, triad{limb: group.Limb, channels: of, bare: true})
			continue
		}
		for _, i := range of {
			c := d.layout.Channels[i]
			if c.Component != xyz[0] {
				continue
			}
			if list, ok := d.find(c.TrackedPoint, q, xyz); ok {
				out = append(out, triad{point: c.TrackedPoint, limb: group.Limb, channels: list})
			}
		}
	}
	return out
}

// companion returns the sensor among others that is fixed to the same body as
// this one among its kind: that of the same tracked point, or, where points are
// not told, the only one of the same limb.
func (t triad) companion(kind, others []triad) (triad, bool) {
	same := func(o triad) bool {
		if t.bare || o.bare {
			return t.bare == o.bare && t.limb == o.limb
		}
		return t.point == o.point
	}
	i := slices.IndexFunc(others, same)
	if i < 0 || slices.ContainsFunc(others[i+1:], same) {
		return triad{}, false
	}
	if first := slices.IndexFunc(kind, same); slices.ContainsFunc(kind[first+1:], same) {
		return triad{}, false
	}
	return others[i], true
}
