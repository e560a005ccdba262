package body

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/spatial/r3"
)

// Skeleton is a tree of joints, or several, in an order in which every parent
// stands before its children. It is read-only once motions refer to it. As
// JSON it is a document that holds all there is to know of it:
//
//	{"unit": "cm", "joints": [
//	  {"name": "Hips", "parent": -1, "offset_m": [0, 0, 0],
//	   "freedoms": ["move_x", "move_y", "move_z", "turn_z", "turn_x", "turn_y"]},
//	  {"name": "Hips_end", "parent": 0, "offset_m": [0, 0.1, 0], "end": true}]}
type Skeleton struct {
	Joints []Joint `json:"joints"`
	Unit   string  `json:"unit,omitempty"` // unit of length of the recording it comes from, for writing it back; lengths here are in metres
}

// Joint is one joint of a skeleton.
type Joint struct {
	Name     string
	Parent   int       // index of the parent, -1 for a root
	Offset   r3.Vec    // place at rest in the frame of the parent, in metres
	End      bool      // end site: the tip of a limb, which neither turns nor moves
	Freedoms []Freedom // ways it moves, in the order of the recording; nil when not stated
	Absolute bool      // its recording states where it moves to in the frame of the parent, not how far from Offset
}

// Turns tells whether the joint can turn.
func (j Joint) Turns() bool {
	return !j.End && (j.Freedoms == nil || slices.ContainsFunc(j.Freedoms, Freedom.turns))
}

// moves tells whether the joint can be elsewhere than at its offset. A root
// always can.
func (j Joint) moves() bool {
	return !j.End && (j.Parent < 0 || slices.ContainsFunc(j.Freedoms, Freedom.moves))
}

// Index returns the position of the named joint, or -1.
func (s *Skeleton) Index(name string) int {
	return slices.IndexFunc(s.Joints, func(j Joint) bool { return j.Name == name })
}

// Moving returns the joints that can move in the frame of their parent,
// ascending: all roots, and those with a freedom to move.
func (s *Skeleton) Moving() []int {
	var out []int
	for i, j := range s.Joints {
		if j.moves() {
			out = append(out, i)
		}
	}
	return out
}

// Bone is a stretch of fixed length between a joint and its parent.
type Bone struct {
	Joint, Parent int
	Length        float64 // metres
}

// Bones returns the bones in the order of their joints. A joint that can move
// in the frame of its parent has no bone to it.
func (s *Skeleton) Bones() []Bone {
	var out []Bone
	for i, j := range s.Joints {
		if !j.moves() && j.Parent >= 0 {
			out = append(out, Bone{i, j.Parent, r3.Norm(j.Offset)})
		}
	}
	return out
}

// Span returns the length in metres of the longest way along the bones from
// one joint to another, whatever the pose; a person's leads from a hand to a
// foot and is about one and a half times the height. It is the larger of the
// spans where there are several roots.
func (s *Skeleton) Span() float64 {
	reach := make([]float64, len(s.Joints)) // longest way down from each joint
	span := 0.0
	for i := len(s.Joints) - 1; i >= 0; i-- {
		if p := s.Joints[i].Parent; p >= 0 {
			down := reach[i] + r3.Norm(s.Joints[i].Offset)
			span = max(span, reach[p]+down)
			reach[p] = max(reach[p], down)
		}
	}
	return span
}

// Validate reports every joint that is at fault: a name that is missing or
// used twice, a parent that does not stand before it or is an end site, an
// offset that is not finite, an unknown freedom.
func (s *Skeleton) Validate() error {
	if len(s.Joints) == 0 {
		return errors.New("a skeleton needs a joint")
	}
	var faults []error
	first := make(map[string]int, len(s.Joints))
	for i, j := range s.Joints {
		if err := s.validate(i); err != nil {
			faults = append(faults, fmt.Errorf("joint %d (%s): %w", i, j.Name, err))
		}
		if k, ok := first[j.Name]; ok {
			faults = append(faults, fmt.Errorf("joint %d (%s): joint %d has the same name", i, j.Name, k))
		} else {
			first[j.Name] = i
		}
	}
	return errors.Join(faults...)
}

func (s *Skeleton) validate(i int) error {
	j := s.Joints[i]
	switch {
	case j.Name == "":
		return errors.New("has no name")
	case j.Parent >= i || j.Parent < -1:
		return fmt.Errorf("has parent %d, which does not stand before it", j.Parent)
	case j.Parent >= 0 && s.Joints[j.Parent].End:
		return errors.New("has an end site as its parent")
	case j.Parent < 0 && j.End:
		return errors.New("is an end site without a parent")
	case !finite(j.Offset):
		return errors.New("has an offset that is not finite")
	case slices.ContainsFunc(j.Freedoms, func(f Freedom) bool { return !f.known() }):
		return errors.New("has an unknown freedom")
	}
	return nil
}

func finite(v r3.Vec) bool {
	sum := v.X + v.Y + v.Z
	return !math.IsNaN(sum) && !math.IsInf(sum, 0)
}
