package group_test

import (
	"fmt"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/channels/group"
)

// numbered returns c0, c1 … c(n−1).
func numbered(n int) []string {
	out := make([]string, n)
	for i := range out {
		out[i] = fmt.Sprint("c", i)
	}
	return out
}

// written is groups as one line: name@limb:channels, parted by "; ".
func written(groups []channels.Group) string {
	var out []string
	for _, g := range groups {
		out = append(out, fmt.Sprintf("%s@%s:%s", g.Name, g.Limb, strings.Trim(fmt.Sprint(g.Channels), "[]")))
	}
	return strings.Join(out, "; ")
}

func TestFromNames(t *testing.T) {
	for _, c := range []struct {
		name, headers, want string
	}{
		{
			"accelerometer and gyroscope on both wrists",
			"left_wrist.accel.x left_wrist.accel.y left_wrist.accel.z left_wrist.gyro.x left_wrist.gyro.y left_wrist.gyro.z " +
				"right_wrist.accel.x right_wrist.accel.y right_wrist.accel.z right_wrist.gyro.x right_wrist.gyro.y right_wrist.gyro.z",
			"left_wrist.accel@left_arm:0 1 2; left_wrist.gyro@left_arm:3 4 5; right_wrist.accel@right_arm:6 7 8; right_wrist.gyro@right_arm:9 10 11",
		},
		{
			"tracked points of one arm share the limb",
			"left_wrist.pos.x left_wrist.pos.y left_elbow.pos.x left_elbow.pos.y right_knee.pos.x head.pos.x",
			"left_wrist.pos@left_arm:0 1; left_elbow.pos@left_arm:2 3; right_knee.pos@right_leg:4; head.pos@head:5",
		},
		{
			"joint names in camel case",
			"LeftForeArm.ornt.x LeftHand.ornt.x RightUpLeg.ornt.x Hips.ornt.x RightFoot.ornt.x",
			"LeftForeArm.ornt@left_arm:0; LeftHand.ornt@left_arm:1; RightUpLeg.ornt@right_leg:2; Hips.ornt@Hips:3; RightFoot.ornt@right_leg:4",
		},
		{
			"channels of a group lie apart",
			"left_hand.pos.x right_hand.pos.x left_hand.pos.y right_hand.pos.y",
			"left_hand.pos@left_arm:0 2; right_hand.pos@right_arm:1 3",
		},
		{"a side and no part", "l_hip.pos.x r_hip.pos.x", "l_hip.pos@left:0; r_hip.pos@right:1"},
		{"sides without quantities", "left_hand_x left_hand_y right_hand_x right_hand_y", "left_arm@left_arm:0 1; right_arm@right_arm:2 3"},
		{"one sensor without a place", "ax ay az gx gy gz", "accel@body:0 1 2; gyro@body:3 4 5"},
		{"some that say nothing", "ax temperature battery", "accel@body:0; other@body:1 2"},
		{"nothing said, two", "x y", "all@all:0 1"},
		{"nothing said, six", strings.Join(numbered(6), " "), "c0-c2@all:0 1 2; c3-c5@all:3 4 5"},
		{"nothing said, five", strings.Join(numbered(5), " "), "c0-c4@all:0 1 2 3 4"},
	} {
		got := group.FromNames(named(strings.Fields(c.headers)...))
		if diff := cmp.Diff(c.want, written(got)); diff != "" {
			t.Errorf("%s: %s", c.name, diff)
		}
	}
}

// Whatever the names, the groups take every channel once, each with a limb,
// and no two carry one name.
func TestFromNamesIsAPartition(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		point := rapid.SampledFrom([]string{"left_wrist", "RightHand", "head", "l_hip", "other", "body", "c1", ""})
		kind := rapid.SampledFrom([]string{".accel", ".gyro", ".pos", ".ornt", ""})
		axis := rapid.SampledFrom([]string{".x", ".y", ".quat_w", ""})
		header := rapid.Custom(func(t *rapid.T) string {
			return point.Draw(t, "point") + kind.Draw(t, "kind") + axis.Draw(t, "axis")
		})
		l := &channels.Layout{Channels: named(rapid.SliceOfN(header, 1, 30).Draw(t, "headers")...)}
		groups := group.FromNames(l.Channels)
		if _, err := l.WithGroups(groups); err != nil {
			t.Fatalf("%s: %v", written(groups), err)
		}
		seen := make(map[string]bool)
		for _, g := range groups {
			if g.Limb == "" || seen[g.Name] {
				t.Fatalf("%s: group %q", written(groups), g.Name)
			}
			seen[g.Name] = true
		}
	})
}

// A wristband on each arm: both sensors of a band share its timing.
func ExampleFromNames() {
	var list []channels.Channel
	for _, header := range []string{"left_wrist.accel.x [g]", "left_wrist.gyro.x [deg/s]", "right_wrist.accel.x [g]"} {
		c, _ := channels.ParseHeader(header)
		list = append(list, c)
	}
	for _, g := range group.FromNames(list) {
		fmt.Printf("%s moves with %s\n", g.Name, g.Limb)
	}
	// Output:
	// left_wrist.accel moves with left_arm
	// left_wrist.gyro moves with left_arm
	// right_wrist.accel moves with right_arm
}
