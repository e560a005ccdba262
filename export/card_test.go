package export_test

import (
	"strings"
	"testing"

	"strandwise/channels"
	"strandwise/export"
)

// card writes a small set with this card and returns CARD.md.
func card(t *testing.T, o export.Options, c *export.Card) string {
	t.Helper()
	l := wristband(t)
	dir := t.TempDir()
	w, err := export.Create(dir, l, o)
	if c != nil {
		w.Describe(*c)
	}
	writeTo(t, w, err, troupe(l, 3))
	return tree(t, dir)["CARD.md"]
}

func TestCardOfAllThereIs(t *testing.T) {
	o := both()
	o.About = told
	o.Tables = export.AllTables()
	o.Repairs = []byte(`{"recordings":4,"gaps_filled":2,"splits":0}`)
	o.Windowing = export.Windowing{Length: 10, Hop: 5, Scale: []float64{1e-6, 1, 1, 1, 1, 1}}
	text := card(t, o, &export.Card{
		People: []export.Person{{Subject: "ada", Split: channels.Train, Takes: 2}, {Split: channels.Test, Takes: 1}},
		Hidden: true, Method: "By the combined method.", Variation: "label  timing\ncurtain  0.2\n",
		Gates:  []export.Gate{{Name: "finite", Wants: "numbers", Refused: 0}, {Name: "near-copy", Wants: "news | not copies", Refused: 17}},
		Score:  []string{"Synthetic takes help: 12 errors of 40 became 7."},
		Limits: []string{"Two people were recorded."},
	})
	for _, want := range []string{
		"# Cues of the Lantern Street theatre\n",
		"By: Lantern Street Puppet Theatre\n",
		"Licence: https://spdx.org/licenses/CC-BY-4.0.html\n",
		"| curtain | 2 | 6 | 1 |\n",
		"| spotlight | 2 | 6 | 1 |\n",
		"| left_wrist.accel | left_wrist | left_wrist.accel.x, left_wrist.accel.y, left_wrist.accel.z | acceleration in m/s^2 |\n",
		"| takes | One row per take, recorded and synthetic. | 18 |",
		"A window has 10 frames and the next begins 5 frames later",
		"of them were beyond the range",
		"| ada | train | 2 |\n| (not stated) | test | 1 |\n",
		"Names are replaced by keyed hashes.",
		"By the combined method.\n",
		"with seed 42.",
		"Repaired in the recordings: gaps filled 2, recordings 4.\n",
		"```\nlabel  timing\ncurtain  0.2\n```\n",
		"| near-copy | news \\| not copies | 17 |\n",
		"- Synthetic takes help: 12 errors of 40 became 7.\n",
		"- Two people were recorded.\n",
		"## Cautions\n",
		"- invented for a test\n",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("the card lacks %q", want)
		}
	}
	if t.Failed() {
		t.Log(text)
	}
}

// TestCardOfLittle: sections of which nothing is known are left out.
func TestCardOfLittle(t *testing.T) {
	text := card(t, export.Options{}, nil)
	for _, absent := range []string{"## People", "## Gates", "## Score", "## Limits", "Repaired", "window", "Licence:", "keyed hashes"} {
		if strings.Contains(text, absent) {
			t.Errorf("the card speaks of %q", absent)
		}
	}
	for _, want := range []string{"# A set of gesture takes\n", "No licence is stated", "## Takes", "## Cautions"} {
		if !strings.Contains(text, want) {
			t.Errorf("the card lacks %q", want)
		}
	}
}

// TestCardShowsTextsAsTheyAre: what Markdown would read as marks is escaped.
func TestCardShowsTextsAsTheyAre(t *testing.T) {
	l := &channels.Layout{Channels: []channels.Channel{{Name: "x"}}}
	dir := t.TempDir()
	write(t, dir, l, export.Options{}, []*channels.Take{{ID: "a", Label: "a|b\n*c* <d> _e_ f_g [h]", Layout: l, Time: []float64{0, 1}, Data: []float64{1, 2}}})
	if text, want := tree(t, dir)["CARD.md"], `| a\|b \*c\* &lt;d> \_e\_ f_g \[h] | 1 | 0 | 0 |`; !strings.Contains(text, want) {
		t.Errorf("the card lacks %q:\n%s", want, text)
	}
}
