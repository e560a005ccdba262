package report_test

import (
	"bytes"
	"crypto/sha256"
	"encoding/base64"
	"encoding/json"
	"errors"
	"flag"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"golang.org/x/net/html"

	"strandwise/channels"
	"strandwise/export/report"
)

var update = flag.Bool("update", false, "write the golden files anew")

// The browser tests open these pages.
func TestWrite(t *testing.T) {
	for _, c := range []struct {
		name string
		in   report.Input
	}{
		{"whole", whole(t, "bow", `<b>"wave"</b>`)},
		{"bare", report.Input{Absent: report.Absent{Score: "the recordings hold a single label"}}},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := written(t, c.in)
			path := filepath.Join("testdata", c.name+".html")
			if *update {
				if err := os.WriteFile(path, []byte(got), 0o666); err != nil {
					t.Fatal(err)
				}
			}
			want, err := os.ReadFile(path)
			if err != nil {
				t.Fatal(err)
			}
			if d := cmp.Diff(strings.Split(string(want), "\n"), strings.Split(got, "\n")); d != "" {
				t.Errorf("the page changed; -update writes it anew (- before, + now):\n%s", d)
			}
		})
	}
}

// Every section stands on every page, in order.
func TestSections(t *testing.T) {
	want := []string{"verdict", "cautions", "came", "variation", "beside", "coupling", "gates", "score", "origin"}
	for _, in := range []report.Input{whole(t, "bow", "wave"), {}} {
		var got []string
		for _, n := range parsed(t, written(t, in)) {
			if id, _ := attribute(n, "id"); n.Data == "section" && !strings.HasPrefix(id, "label-") {
				got = append(got, id)
			}
		}
		if d := cmp.Diff(want, got); d != "" {
			t.Error(d)
		}
	}
}

// hostile are texts that must show as text.
func hostile() []string {
	return []string{
		`<script>alert(1)</script>`, `"><img src=x onerror=alert(1)>`, `'--><svg onload=alert(1)>`, `</style><script>`, "{{.Title}}", `javascript:alert(1)`,
		"\u202eright to left\u202c", "\u2067isolate", "שלום", strings.Repeat("é", 10_000), "e" + strings.Repeat("\u0301", 10_000), "\x00\x1b[31m", "\xff\xfe", "&lt;b&gt;", "a\nb", " ", "",
	}
}

// hostileInput puts them wherever a text is not ours.
func hostileInput(t testing.TB) report.Input {
	texts := hostile()
	in := whole(t, texts...)
	at := func(i int) string { return texts[i%len(texts)] }
	in.Title = at(0)
	layout := *twoWrists(t)
	layout.Channels, layout.Groups = append([]channels.Channel{}, layout.Channels...), append([]channels.Group{}, layout.Groups...)
	for i := range layout.Channels {
		layout.Channels[i].Name, layout.Channels[i].TrackedPoint, layout.Channels[i].Component, layout.Channels[i].Unit = at(i), at(i+1), at(i+2), at(i+3)
	}
	for i := range layout.Groups {
		layout.Groups[i].Name = at(i + 4)
	}
	for _, l := range in.Labels {
		for _, take := range append(l.Recorded, l.Synthetic...) {
			take.Layout = &layout
		}
	}
	for i := range in.Counts {
		in.Counts[i].Subject = at(i)
	}
	for i := range in.Coupling {
		in.Coupling[i].A, in.Coupling[i].B = at(i), at(i+1)
	}
	for i := range in.Variation {
		in.Variation[i].Of, in.Variation[i].Unit = at(i), at(i+1)
	}
	in.Verdict, in.Cautions, in.Notices, in.Making = at(1), texts, texts, texts
	in.Provenance.Command, in.Provenance.Plan, in.Provenance.Program = at(0), strings.Join(texts, "\n"), at(2)
	for _, text := range texts {
		in.Provenance.Recordings = append(in.Provenance.Recordings, report.File{Path: text})
	}
	return in
}

