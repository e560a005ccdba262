package channels_test

import (
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/channels"
)

func layout(headers ...string) *channels.Layout {
	l := new(channels.Layout)
	for _, h := range headers {
		c, _ := channels.ParseHeader(h)
		l.Channels = append(l.Channels, c)
	}
	return l
}

func TestLayoutNamesAndIndex(t *testing.T) {
	l := layout("ax", "ay", "c0")
	if got := l.Names(); !slices.Equal(got, []string{"ax", "ay", "c0"}) {
		t.Errorf("names %v", got)
	}
	for name, want := range map[string]int{"ax": 0, "c0": 2, "az": -1, "": -1} {
		if got := l.Index(name); got != want {
			t.Errorf("%q is at %d, want %d", name, got, want)
		}
	}
}

func TestWithGroups(t *testing.T) {
	l := layout("a", "b", "c", "d")
	given := []channels.Group{
		{Name: "right", Limb: "arm", Channels: []int{3, 1}},
		{Name: "trunk", Channels: []int{2}},
		{Name: "left", Limb: "arm", Channels: []int{0}},
	}
	got, err := l.WithGroups(given)
	if err != nil {
		t.Fatal(err)
	}
	want := []channels.Group{
		{Name: "right", Limb: "arm", Channels: []int{1, 3}},
		{Name: "trunk", Limb: "trunk", Channels: []int{2}},
		{Name: "left", Limb: "arm", Channels: []int{0}},
	}
	if diff := cmp.Diff(want, got.Groups); diff != "" {
		t.Error(diff)
	}
	if limbs := got.Limbs(); !slices.Equal(limbs, []string{"arm", "trunk"}) {
		t.Errorf("limbs %v, want each once, in the order of the groups", limbs)
	}
	if l.Groups != nil || !slices.Equal(given[0].Channels, []int{3, 1}) || given[1].Limb != "" {
		t.Error("the layout or the groups given were changed")
	}
}

func TestWithGroupsFaults(t *testing.T) {
	l := layout("a", "b", "c")
	for _, c := range []struct {
		name   string
		groups []channels.Group
		says   string
	}{
		{"no groups", nil, "no group holds a, b, c"},
		{"left over", []channels.Group{{Name: "g", Channels: []int{1}}}, "no group holds a, c"},
		{"empty", []channels.Group{{Name: "g", Channels: []int{0, 1, 2}}, {Name: "h"}}, "group h holds no channel"},
		{"in two", []channels.Group{{Name: "g", Channels: []int{0, 1}}, {Name: "h", Channels: []int{1, 2}}}, "channel b is in two groups, g and h"},
		{"twice in one", []channels.Group{{Name: "g", Channels: []int{0, 1, 1, 2}}}, "channel b"},
		{"in two without names", []channels.Group{{Channels: []int{0, 1}}, {Channels: []int{1, 2}}}, "channel b is in two groups"},
		{"beyond the last", []channels.Group{{Name: "g", Channels: []int{0, 1, 2, 3}}}, "group g: no channel at position 3"},
		{"before the first", []channels.Group{{Name: "g", Channels: []int{-1, 0, 1, 2}}}, "group g: no channel at position -1"},
	} {
		if _, err := l.WithGroups(c.groups); err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s: error %v, want it to say %q", c.name, err, c.says)
		}
	}
}
