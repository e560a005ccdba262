package group

import (
	"slices"
	"strings"

	"strandwise/channels"
	"strandwise/channels/body"
)

// trunkShare is the share of a tree's joints that a joint of its trunk carries,
// itself included: the hips carry all, a spine the arms and the head, while an
// arm with all its fingers carries less than a third.
const trunkShare = 0.4

// limbsOf parts a forest of joints, of which parent holds each one's parent,
// which stands before it, or -1, into trunks and limbs. It returns for each
// joint the top joint of its limb, or the root of its trunk. What hangs from a
// trunk by a single joint belongs to the trunk.
func limbsOf(parent []int) []int {
	size := make([]int, len(parent)) // of the subtree
	for i := len(parent) - 1; i >= 0; i-- {
		size[i]++
		if parent[i] >= 0 {
			size[parent[i]] += size[i]
		}
	}
	out, root := make([]int, len(parent)), make([]int, len(parent))
	for i, p := range parent {
		switch {
		case p < 0:
			out[i], root[i] = i, i
			continue
		case out[p] != root[p]: // within a limb
			out[i] = out[p]
		case float64(size[i]) >= trunkShare*float64(size[root[p]]) || size[i] < 2:
			out[i] = root[p]
		default:
			out[i] = i
		}
		root[i] = root[p]
	}
	return out
}

// fromSkeleton returns the groups with limbs by the skeleton for those whose
// names say no side: the trunk's joints share one limb, and what hangs from it
// another each. It reports whether any group is of a joint.
func fromSkeleton(groups []channels.Group, list []channels.Channel, s *body.Skeleton) ([]channels.Group, bool) {
	parent := make([]int, len(s.Joints))
	joint := make(map[string]int)
	for i, j := range s.Joints {
		parent[i] = j.Parent
		joint[plainName(j.Name)] = i
	}
	limbs := limbsOf(parent)
	out, found := slices.Clone(groups), false
	for i, g := range out {
		point := list[g.Channels[0]].TrackedPoint
		at, ok := joint[plainName(point)]
		if !ok {
			continue
		}
		found = true
		if limbOf(point) != "" {
			continue
		}
		if top := limbs[at]; s.Joints[top].Parent < 0 {
			out[i].Limb = "trunk"
		} else {
			out[i].Limb = s.Joints[top].Name
		}
	}
	return out, found
}

// plainName is a joint's name as channel names may spell it.
func plainName(name string) string {
	return strings.Join(strings.FieldsFunc(strings.ToLower(name), func(r rune) bool {
		return strings.ContainsRune("._-:/ \t", r)
	}), "_")
}
