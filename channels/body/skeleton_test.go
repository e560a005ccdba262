package body_test

import (
	"encoding/json"
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels/body"
)

// puppet is a small skeleton: a trunk with a head, and an arm that slides along
// a rail.
func puppet() *body.Skeleton {
	return &body.Skeleton{Unit: "cm", Joints: []body.Joint{
		{Name: "Hips", Parent: -1, Freedoms: []body.Freedom{body.MoveX, body.MoveY, body.MoveZ, body.TurnZ, body.TurnX, body.TurnY}},
		{Name: "Neck", Parent: 0, Offset: r3.Vec{Y: 0.5}},
		{Name: "Neck_end", Parent: 1, Offset: r3.Vec{Y: 0.25}, End: true},
		{Name: "Arm", Parent: 0, Offset: r3.Vec{X: 0.3, Y: 0.4}, Freedoms: []body.Freedom{body.TurnX, body.MoveZ}, Absolute: true},
		{Name: "Arm_end", Parent: 3, Offset: r3.Vec{X: 0.6}, End: true},
		{Name: "Rod", Parent: 0, Offset: r3.Vec{Z: -0.2}, Freedoms: []body.Freedom{}},
	}}
}

func TestSkeleton(t *testing.T) {
	s := puppet()
	if err := s.Validate(); err != nil {
		t.Fatal(err)
	}
	if got := s.Moving(); !cmp.Equal(got, []int{0, 3}) {
		t.Errorf("moving: %v", got)
	}
	want := []body.Bone{{1, 0, 0.5}, {2, 1, 0.25}, {4, 3, 0.6}, {5, 0, 0.2}}
	if d := cmp.Diff(want, s.Bones()); d != "" {
		t.Error(d)
	}
	// From the tip of the head to the tip of the arm.
	if got := s.Span(); math.Abs(got-(0.25+0.5+0.5+0.6)) > tolerance {
		t.Errorf("span %g", got)
	}
	if s.Index("Arm") != 3 || s.Index("arm") != -1 {
		t.Error("Index")
	}
	turns := []bool{true, true, false, true, false, false}
	for i, j := range s.Joints {
		if j.Turns() != turns[i] {
			t.Errorf("%s turns: %v", j.Name, j.Turns())
		}
	}
}

func TestSkeletonJSON(t *testing.T) {
	text, err := json.Marshal(puppet())
	if err != nil {
		t.Fatal(err)
	}
	var got body.Skeleton
	if err := json.Unmarshal(text, &got); err != nil {
		t.Fatal(err)
	}
	// What is not stated (nil) must not become no freedom at all.
	if d := cmp.Diff(puppet(), &got); d != "" {
		t.Error(d)
	}
	if want := `{"name":"Arm","parent":0,"offset_m":[0.3,0.4,0],"freedoms":["turn_x","move_z"],"absolute":true}`; !strings.Contains(string(text), want) {
		t.Errorf("%s\nholds no %s", text, want)
	}
	for _, bad := range []string{`{"joints":[{"freedoms":["spin"]}]}`, `{"joints":[{"offset_m":"0"}]}`} {
		if err := json.Unmarshal([]byte(bad), &got); err == nil {
			t.Errorf("%s is taken", bad)
		}
	}
}

func TestValidate(t *testing.T) {
	for _, c := range []struct {
		change func(s *body.Skeleton)
		want   string
	}{
		{func(s *body.Skeleton) { s.Joints = nil }, "needs a joint"},
		{func(s *body.Skeleton) { s.Joints[3].Name = "" }, "no name"},
		{func(s *body.Skeleton) { s.Joints[3].Name = "Neck" }, "joint 1 has the same name"},
		{func(s *body.Skeleton) { s.Joints[3].Parent = 3 }, "parent 3, which does not stand before"},
		{func(s *body.Skeleton) { s.Joints[3].Parent = -2 }, "parent -2"},
		{func(s *body.Skeleton) { s.Joints[3].Parent = 2 }, "end site as its parent"},
		{func(s *body.Skeleton) { s.Joints[2].Parent = -1 }, "end site without a parent"},
		{func(s *body.Skeleton) { s.Joints[5].Offset.Z = math.NaN() }, "not finite"},
		{func(s *body.Skeleton) { s.Joints[5].Freedoms = []body.Freedom{6} }, "unknown freedom"},
	} {
		s := puppet()
		c.change(s)
		if err := s.Validate(); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%v, want %q", err, c.want)
		}
	}
}

func TestFreedom(t *testing.T) {
	if body.MoveZ.IsTurn() || !body.TurnX.IsTurn() || body.TurnY.Axis() != body.Y || body.MoveZ.Axis() != body.Z {
		t.Error("freedoms are mixed up")
	}
	if _, err := json.Marshal(body.Freedom(9)); err == nil {
		t.Error("an unknown freedom is written")
	}
	if body.Freedom(-1).String() != "Freedom(-1)" {
		t.Error(body.Freedom(-1).String())
	}
}
