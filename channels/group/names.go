package group

import (
	"regexp"
	"slices"
	"strings"

	"strandwise/channels"
)

// FromNames derives groups from channel names alone. Channels that name one
// tracked point and one quantity (left_wrist.accel.x, .y, .z) form a group.
// Groups of one tracked point share its limb, since a sensor cannot move apart
// from itself; tracked points of one arm or leg (left_wrist, left_elbow) share
// that limb. When no name says anything, runs of numbered channels are groups of
// three axes where that goes without a rest, and all are one limb.
func FromNames(list []channels.Channel) []channels.Group {
	if nameless(list) || !slices.ContainsFunc(list, placed) {
		groups := numbered(list)
		for i := range groups {
			groups[i].Limb = "all"
		}
		return groups
	}
	var out []channels.Group
	for i, c := range list {
		name, limb := place(c)
		at := slices.IndexFunc(out, func(g channels.Group) bool { return g.Name == name })
		if at < 0 {
			out = append(out, channels.Group{Name: name, Limb: limb})
			at = len(out) - 1
		}
		out[at].Channels = append(out[at].Channels, i)
	}
	return out
}

// placed tells whether a channel's name says where it belongs: it names a
// side, or a quantity.
func placed(c channels.Channel) bool {
	return c.Quantity != channels.Misc || limbOf(c.TrackedPoint) != ""
}

// place returns the group and limb of a channel.
func place(c channels.Channel) (name, limb string) {
	limb = limbOf(c.TrackedPoint)
	if c.Quantity == channels.Misc {
		if limb == "" {
			return "other", "body"
		}
		return limb, limb
	}
	name = c.Quantity.Word()
	if c.TrackedPoint != "" {
		name = c.TrackedPoint + "." + name
	}
	switch {
	case limb != "":
	case c.TrackedPoint != "":
		limb = c.TrackedPoint
	default:
		limb = "body"
	}
	return name, limb
}

var (
	camel = regexp.MustCompile(`([a-z])([A-Z])`)
	parts = map[string][]string{
		"arm": {"shoulder", "arm", "upperarm", "forearm", "elbow", "wrist", "hand", "palm", "finger", "thumb", "index", "tip"},
		"leg": {"thigh", "leg", "upleg", "upperleg", "lowerleg", "knee", "shin", "shank", "ankle", "foot", "heel", "toe"},
	}
)

// limbOf returns the limb a tracked point names: its side, and arm or leg
// where a word says so ("LeftForeArm" is left_arm, "l_hip" is left). A point
// that names no side has no limb.
func limbOf(point string) string {
	words := strings.FieldsFunc(strings.ToLower(camel.ReplaceAllString(point, "${1}_$2")), func(r rune) bool {
		return r == '_' || r == '.' || r == ' '
	})
	side := ""
	for _, w := range words {
		switch w {
		case "left", "l", "lt":
			side = "left"
		case "right", "r", "rt":
			side = "right"
		}
	}
	if side == "" {
		return ""
	}
	for _, part := range []string{"arm", "leg"} {
		for _, w := range words {
			if slices.Contains(parts[part], w) {
				return side + "_" + part
			}
		}
	}
	return side
}

func everything(list []channels.Channel) channels.Group {
	g := channels.Group{Name: "all", Limb: "all", Channels: make([]int, len(list))}
	for i := range list {
		g.Channels[i] = i
	}
	return g
}
