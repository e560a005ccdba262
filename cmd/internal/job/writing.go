package job

import (
	"cmp"
	"encoding/json"
	"fmt"
	"os"
	"slices"
	"strings"

	"strandwise/channels"
	"strandwise/export"
	"strandwise/export/pages"
)

// writing is how takes are written: what the plan says of it, and what the first
// pass over the recordings adds.
type writing struct {
	plan    *Plan
	options export.Options
	hider   *export.Hider // nil when names stay
	ranges  export.Ranges // of the takes that train
	people  map[export.Person]int64
}

// writing checks every key that says how to write.
func (p *Plan) writing() (*writing, error) {
	w := &writing{plan: p, people: map[export.Person]int64{}}
	for _, read := range []func() error{w.readTables, w.readFiles, w.readWindows, w.readAbout, w.readSalt} {
		if err := read(); err != nil {
			return nil, err
		}
	}
	return w, nil
}

func (w *writing) readTables() error {
	for _, name := range w.plan.Tables {
		t, err := export.ParseTable(name)
		if err != nil {
			return w.plan.fault("tables", "%v", err)
		}
		w.options.Tables = append(w.options.Tables, t)
	}
	return nil
}

func (w *writing) readFiles() error {
	p := w.plan
	by, err := pages.ParseCompression(p.Compression)
	if err != nil {
		return p.fault("compression", "%v", err)
	}
	if p.RowGroupBytes < 1 || p.RowGroupBytes > export.MaxRowGroupBytes {
		return p.fault("row_group_bytes", "%d: legal are 1 to %d", p.RowGroupBytes, export.MaxRowGroupBytes)
	}
	if p.FileBytes < 1 {
		return p.fault("file_bytes", "%d: legal are 1 and more", p.FileBytes)
	}
	w.options.Compression, w.options.RowGroupBytes, w.options.FileBytes = by, p.RowGroupBytes, p.FileBytes
	return nil
}

func (w *writing) readWindows() error {
	p := w.plan
	asked := slices.Contains(w.options.Tables, export.Windows)
	for _, key := range []string{"window_length", "window_hop", "window_padding", "window_int16"} {
		if p.given[key] && !asked {
			return p.fault(key, "windows is not among the tables; add it to --tables, as in --tables takes,windows")
		}
	}
	for key, text := range map[string]string{"window_length": p.WindowLength, "window_hop": p.WindowHop} {
		if _, _, err := export.ParseSpan(text); err != nil && text != "" {
			return p.fault(key, "%v", err)
		}
	}
	var err error
	if w.options.Windowing.Padding, err = export.ParsePadding(p.WindowPadding); err != nil {
		return p.fault("window_padding", "%v", err)
	}
	return nil
}

func (w *writing) readAbout() error {
	p := w.plan
	w.options.About = export.About{Title: p.Title, Creator: p.Creator, Licence: p.Licence, URL: p.URL, Published: p.Published}
	for key, one := range map[string]export.About{"licence": {Licence: p.Licence}, "url": {URL: p.URL}, "published": {Published: p.Published}} {
		if err := one.Validate(); err != nil {
			return p.fault(key, "%v", err)
		}
	}
	return nil
}

func (w *writing) readSalt() error {
	p := w.plan
	switch {
	case !p.HideSubjects && p.SubjectSalt != "":
		return p.fault("subject_salt", "it is only used to hide people; add --hide-subjects")
	case !p.HideSubjects:
		return nil
	case p.SubjectSalt == "":
		return p.fault("hide_subjects", "names are hidden under a secret of yours, without which a list of names could be tried; "+
			"put 16 random bytes or more into a file, keep it, and name it by --subject-salt")
	}
	salt, err := os.ReadFile(p.SubjectSalt)
	if err != nil {
		return p.fault("subject_salt", "%v", err)
	}
	if w.hider, err = export.NewHider(salt); err != nil {
		return p.fault("subject_salt", "%s: %v", p.SubjectSalt, err)
	}
	return nil
}

// noted passes recorded takes on and takes note of them.
func (w *writing) noted(takes channels.Stream) channels.Stream {
	return func(yield func(*channels.Take, error) bool) {
		for t, err := range takes {
			if err == nil {
				w.note(t)
			}
			if !yield(t, err) {
				return
			}
		}
	}
}