func TestHostileText(t *testing.T) {
	page := written(t, hostileInput(t))
	keep(t, "hostile.html", page)
	var text strings.Builder
	for _, n := range parsed(t, page) {
		switch n.Data {
		case "script", "img", "iframe", "b":
			if n.Data != "b" || !strings.HasPrefix(content(n), "Figure ") {
				t.Errorf("the page holds a <%s>", n.Data)
			}
		case "body":
			text.WriteString(content(n))
		case "style":
			if n.Parent.Data != "head" {
				t.Error("a text became a style sheet")
			}
		}
		for _, a := range n.Attr {
			if strings.HasPrefix(a.Key, "on") || a.Key == "style" {
				t.Errorf("<%s> has %s=%q", n.Data, a.Key, a.Val)
			}
		}
	}
	for _, want := range []string{`<script>alert(1)</script>`, `"><img src=x onerror=alert(1)>`, "שלום", "{{.Title}}", strings.Repeat("é", 10_000)} {
		if !strings.Contains(text.String(), want) {
			t.Errorf("%.40q does not show", want)
		}
	}
	if n := len(page); n > 3_000_000 {
		t.Errorf("the page has %d bytes: long texts were repeated", n)
	}
}

// Names with a direction of writing of their own stand in elements that keep it
// in.
func TestNamesAreIsolated(t *testing.T) {
	const label = "\u202eevaw"
	in := whole(t, label, "bow")
	found := 0
	for _, n := range parsed(t, written(t, in)) {
		for c := range n.ChildNodes() {
			if c.Type != html.TextNode || !strings.Contains(c.Data, label) {
				continue
			}
			found++
			if n.Data != "bdi" && n.Data != "text" {
				t.Errorf("the label stands in a <%s>", n.Data)
			}
		}
	}
	if found < 5 {
		t.Errorf("the label was found %d times", found)
	}
}

// The page loads nothing and allows nothing but its own style sheet.
func TestSelfContained(t *testing.T) {
	page := written(t, whole(t, "bow", "wave"))
	policy, sheet := "", ""
	for _, n := range parsed(t, page) {
		if v, _ := attribute(n, "http-equiv"); v == "Content-Security-Policy" {
			policy, _ = attribute(n, "content")
		}
		if n.Data == "style" {
			sheet = content(n)
		}
		for _, key := range []string{"href", "src", "action", "data"} {
			if v, ok := attribute(n, key); ok && !strings.HasPrefix(v, "#") && v != "data:," {
				t.Errorf("<%s> has %s=%q", n.Data, key, v)
			}
		}
	}
	sum := sha256.Sum256([]byte(sheet))
	for _, want := range []string{"default-src 'none'", "style-src 'sha256-" + base64.StdEncoding.EncodeToString(sum[:]) + "'"} {
		if !strings.Contains(policy, want) {
			t.Errorf("the policy %q lacks %s", policy, want)
		}
	}
	for _, not := range []string{"unsafe-inline", "script-src"} {
		if strings.Contains(policy, not) {
			t.Errorf("the policy says %s", not)
		}
	}
	if strings.Contains(sheet, "url(") || strings.Contains(sheet, "@import") {
		t.Error("the style sheet loads something")
	}
}

// Headings do not skip a level, ids are given once, and what is referred to is
// there.
func TestStructure(t *testing.T) {
	for _, in := range []report.Input{whole(t, "bow", "wave", "nod"), {}, hostileInput(t)} {
		level, ids, wanted := 0, map[string]bool{}, []string{}
		for _, n := range parsed(t, written(t, in)) {
			if len(n.Data) == 2 && n.Data[0] == 'h' && n.Data[1] >= '1' && n.Data[1] <= '6' {
				h, _ := strconv.Atoi(n.Data[1:])
				if h > level+1 {
					t.Errorf("h%d after h%d: %.40q", h, level, content(n))
				}
				if strings.TrimSpace(content(n)) == "" {
					t.Errorf("an empty h%d", h)
				}
				level = h
			}
			if id, ok := attribute(n, "id"); ok {
				if ids[id] {
					t.Errorf("id %s is given twice", id)
				}
				ids[id] = true
			}
			if v, ok := attribute(n, "href"); ok && strings.HasPrefix(v, "#") {
				wanted = append(wanted, v[1:])
			}
			if v, ok := attribute(n, "aria-labelledby"); ok {
				wanted = append(wanted, v)
			}
		}
		for _, id := range wanted {
			if !ids[id] {
				t.Errorf("#%s is not there", id)
			}
		}
	}
}

