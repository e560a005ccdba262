package chart

import (
	"slices"
	"strings"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
)

// stance is how a body stands in a take in which a foot stands still: the
// joints from the feet up to the root bear it.
type stance struct {
	bears []bool // of each joint
	limb  string // whose timing the bearing joints share
	up    r3.Vec
}

// part returns the part of a joint as it is when these joints bear the body. A
// nil stance changes nothing.
func (s *stance) part(p Part, joint int) Part {
	if s != nil && s.bears[joint] {
		p.Kind, p.Limb, p.Mix = Fixed, s.limb, false
	}
	return p
}

// upright returns the turn of a rotation about the upright: its part of the
// swing-twist decomposition. A nil stance leaves the rotation as it is.
func (s *stance) upright(by quat.Number) quat.Number {
	if s == nil {
		return by
	}
	twist := r3.Scale(r3.Dot(s.up, r3.Vec{X: by.Imag, Y: by.Jmag, Z: by.Kmag}), s.up)
	return body.Unit(quat.Number{Real: by.Real, Imag: twist.X, Jmag: twist.Y, Kmag: twist.Z})
}

// figure is a body whose feet are looked for: the joints with their names and
// parents (-1 for a root), and the length of its longest way along the bones.
type figure struct {
	names  []string
	parent []int
	span   float64
	turns  bool // a joint's coordinates turn what hangs from it, and do not move the joint itself
}

// stand finds the feet that stand still in a take, given the places of the
// joints (frames × joints × 3), and the joints that bear them: all whose
// coordinates decide where they are. The last joint of a leg and the one before
// it, toe and ball or toe and ankle, count as feet. Without any that stands
// still it is nil.
func (f *figure) stand(time, places []float64) *stance {
	n := len(f.parent)
	s := &stance{up: body.Up(places, n), bears: make([]bool, n)}
	still := body.StillnessOf(f.span)
	stands := false
	for _, leg := range body.Legs(f.parent, places, s.up) {
		if slices.ContainsFunc(leg, func(j int) bool { return calledArm(f.names[j]) }) {
			continue
		}
		for _, foot := range leg[max(0, len(leg)-2):] {
			if len(still.Still(time, placesOf(places, n, foot))) == 0 {
				continue
			}
			stands = true
			for j := foot; j >= 0; j = f.parent[j] {
				s.bears[j] = s.bears[j] || j != foot || !f.turns
			}
		}
	}
	if !stands {
		return nil
	}
	return s
}

// armWords tell that a joint is of an arm, which a leg never is, however low it
// hangs.
var armWords = []string{"arm", "elbow", "wrist", "hand", "palm", "finger", "thumb"}

func calledArm(name string) bool {
	name = strings.ToLower(name)
	return slices.ContainsFunc(armWords, func(w string) bool { return strings.Contains(name, w) })
}

// placesOf returns the places of one joint.
func placesOf(places []float64, joints, joint int) []float64 {
	out := make([]float64, 0, len(places)/joints)
	for i := 3 * joint; i < len(places); i += 3 * joints {
		out = append(out, places[i:i+3]...)
	}
	return out
}

// stand finds how the skeleton stands in a take with these coordinates.
func (k *skeleton) stand(values rows, time []float64, frames []turnFrame) *stance {
	if len(k.moves) == 0 {
		return nil // where it is in the world is not known
	}
	f := figure{span: k.body.Span(), turns: true}
	for _, j := range k.body.Joints {
		f.names, f.parent = append(f.names, j.Name), append(f.parent, j.Parent)
	}
	places := make([]float64, 0, 3*len(time)*len(f.parent))
	k.forward(values, frames, func(_ int, _ []quat.Number, at []r3.Vec) {
		for _, p := range at {
			places = append(places, p.X, p.Y, p.Z)
		}
	})
	s := f.stand(time, places)
	if s != nil {
		s.limb = k.moves[0].part.Limb
	}
	return s
}

// stand finds how a body of tracked points stands in a take.
func (s *points) stand(t *channels.Take, values rows) *stance {
	f := figure{}
	tree := body.Skeleton{Joints: make([]body.Joint, len(s.list))}
	var list []int
	for i, p := range s.list {
		f.names, f.parent = append(f.names, p.name), append(f.parent, p.parent)
		list = append(list, p.channels[:]...)
		tree.Joints[i].Parent = p.parent
		if p.parent >= 0 {
			tree.Joints[i].Offset.X = mean(values, p.length.Coordinates[0])
		}
	}
	f.span = tree.Span()
	out := f.stand(t.Time, columns(t, list))
	if out != nil {
		out.limb = s.list[0].way.Limb
	}
	return out
}

func mean(values rows, column int) float64 {
	sum := 0.0
	for f := range values.frames() {
		sum += values.frame(f)[column]
	}
	return sum / float64(values.frames())
}