func (w *writing) note(t *channels.Take) {
	split := cmp.Or(t.Split, channels.Train)
	if split == channels.Train {
		w.ranges.Note(t)
	}
	w.people[export.Person{Subject: t.Subject, Split: split}]++
	if w.hider != nil {
		w.hider.Know(t)
	}
}

// complete adds what is known after the first pass to the options of a set: how
// windows are cut, and names hidden in the plan and the recordings. settings is
// the plan as it was carried out.
func (w *writing) complete(o export.Options, settings map[string]any, l *channels.Layout) (export.Options, error) {
	own := w.options
	o.Tables, o.Compression, o.RowGroupBytes, o.FileBytes, o.About = own.Tables, own.Compression, own.RowGroupBytes, own.FileBytes, own.About
	var err error
	if o.Windowing, err = w.windowing(l); err != nil {
		return o, err
	}
	if w.hider != nil {
		settings["subject_salt"] = w.hider.Check()
		for i, r := range o.Recordings {
			o.Recordings[i].Path = w.hider.KnowFile(r.Path)
		}
	}
	text, err := json.Marshal(settings)
	if err != nil {
		panic("job: the plan is not JSON: " + err.Error()) // all its fields are plain
	}
	o.Plan = w.json(text)
	return o, nil
}

func (w *writing) windowing(l *channels.Layout) (export.Windowing, error) {
	out := w.options.Windowing
	if !slices.Contains(w.options.Tables, export.Windows) {
		return out, nil
	}
	for _, span := range []struct {
		key, text string
		to        *int
	}{{"window_length", w.plan.WindowLength, &out.Length}, {"window_hop", w.plan.WindowHop, &out.Hop}} {
		if span.text == "" {
			continue
		}
		frames, err := w.ranges.Frames(span.text)
		if err != nil {
			return out, w.plan.fault(span.key, "%v", err)
		}
		*span.to = frames
	}
	if w.plan.WindowInt16 {
		out.Scale = w.ranges.Scale(l)
	}
	return out, nil
}

// take returns a take as it is to be written.
func (w *writing) take(t *channels.Take) *channels.Take {
	if w.hider == nil {
		return t
	}
	return w.hider.Take(t)
}

// text returns a text as it is to be written.
func (w *writing) text(s string) string {
	if w.hider == nil {
		return s
	}
	return w.hider.Text(s)
}

// json returns a JSON value as it is to be written.
func (w *writing) json(text []byte) []byte {
	if w.hider == nil {
		return text
	}
	return w.hider.JSON(text)
}

// texts returns texts as they are to be written.
func (w *writing) texts(list []string) []string {
	var out []string
	for _, s := range list {
		out = append(out, w.text(s))
	}
	return out
}

// card returns what the first pass tells of a set; the caller adds the rest.
func (w *writing) card() export.Card {
	c := export.Card{Hidden: w.hider != nil}
	trains := map[string]bool{}
	for person, takes := range w.people {
		person.Takes = takes
		if person.Split == channels.Train && person.Subject != "" {
			trains[person.Subject] = true
		}
		if person.Subject != "" {
			person.Subject = w.text(person.Subject)
		}
		c.People = append(c.People, person)
	}
	slices.SortFunc(c.People, func(a, b export.Person) int {
		return cmp.Or(cmp.Compare(a.Subject, b.Subject), cmp.Compare(a.Split, b.Split))
	})
	switch n := len(trains); n {
	case 0:
		c.Limits = append(c.Limits, "The recordings do not say who performed them, so nothing tells how the set serves other people.")
	case 1:
		c.Limits = append(c.Limits, "All takes that train are by one person: nothing in the set tells how others move.")
	default:
		c.Limits = append(c.Limits, fmt.Sprintf("The takes that train are by %d people: nothing in the set tells how people unlike them move.", n))
	}
	return c
}

// missing is a notice of what the Croissant standard wants of a published set and
// nobody stated; empty when nothing is missing.
func (w *writing) missing() string {
	keys := w.options.About.Missing()
	if len(keys) == 0 {
		return ""
	}
	return "croissant.json lacks what it needs before the set is published: --" + strings.Join(keys, ", --")
}