// Every figure has a caption that says what to see, a text alternative for each
// drawing, and its numbers in a table.
func TestFigures(t *testing.T) {
	figures := 0
	for _, f := range parsed(t, written(t, whole(t, "bow", "wave"))) {
		if f.Data != "figure" {
			continue
		}
		figures++
		caption, drawings, rows := "", 0, 0
		for n := range f.Descendants() {
			switch n.Data {
			case "figcaption":
				caption = content(n)
			case "svg":
				hidden, _ := attribute(n, "aria-hidden")
				role, _ := attribute(n, "role")
				name, _ := attribute(n, "aria-label")
				if hidden != "true" {
					drawings++
					if role != "img" || len(name) < 10 {
						t.Errorf("a drawing with role %q is called %q", role, name)
					}
				}
			case "tr":
				rows++
			}
		}
		if len(caption) < 60 {
			t.Errorf("a caption says only %q", caption)
		}
		if rows < 2 {
			t.Errorf("%.30s has no table of numbers", caption)
		}
		if drawings == 0 && !strings.Contains(caption, "ρ says") {
			t.Errorf("%.30s draws nothing", caption)
		}
	}
	if figures < 15 {
		t.Errorf("%d figures", figures)
	}
}

// Numbers that are not finite, empty takes and odd shapes never break the page.
func TestOddInput(t *testing.T) {
	nan := whole(t, "bow", "wave")
	for _, l := range nan.Labels {
		for _, take := range append(l.Recorded, l.Synthetic...) {
			for i := range take.Data {
				if i%3 == 0 {
					take.Data[i] = []float64{notANumber, inf, -inf}[i/3%3]
				}
			}
		}
	}
	nan.Labels[0].RecordedDistances[0], nan.Labels[1].Wasserstein = notANumber, inf
	nan.Variation[0].Measured, nan.Coupling[0].Rho, nan.Score.Results[0].Error = notANumber, inf, notANumber

	one := &channels.Take{ID: "one", Label: "bow", Layout: &channels.Layout{Channels: []channels.Channel{{}}}, Time: []float64{5}, Data: []float64{1}}
	odd := report.Input{Labels: []report.Label{{}, {Name: "bow", Recorded: []*channels.Take{one}}, {Name: "wave", Synthetic: []*channels.Take{one}}}}
	odd.Labels[0].Name = "empty"
	odd.Gates.List = []report.Gate{{}}
	odd.Coupling, odd.Variation, odd.Harm = []report.Pair{{}}, []report.Size{{}}, &report.Harm{Labels: []report.LabelHarm{{}}}
	odd.Score = &report.Score{Results: []report.Result{{Method: "none"}, {Method: "recipe", Confusion: [][]int{{1}}}}, LabelNames: []string{"bow", "wave"}}
	alone := report.Input{Score: &report.Score{Results: []report.Result{{Method: "none", Distance: "euclidean-dependent"}}}}

	for name, in := range map[string]report.Input{"not finite": nan, "odd": odd, "recorded alone": alone} {
		t.Run(name, func(t *testing.T) {
			if page := written(t, in); strings.Contains(page, "NaN") || strings.Contains(page, "Inf") {
				i := max(strings.Index(page, "NaN"), strings.Index(page, "Inf"))
				t.Errorf("the page shows a number that is none: …%s…", page[i-200:i+50])
			}
		})
	}
}

