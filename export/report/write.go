package report

import (
	"crypto/sha256"
	_ "embed"
	"encoding/base64"
	"fmt"
	"html/template"
	"io"
	"strings"
)

//go:embed page.html
var pageSource string

//go:embed style.css
var style string

// Write writes the page. The same input gives the same bytes. It fails only
// where w does.
func Write(w io.Writer, in Input) error {
	t, err := template.New("page").Parse(pageSource)
	if err != nil {
		panic("report: the page's template is broken: " + err.Error())
	}
	buffered := &failing{w: w}
	err = t.Execute(buffered, newPage(in))
	if buffered.err != nil {
		return fmt.Errorf("write the report: %w", buffered.err)
	}
	if err != nil {
		panic("report: the page's template does not fit: " + err.Error())
	}
	return nil
}

// failing remembers the error of a writer, to tell it from one of the template.
type failing struct {
	w   io.Writer
	err error
}

func (f *failing) Write(p []byte) (int, error) {
	n, err := f.w.Write(p)
	if err != nil {
		f.err = err
	}
	return n, err
}

// page is all that the template shows.
type page struct {
	Title    name
	Style    template.CSS
	Policy   string // Content-Security-Policy
	Verdict  string
	Sections []chapter
	Cautions []string
	Notices  []string

	Came      came
	Variation variation
	Beside    beside
	Coupling  coupling
	Gates     gates
	Scored    scored
	Origin    origin
}

// chapter is an entry of the list of contents.
type chapter struct{ ID, Title string }

// chapters lists the sections in their order.
func chapters() []chapter {
	return []chapter{
		{"verdict", "The verdict"},
		{"cautions", "Before you use this set"},
		{"came", "What went in"},
		{"variation", "How takes vary"},
		{"beside", "Recorded and synthetic, side by side"},
		{"coupling", "How limbs keep time together"},
		{"gates", "What draws had to pass"},
		{"score", "The score"},
		{"origin", "Where this came from, and how to repeat it"},
	}
}

func newPage(in Input) page {
	b := newBuilder(in)
	p := page{
		Title: named(in.Title, "A set of takes"), Style: template.CSS(style), Policy: policy(style),
		Verdict: visible(in.Verdict), Sections: chapters(), Cautions: allVisible(in.Cautions), Notices: allVisible(in.Notices),
	}
	if strings.TrimSpace(p.Verdict) == "" {
		p.Verdict = missing("There is no verdict, since nothing was scored", in.Absent.Score)
	}
	// In this order, by which figures are numbered.
	p.Came = b.came()
	p.Variation = b.variation()
	p.Beside = b.beside()
	p.Coupling = b.coupling()
	p.Gates = b.gates()
	p.Scored = b.scored()
	p.Origin = b.origin()
	return p
}

// policy allows the page its one style sheet and nothing else. The empty icon
// keeps browsers from asking for one.
func policy(style string) string {
	sum := sha256.Sum256([]byte(style))
	return "default-src 'none'; style-src 'sha256-" + base64.StdEncoding.EncodeToString(sum[:]) + "'; img-src data:; base-uri 'none'; form-action 'none'"
}

// builder makes the parts of a page, and numbers its figures and labels.
type builder struct {
	in     Input
	labels []string       // every label of the page, in order
	places map[string]int // of the labels
	shown  map[string]bool
	count  int // figures so far
}

func newBuilder(in Input) *builder {
	b := &builder{in: in, places: map[string]int{}, shown: map[string]bool{}}
	know := func(label string) {
		if _, ok := b.places[label]; !ok {
			b.places[label] = len(b.labels)
			b.labels = append(b.labels, label)
		}
	}
	for _, l := range in.Labels {
		know(l.Name)
	}
	for _, c := range in.Counts {
		know(c.Label)
	}
	for _, l := range in.drawn() {
		b.shown[l.Name] = true
	}
	return b
}

// number gives a figure its number.
func (b *builder) number(f *figure) *figure {
	if f != nil {
		b.count++
		f.Number = b.count
	}
	return f
}

// linked is a cell with a label that leads to the section on it, if there is
// one.
func (b *builder) linked(label string) cell {
	c := nameCell(label, "no label")
	if b.shown[label] {
		c.Link = b.id(label)
	}
	return c
}

// id returns the id of the section on a label.
func (b *builder) id(label string) string { return fmt.Sprint("label-", b.places[label]+1) }

// missing says that there is nothing, and why where that is known.
func missing(what, why string) string {
	if why = strings.TrimSpace(why); why == "" {
		return what + "."
	}
	return what + ": " + strings.TrimSuffix(why, ".") + "."
}
