package group_test

import (
	"slices"
	"strings"
	"testing"

	"github.com/BurntSushi/toml"
	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/channels/group"
)

func TestRules(t *testing.T) {
	list := named("c0", "c1", "c2", "c4", "left.pos.x", "a,b", "c5")
	rules, err := group.Rules(list, []channels.Group{
		{Name: "numbers", Limb: "one", Channels: []int{0, 1, 2, 3}},
		{Name: "a=b", Limb: "x@y", Channels: []int{4, 5}},
		{Name: "c5", Limb: "c5", Channels: []int{6}},
	})
	if err != nil {
		t.Fatal(err)
	}
	want := []string{"numbers@one=c0-c2,c4", "a_b@x_y=left.pos.x,a?b", "c5@c5=c5"}
	var got []string
	for _, r := range rules {
		got = append(got, r.String())
	}
	if d := cmp.Diff(want, got); d != "" {
		t.Error(d)
	}
}

func TestRulesRefuseWhatTheyCannotTellApart(t *testing.T) {
	list := named("a", "b")
	list[1].Name = "a"
	_, err := group.Rules(list, []channels.Group{{Name: "g", Limb: "g", Channels: []int{1}}})
	if err == nil || !strings.Contains(err.Error(), `channel "a" cannot be told from others`) {
		t.Errorf("error %v", err)
	}
}

// Whatever the names: what is written into a plan reads back as the same
// groups.
func TestRulesReadBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		name := rapid.OneOf(
			rapid.Custom(func(t *rapid.T) string { return "c" + rapid.StringMatching(`[0-9]{1,2}`).Draw(t, "number") }),
			rapid.SampledFrom([]string{"left.pos.x", "a,b", "a*b", "c1-c3", "x=y", "p@q", " z ", `"`, "ρ", "a\tb", "?", ""}),
		)
		list := named(rapid.SliceOfNDistinct(name, 1, 12, rapid.ID).Draw(t, "names")...)
		count := rapid.IntRange(1, len(list)).Draw(t, "groups")
		groups := make([]channels.Group, count)
		for i := range list {
			k := i
			if i >= count {
				k = rapid.IntRange(0, count-1).Draw(t, "group")
			}
			groups[k].Channels = append(groups[k].Channels, i)
			groups[k].Name, groups[k].Limb = list[groups[k].Channels[0]].Name, list[0].Name
		}
		rules, err := group.Rules(list, groups)
		if err != nil {
			return // names that cannot be told apart
		}
		var plan struct{ Group []string }
		if _, err := toml.Decode(strings.Join(group.PlanLines(rules), "\n"), &plan); err != nil {
			t.Fatal(err)
		}
		var back []group.Rule
		for _, text := range plan.Group {
			r, err := group.ParseRule(text)
			if err != nil {
				t.Fatal(err)
			}
			back = append(back, r)
		}
		got, err := group.FromRules(list, back)
		if err != nil {
			t.Fatal(err)
		}
		for i := range groups {
			if !slices.Equal(got[i].Channels, groups[i].Channels) || got[i].Limb != got[0].Limb {
				t.Fatalf("%v became %v", groups, got)
			}
		}
	})
}

func TestParseRule(t *testing.T) {
	for text, want := range map[string]group.Rule{
		"left=c0-c2,c6":      {Name: "left", Channels: []string{"c0-c2", "c6"}},
		"left@left_arm = l*": {Name: "left", Limb: "left_arm", Channels: []string{" l*"}},
		" a @ b =c":          {Name: "a ", Limb: " b", Channels: []string{"c"}},
		"a=b=c":              {Name: "a", Channels: []string{"b=c"}},
	} {
		got, err := group.ParseRule(text)
		if d := cmp.Diff(want, got); err != nil || d != "" {
			t.Errorf("%q: %v %s", text, err, d)
		}
	}
	for _, text := range []string{"", "left", "=c0", "@limb=c0", "left= "} {
		if _, err := group.ParseRule(text); err == nil || !strings.Contains(err.Error(), "NAME@LIMB=CHANNELS") {
			t.Errorf("%q: error %v", text, err)
		}
	}
}

func FuzzParseRule(f *testing.F) {
	for _, text := range []string{"left=c0-c2,c6", "left@left_arm=l*", "a=b=c", "@", "=", ""} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		r, err := group.ParseRule(text)
		if err != nil {
			return
		}
		back, err := group.ParseRule(r.String())
		if d := cmp.Diff(r, back); r.Limb != "" && (err != nil || d != "") {
			t.Errorf("%q: %v %s", text, err, d)
		}
	})
}