// With many labels those are drawn whose synthetic takes are least alike.
func TestManyLabels(t *testing.T) {
	var in report.Input
	one := theatre(t, []string{"bow"}, 1, 1, 12)
	for i := range 100 {
		in.Labels = append(in.Labels, report.Label{Name: "label " + strconv.Itoa(i), Recorded: one[:1], Synthetic: one[1:],
			RecordedDistances: []float64{1}, SyntheticDistances: []float64{1}, Wasserstein: float64(i)})
	}
	page := written(t, in)
	if n := strings.Count(page, `class="label"`); n != 48 {
		t.Errorf("%d labels are drawn, want 48", n)
	}
	for name, want := range map[string]bool{"label 99": true, "label 52": true, "label 51": false} {
		if strings.Contains(page, "<h3><span class=\"no\">"+strconv.Itoa(atoi(name)+1)+"</span> <bdi>"+name) != want {
			t.Errorf("%s: drawn is not %t", name, want)
		}
	}
	if !strings.Contains(page, "Of 100 labels those 48 are drawn") {
		t.Error("the page does not say which labels it draws")
	}
}

func atoi(name string) int {
	n, _ := strconv.Atoi(strings.TrimPrefix(name, "label "))
	return n
}

// A body of many groups is drawn in part, and the page says so.
func TestManyGroups(t *testing.T) {
	l := &channels.Layout{}
	take := &channels.Take{ID: "a", Label: "walk", Layout: l, Time: []float64{0, 1, 2}}
	for g := range 20 {
		group := channels.Group{Name: "joint" + strconv.Itoa(g)}
		for range 8 {
			group.Channels = append(group.Channels, len(l.Channels))
			l.Channels = append(l.Channels, channels.Channel{Name: "c" + strconv.Itoa(len(l.Channels))})
		}
		l.Groups = append(l.Groups, group)
	}
	for i := range take.Time {
		for c := range l.Channels {
			take.Data = append(take.Data, float64(i*c))
		}
	}
	page := written(t, report.Input{Labels: []report.Label{{Name: "walk", Recorded: []*channels.Take{take}}}})
	for _, want := range []string{"the 8 channel groups that move most; 12 others are not", "the 6 channels that move most; 2 others are not", "joint19", "joint12"} {
		if !strings.Contains(page, want) {
			t.Errorf("the page lacks %q", want)
		}
	}
	if strings.Contains(page, "joint11") {
		t.Error("a group that moves less is drawn")
	}
}

// A score file of the program reads into a Score.
func TestScoreFile(t *testing.T) {
	text, err := os.ReadFile(filepath.Join("..", "..", "classify", "testdata", "report.json"))
	if err != nil {
		t.Fatal(err)
	}
	var s report.Score
	if err := json.Unmarshal(text, &s); err != nil {
		t.Fatal(err)
	}
	var again map[string]any
	if err := json.Unmarshal(text, &again); err != nil {
		t.Fatal(err)
	}
	if len(s.Results) != len(again["results"].([]any)) || s.Verdict != again["verdict"] || s.Results[1].P == nil || len(s.Results[1].PerLabel) == 0 {
		t.Errorf("read %+v", s)
	}
	page := written(t, report.Input{Score: &s})
	for _, want := range []string{"Gain or harm", "What was taken for what", "Movements that are no gesture", "dtw-dependent"} {
		if !strings.Contains(page, want) {
			t.Errorf("the page lacks %q", want)
		}
	}
}

type full struct{}

var errFull = errors.New("no space left")

func (full) Write([]byte) (int, error) { return 0, errFull }

func TestWriteFails(t *testing.T) {
	if err := report.Write(full{}, report.Input{}); !errors.Is(err, errFull) {
		t.Errorf("got %v, want %v", err, errFull)
	}
}

func TestWriteIsRepeatable(t *testing.T) {
	var a, b bytes.Buffer
	in := whole(t, "bow", "wave")
	if err := errors.Join(report.Write(&a, in), report.Write(&b, in)); err != nil || !bytes.Equal(a.Bytes(), b.Bytes()) {
		t.Errorf("two pages of one input differ (%v)", err)
	}
}
