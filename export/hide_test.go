package export_test

import (
	"encoding/json"
	"regexp"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/export"
)

const salt = "a salt that is long enough to be one"

func hider(t testing.TB, salt string, takes ...*channels.Take) *export.Hider {
	t.Helper()
	h, err := export.NewHider([]byte(salt))
	if err != nil {
		t.Fatal(err)
	}
	for _, take := range takes {
		h.Know(take)
	}
	return h
}

func TestHideTakes(t *testing.T) {
	source := &channels.Take{ID: "ada/curtain_1", Label: "curtain", Subject: "ada", Session: "Ada-monday"}
	made := &channels.Take{ID: "ada/curtain_1~3", Label: "curtain", Subject: "ada", Session: "monday", Made: &channels.Making{Source: "ada/curtain_1", Draw: 3}}
	h := hider(t, salt, source)
	a, b := h.Take(source), h.Take(made)
	for _, c := range []struct{ what, got, like string }{
		{"subject", a.Subject, `^person-[a-z2-7]{12}$`},
		{"id", a.ID, `^take-[a-z2-7]{12}$`},
		{"session", a.Session, `^session-[a-z2-7]{12}$`},
		{"synthetic id", b.ID, `^` + a.ID + `~3$`},
		{"source", b.Made.Source, `^` + a.ID + `$`},
		{"synthetic subject", b.Subject, `^` + a.Subject + `$`},
		{"session of no name", b.Session, `^monday$`},
		{"label", a.Label, `^curtain$`},
	} {
		if !regexp.MustCompile(c.like).MatchString(c.got) {
			t.Errorf("%s %q, want one like %s", c.what, c.got, c.like)
		}
	}
	if made.Made.Source != "ada/curtain_1" || source.ID != "ada/curtain_1" {
		t.Error("the take given was changed")
	}
	if other := hider(t, salt+"!").Take(source); other.Subject == a.Subject || other.ID == a.ID {
		t.Error("another salt gives the same names")
	}
	if again := hider(t, " "+salt+"\n").Take(source); again.Subject != a.Subject {
		t.Error("white space about the salt changes names")
	}
	if none := h.Take(&channels.Take{ID: "x", Session: "s"}); none.Subject != "" || none.Session != "s" {
		t.Errorf("a take of nobody became one of %q, session %q", none.Subject, none.Session)
	}
}

func TestHideText(t *testing.T) {
	h := hider(t, salt,
		&channels.Take{ID: "1", Subject: "ada"}, &channels.Take{ID: "2", Subject: "ada lovelace"}, &channels.Take{ID: "3", Subject: "7"}, &channels.Take{ID: "4", Subject: "Zoë"})
	ada, lovelace, seven, zoe := h.Text("ada"), h.Text("ada lovelace"), h.Text("7"), h.Text("Zoë")
	file := h.KnowFile("recordings/x1.csv")
	for text, want := range map[string]string{
		"subject=ada,bo":            "subject=" + ada + ",bo",
		"ADA and adam, ada_1":       ada + " and adam, " + ada + "_1",
		"by ada lovelace.":          "by " + lovelace + ".",
		"by ada lovelaces":          "by " + ada + " lovelaces",
		"takes 7 of 17, subject 7":  "takes 7 of 17, subject 7",
		`subject "7" has 7`:         `subject "` + seven + `" has 7`,
		"ada":                       ada,
		"zoë:zoë":                   zoe + ":" + zoe,
		"adaada ada":                "adaada " + ada,
		"see recordings/x1.csv:3":   "see " + file + ":3",
		"see ./x1.csv, not x1.csv2": "see ./" + file + ", not x1.csv2",
		"":                          "",
		"\xff ada \xff":             "\xff " + ada + " \xff",
	} {
		if got := h.Text(text); got != want {
			t.Errorf("%q became %q, want %q", text, got, want)
		}
	}
}

func TestHideJSON(t *testing.T) {
	h := hider(t, salt, &channels.Take{ID: "1", Subject: "ada"}, &channels.Take{ID: "2", Subject: "7"}, &channels.Take{ID: "3", Subject: `o"neil`})
	got := string(h.JSON([]byte(`{"ada": {"takes": 7, "of": "7", "said": "a \"b\" ada\n"}, "who": ["o\"neil", "\u0061da"]}`)))
	want := `{"` + h.Text("ada") + `": {"takes": 7, "of": "` + h.Text("7") + `", "said": "a \"b\" ` + h.Text("ada") + `\n"}, "who": ["` + h.Text(`o"neil`) + `", "` + h.Text("ada") + `"]}`
	if got != want {
		t.Errorf("\n%s, want\n%s", got, want)
	}
	for _, broken := range []string{`{"ada`, `"\`, `x`, ``} {
		h.JSON([]byte(broken)) // must not panic
	}
}

// TestHideProperty: names of letters are found wherever they stand as words, in
// whatever text, and JSON stays JSON.
func TestHideProperty(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		name := rapid.StringMatching(`[a-zA-Zé][a-zA-Z0-9é_\- "\\]{0,8}`).Draw(t, "name")
		h, err := export.NewHider([]byte(salt))
		if err != nil {
			t.Fatal(err)
		}
		h.Know(&channels.Take{ID: "x", Subject: name})
		before, after := rapid.StringMatching(`([^\pL\pN]{0,5}|.{0,5} )`).Draw(t, "before"), rapid.StringMatching(`([^\pL\pN]{0,5}| .{0,5})`).Draw(t, "after")
		if at := strings.Index(strings.ToLower(before+name+after), strings.ToLower(name)); at != len(strings.ToLower(before)) ||
			strings.Contains(strings.ToLower(name[1:]+after), strings.ToLower(name)) {
			return // it stands there twice
		}
		hidden := h.Text(before + name + after)
		if want := before + h.Text(name) + after; hidden != want {
			t.Fatalf("%q, want %q", hidden, want)
		}
		data, err := json.Marshal(map[string]string{before + name + after: name})
		if err != nil {
			t.Fatal(err)
		}
		var back map[string]string
		if err := json.Unmarshal(h.JSON(data), &back); err != nil {
			t.Fatal(err)
		}
		for _, v := range back {
			if v != h.Text(name) {
				t.Fatalf("%q in JSON became %q", name, v)
			}
		}
	})
}

func TestSaltsAreChecked(t *testing.T) {
	for _, s := range []string{"", "short", "   fifteen bytes   "} {
		if _, err := export.NewHider([]byte(s)); err == nil || !strings.Contains(err.Error(), "16 random") {
			t.Errorf("salt %q: error %v", s, err)
		}
	}
	a, b := hider(t, salt), hider(t, salt+"2")
	if a.Check() != hider(t, salt).Check() || a.Check() == b.Check() {
		t.Errorf("checks %s and %s", a.Check(), b.Check())
	}
}
