package group_test

import (
	"fmt"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/channels"
	"strandwise/channels/group"
)

func named(names ...string) []channels.Channel {
	out := make([]channels.Channel, len(names))
	for i, n := range names {
		out[i], _ = channels.ParseHeader(n)
	}
	return out
}

func TestMatch(t *testing.T) {
	list := named("c0", "c1", "c2", "c10", "left_x", "left_y", "a-b", "p*", "c02")
	for _, c := range []struct {
		pattern string
		want    []int
	}{
		{"c0", []int{0}},
		{"c1, c0", []int{0, 1}},
		{"c0-c2", []int{0, 1, 2, 8}}, // c02 is number 2 as well
		{"c1-2", []int{1, 2, 8}},
		{"c1-c10", []int{1, 2, 3, 8}},
		{"left_*", []int{4, 5}},
		{"left_?,left_x", []int{4, 5}},
		{"a-b", []int{6}},
		{"p*", []int{7}}, // a name stands for itself
		{"*", []int{0, 1, 2, 3, 4, 5, 6, 7, 8}},
	} {
		got, err := group.Match(list, c.pattern)
		if err != nil {
			t.Errorf("%q: %v", c.pattern, err)
		}
		if d := cmp.Diff(c.want, got); d != "" {
			t.Errorf("%q: %s", c.pattern, d)
		}
	}
}

func TestMatchErrors(t *testing.T) {
	list := named("c0", "c1", "c2")
	for pattern, want := range map[string]string{
		"d0":                       `"d0"; the channels are c0, c1, c2`,
		"c0,":                      `""`,
		"":                         `""`,
		"c0,d*":                    `"d*"`,
		"c1-c3":                    `"c3"`,
		"c2-c1":                    "backwards",
		"c1-d2":                    `"c1-d2"`,
		"c0-c99999999999999999999": "backwards",
		"[c0":                      `"[c0"`,
	} {
		if _, err := group.Match(list, pattern); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%q: error %v, want %q", pattern, err, want)
		}
	}
	if _, err := group.Match(nil, "a"); err == nil || !strings.Contains(err.Error(), "no channels") {
		t.Errorf("error %v", err)
	}
}

func TestMatchErrorAbbreviatesALongList(t *testing.T) {
	var names []string
	for i := range 75 {
		names = append(names, fmt.Sprintf("c%d", i))
	}
	_, err := group.Match(named(names...), "d")
	const want = "c11, … (60 more), c72, c73, c74"
	if err == nil || !strings.Contains(err.Error(), want) {
		t.Errorf("error %v, want %q", err, want)
	}
}

func TestFromRules(t *testing.T) {
	list := named("c0", "c1", "c2")
	got, err := group.FromRules(list, []group.Rule{
		{Name: "right", Limb: "right_arm", Channels: []string{"c2"}},
		{Name: "left", Channels: []string{"c0", "c1"}},
	})
	if err != nil {
		t.Fatal(err)
	}
	want := []channels.Group{
		{Name: "right", Limb: "right_arm", Channels: []int{2}},
		{Name: "left", Channels: []int{0, 1}},
	}
	if d := cmp.Diff(want, got); d != "" {
		t.Error(d)
	}
}

func TestFromRulesErrors(t *testing.T) {
	list := named("c0", "c1", "c2")
	for _, c := range []struct {
		rules []group.Rule
		want  string
	}{
		{[]group.Rule{{Name: "a", Channels: []string{"c1"}}}, "no group holds c0, c2; add a group"},
		{[]group.Rule{{Name: "a", Channels: []string{"x"}}}, "group a: no channel matches"},
		{[]group.Rule{{Name: "a"}}, "group a names no channels"},
	} {
		if _, err := group.FromRules(list, c.rules); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%+v: error %v, want %q", c.rules, err, c.want)
		}
	}
}

func ExampleMatch() {
	list := named("left_wrist.accel.x", "left_wrist.accel.y", "c3", "c4", "c5")
	left, _ := group.Match(list, "left_*")
	some, _ := group.Match(list, "c3-c4, left_wrist.accel.y")
	fmt.Println(left, some)
	// Output: [0 1] [1 2 3]
}
