package chart

import (
	"strandwise/channels"
	"strandwise/channels/body"
)

// FindBones looks for bones in sample takes of one layout: pairs of tracked
// points whose places keep their distance in all of them, by
// [body.FindBones] with [body.DefaultBoneSearch].
func FindBones(layout *channels.Layout, takes []*channels.Take) []Bone {
	d := newDraft(layout)
	var names []string
	var list []int
	for _, c := range layout.Channels {
		if c.Quantity != channels.Position || c.Component != "x" {
			continue
		}
		if at, ok := d.claim(c.TrackedPoint, channels.Position, xyz); ok {
			names, list = append(names, c.TrackedPoint), append(list, at...)
		}
	}
	samples := make([][]float64, len(takes))
	for i, t := range takes {
		samples[i] = columns(t, list)
	}
	tree := body.FindBones(samples, len(names), body.DefaultBoneSearch())
	var out []Bone
	for _, i := range tree.Order {
		if p := tree.Parent[i]; p >= 0 {
			out = append(out, Bone{names[i], names[p]})
		}
	}
	return out
}
