package group

import (
	"cmp"
	"slices"

	"strandwise/channels"
)

// unit is what may move as one: a limb, a group, or a run of channels.
type unit struct {
	name     string
	channels []int    // ascending
	halves   [2][]int // the channels dealt into two, both empty for a unit of one channel
}

// limbUnits returns the limbs of a layout as units, in the order of
// [channels.Layout.Limbs].
func limbUnits(l *channels.Layout) []unit {
	out := make([]unit, 0, len(l.Groups))
	for _, limb := range l.Limbs() {
		u := unit{name: limb}
		for _, g := range l.Groups {
			if g.Limb == limb {
				u.channels = append(u.channels, g.Channels...)
			}
		}
		slices.Sort(u.channels)
		out = append(out, u)
	}
	return out
}

// deal divides the channels of a unit into two halves that say about equally
// much: by size, the largest first, one to the first half, two to the second,
// two to the first and so on. size is each channel's sum of squares.
func (u *unit) deal(size []float64) {
	if len(u.channels) < 2 {
		return
	}
	order := slices.Clone(u.channels)
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(size[b], size[a]) })
	for i, c := range order {
		half := (i + 1) / 2 % 2
		u.halves[half] = append(u.halves[half], c)
	}
}

// pick copies the unit's channels out of frames × width values.
func pick(data []float64, width int, list []int) []float64 {
	out := make([]float64, 0, len(data)/width*len(list))
	for i := 0; i < len(data); i += width {
		for _, c := range list {
			out = append(out, data[i+c])
		}
	}
	return out
}
