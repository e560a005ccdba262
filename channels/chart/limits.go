package chart

import (
	"fmt"
	"maps"
	"math"
	"slices"

	"strandwise/channels"
)

// bounds maps a scalar that has limits to one that has none and back. With m
// the middle and h half of the range it is
//
//	u = m + h asin((x - m)/h)        x = m + h sin((u - m)/h)
//
// where the latter stays at a limit beyond it. The map has slope 1 in the
// middle, so that u is in the unit of x; it reaches the limits at finite u and
// is smooth there, so that what rests at a limit stays there when it is
// amplified, and what comes near is slowed down.
type bounds struct{ lo, hi, middle, half float64 }

func newBounds(l [2]float64) *bounds {
	return &bounds{l[0], l[1], l[0]/2 + l[1]/2, l[1]/2 - l[0]/2}
}

// flat maps a value to a number without limits. A value beyond the limits
// counts as at the limit. Nil changes nothing.
func (b *bounds) flat(x float64) float64 {
	if b == nil {
		return x
	}
	return b.middle + b.half*math.Asin(min(max((x-b.middle)/b.half, -1), 1))
}

// inside maps a number back to a value between the limits. Nil changes nothing.
func (b *bounds) inside(u float64) float64 {
	if b == nil {
		return u
	}
	angle := min(max((u-b.middle)/b.half, -math.Pi/2), math.Pi/2)
	return min(max(b.middle+b.half*math.Sin(angle), b.lo), b.hi)
}

// clamp cuts a channel off at its limits, as a sensor does at the ends of its
// range.
type clamp struct {
	channel int
	lo, hi  float64
}

func (c clamp) apply(data []float64, width int) {
	for i := c.channel; i < len(data); i += width {
		data[i] = min(max(data[i], c.lo), c.hi)
	}
}

// limits are the channels that have limits.
type limits map[int][2]float64

// newLimits finds the channels by name.
func newLimits(l *channels.Layout, named map[string][2]float64) (limits, error) {
	out := make(limits)
	for _, name := range slices.Sorted(maps.Keys(named)) {
		i, limit := l.Index(name), named[name]
		switch {
		case i < 0:
			return nil, fmt.Errorf("there is no channel %s", name)
		case !(limit[0] < limit[1]) || math.IsInf(limit[0], 0) || math.IsInf(limit[1], 0):
			return nil, fmt.Errorf("channel %s: %g to %g is no range", name, limit[0], limit[1])
		}
		out[i] = limit
	}
	return out, nil
}

// fit reports limits of channels that sheets other than sensors hold: a place
// or turn of a body cannot be cut off and the body stay whole.
func (l limits) fit(d *draft) error {
	for _, i := range slices.Sorted(maps.Keys(l)) {
		c := d.layout.Channels[i]
		if d.held[i] && (c.Quantity == channels.Position || c.Quantity == channels.Orientation) {
			return fmt.Errorf("channel %s is part of a place or turn that must stay whole, and can have no limits of its own", c.Name)
		}
	}
	return nil
}

// clamps returns the cuts for the channels that are left.
func (l limits) clamps() []clamp {
	var out []clamp
	for _, i := range slices.Sorted(maps.Keys(l)) {
		out = append(out, clamp{i, l[i][0], l[i][1]})
	}
	return out
}
