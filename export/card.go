package export

import (
	"cmp"
	"encoding/json"
	"fmt"
	"maps"
	"slices"
	"strings"

	"strandwise/channels"
)

// cardName is the name of the page that describes the set to people.
const cardName = "CARD.md"

// Card is what a run knows of a set beside its manifest and puts into CARD.md.
// All of it is optional: a section of which nothing is known is left out.
type Card struct {
	People    []Person `json:"people,omitempty"`    // of the recorded takes, in the order they are to stand
	Hidden    bool     `json:"hidden,omitempty"`    // the names of people are replaced; see [Hider]
	Method    string   `json:"method,omitempty"`    // how synthetic takes were made, in plain words
	Variation string   `json:"variation,omitempty"` // what was measured of the recorded takes, as it is to be printed
	Gates     []Gate   `json:"gates,omitempty"`     // in the order they are applied
	Score     []string `json:"score,omitempty"`     // the verdict of the score, one plain sentence each
	Limits    []string `json:"limits,omitempty"`    // what the set cannot tell, one sentence each
}

// Person counts the recorded takes of one subject in one split.
type Person struct {
	Subject string         `json:"subject"`
	Split   channels.Split `json:"split"`
	Takes   int64          `json:"takes"`
}

// Gate is one test that a synthetic take must pass.
type Gate struct {
	Name    string `json:"name"`
	Wants   string `json:"wants,omitempty"` // of a take, in a few words
	Refused int64  `json:"refused"`         // takes that failed it
}

// write returns the card in Markdown.
func (c Card) write(m *Manifest, windows *WindowsLayout) []byte {
	b := &page{}
	b.line("# %s", plain(m.About.title()))
	b.paragraph("%s", croissantSummary(m))
	b.terms(m.About)
	b.counts(m)
	b.channels(m.Layout)
	b.files(m, windows)
	b.people(c)
	b.making(m, c)
	b.gates(c.Gates)
	b.list("Score", c.Score)
	b.list("Limits", c.Limits)
	b.list("Cautions", m.Cautions)
	b.list("Notices of the run", m.Notices)
	return []byte(b.String())
}

// page is Markdown in the making.
type page struct{ strings.Builder }

func (b *page) line(format string, args ...any)      { fmt.Fprintf(b, format+"\n", args...) }
func (b *page) paragraph(format string, args ...any) { fmt.Fprintf(b, "\n"+format+"\n", args...) }
func (b *page) heading(text string)                  { b.paragraph("## %s", text) }

// list writes a section of sentences, if there are any.
func (b *page) list(title string, texts []string) {
	if len(texts) == 0 {
		return
	}
	b.heading(title)
	b.line("")
	for _, text := range texts {
		b.line("- %s", plain(text))
	}
}

// table begins a table.
func (b *page) table(columns ...string) {
	b.line("")
	b.row(columns...)
	b.line("%s|", strings.Repeat("|---", len(columns)))
}

func (b *page) row(cells ...string) {
	for _, c := range cells {
		fmt.Fprintf(b, "| %s ", plain(c))
	}
	b.line("|")
}

// plain returns a text that Markdown shows as it is, on one line.
func plain(text string) string {
	words := strings.Fields(strings.NewReplacer(`\`, `\\`, "|", `\|`, "*", `\*`, "`", "\\`", "[", `\[`, "<", "&lt;", "&", "&amp;").Replace(text))
	for i, w := range words {
		if strings.HasPrefix(w, "_") || strings.HasSuffix(w, "_") { // within a word it means nothing
			words[i] = strings.ReplaceAll(w, "_", `\_`)
		}
	}
	return strings.Join(words, " ")
}

func (b *page) terms(a About) {
	for _, t := range []struct{ what, text string }{
		{"By", a.Creator}, {"Licence", a.Licence}, {"Published", a.Published}, {"Page", a.URL},
	} {
		if t.text != "" {
			b.paragraph("%s: %s", t.what, plain(t.text))
		}
	}
	if a.Licence == "" {
		b.paragraph("No licence is stated: ask whoever gave you this set before you pass it on.")
	}
}

// counts writes the takes of each label.
func (b *page) counts(m *Manifest) {
	of := counts{}
	for _, c := range m.Counts {
		of.add(c.Split, c.Label, c.Origin, c.Takes, c.Frames)
	}
	number := func(split channels.Split, label string, origin channels.Origin) string {
		if n := of[countKey{split, label, origin}]; n != nil {
			return fmt.Sprint(n.Takes)
		}
		return "0"
	}
	b.heading("Takes")
	b.table("label", "train, recorded", "train, synthetic", "test, recorded")
	for _, label := range m.labels() {
		b.row(label, number(channels.Train, label, channels.Recorded), number(channels.Train, label, channels.Synthetic), number(channels.Test, label, channels.Recorded))
	}
}

// channels writes one row per group.
func (b *page) channels(l Layout) {
	byName := map[string]Channel{}
	for _, c := range l.Channels {
		byName[c.Name] = c
	}
	b.heading("Channels")
	b.table("group", "moves with", "channels", "measures")
	for _, g := range l.Groups {
		b.row(g.Name, g.Limb, strings.Join(g.Channels, ", "), strings.Join(measures(g.Channels, byName), "; "))
	}
	if len(l.Groups) == 0 {
		for _, c := range l.Channels {
			b.row("", "", c.Name, strings.Join(measures([]string{c.Name}, byName), ""))
		}
	}
}

// measures lists what channels measure, each once.
func measures(names []string, byName map[string]Channel) []string {
	var out []string
	for _, name := range names {
		c := byName[name]
		text := quantityName(c.Quantity)
		if c.Unit != "" {
			text += " in " + c.Unit
		}
		if !slices.Contains(out, text) {
			out = append(out, text)
		}
	}
	return out
}

// files writes how many rows each table has, and what windows are.
func (b *page) files(m *Manifest, w *WindowsLayout) {
	rows, bytes := map[Table]int64{}, map[Table]int64{}
	for _, f := range m.Files {
		t := Table(strings.Split(f.Path, "/")[0])
		rows[t] += f.Rows
		bytes[t] += f.Bytes
	}
	b.heading("Tables")
	b.table("table", "holds", "rows", "MB")
	for _, t := range m.tables() {
		b.row(string(t), tableText(t), fmt.Sprint(rows[t]), fmt.Sprintf("%.1f", float64(bytes[t])/1e6))
	}
	b.paragraph("Parquet files lie under %s; units, groups, plan and seed stand in their metadata and in manifest.json.", "`TABLE/split=…/`")
	if w == nil {
		return
	}
	b.paragraph("A window has %d frames and the next begins %d frames later; frames left at the end of a take: %s. Its label is %s.", w.Length, w.Hop, plain(string(w.Padding)), plain(w.Label))
	if len(w.Scales) > 0 {
		var saturated int64
		for _, s := range w.Scales {
			saturated += s.Saturated
		}
		b.paragraph("Values of windows are 16-bit numbers, to be multiplied by the scale of their channel; %d of them were beyond the range and stand at its end.", saturated)
	}
}

func (b *page) people(c Card) {
	if len(c.People) == 0 {
		return
	}
	b.heading("People")
	if c.Hidden {
		b.paragraph("Names are replaced by keyed hashes. Whoever has the key can tell people again, and motion itself identifies people.")
	}
	b.table("subject", "split", "recorded takes")
	for _, p := range c.People {
		b.row(cmp.Or(p.Subject, "(not stated)"), string(p.Split), fmt.Sprint(p.Takes))
	}
}

func (b *page) making(m *Manifest, c Card) {
	b.heading("How it was made")
	if c.Method != "" {
		b.paragraph("%s", plain(c.Method))
	}
	var bytes int64
	for _, r := range m.Recordings {
		bytes += r.Bytes
	}
	b.paragraph("Made by strandwise %s from %d files of recordings (%.1f MB) with seed %d. The plan, and the SHA-256 of every recording, stand in manifest.json; the same recordings, plan and version give the same bytes.",
		plain(m.ProgramVersion), len(m.Recordings), float64(bytes)/1e6, m.Seed)
	if repairs := repairTexts(m.Repairs); len(repairs) > 0 {
		b.paragraph("Repaired in the recordings: %s.", plain(strings.Join(repairs, ", ")))
	}
	if text := strings.TrimRight(c.Variation, "\n"); text != "" {
		b.paragraph("How takes of one label were found to differ:")
		b.paragraph("```\n%s\n```", strings.ReplaceAll(text, "```", "'''"))
	}
}

// repairTexts lists the counts of a JSON object that are not 0, by name.
func repairTexts(repairs json.RawMessage) []string {
	counts := map[string]json.Number{}
	if json.Unmarshal(repairs, &counts) != nil {
		return nil
	}
	var out []string
	for _, name := range slices.Sorted(maps.Keys(counts)) {
		if n, err := counts[name].Float64(); err == nil && n != 0 {
			out = append(out, fmt.Sprintf("%s %s", strings.ReplaceAll(name, "_", " "), counts[name]))
		}
	}
	return out
}

func (b *page) gates(gates []Gate) {
	if len(gates) == 0 {
		return
	}
	b.heading("Gates")
	b.paragraph("A synthetic take that fails one of these is refused and drawn again.")
	b.table("gate", "wants", "refused")
	for _, g := range gates {
		b.row(g.Name, g.Wants, fmt.Sprint(g.Refused))
	}
}
