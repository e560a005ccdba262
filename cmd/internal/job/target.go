package job

import (
	"cmp"
	"fmt"
	"io"
	"os"
	"path"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"unicode"

	"strandwise/channels"
	"strandwise/export/recording"
)

// stdout stands for standard output.
const stdout = "-"

// form is a format that convert writes.
type form struct {
	as      string
	endings []string
	single  bool // holds 32-bit floats
	writer  func(w io.Writer, c *recording.Contents, version string) (recording.Writer, error)
}

const bvhForm = "bvh" // which has a file for each take and so no writer of takes

// forms lists the formats. Of two of one name the first that has the ending is
// meant, or else the first.
func forms() []form {
	return []form{
		{as: "csv", endings: []string{".csv"}, writer: func(w io.Writer, c *recording.Contents, _ string) (recording.Writer, error) {
			return recording.NewCSV(w, c)
		}},
		{as: "parquet", endings: []string{".parquet", ".pq"}, single: true, writer: func(w io.Writer, c *recording.Contents, version string) (recording.Writer, error) {
			return recording.NewParquet(w, c, version)
		}},
		{as: "arrow", endings: []string{".arrow", ".feather", ".ipc"}, single: true, writer: func(w io.Writer, c *recording.Contents, version string) (recording.Writer, error) {
			return recording.NewArrowFile(w, c, version)
		}},
		{as: "arrow", endings: []string{".arrows", stdout}, single: true, writer: func(w io.Writer, c *recording.Contents, version string) (recording.Writer, error) {
			return recording.NewArrowStream(w, c, version)
		}},
		{as: bvhForm, endings: []string{".bvh"}},
	}
}

const (
	legalForms   = "csv, parquet, arrow and bvh"
	legalEndings = ".csv, .parquet (.pq), .arrow (.feather, .ipc), .arrows and .bvh"
)

// form finds the format of what is written.
func (o Conversion) form() (form, error) {
	ending := strings.ToLower(filepath.Ext(o.Out))
	if o.Out == stdout {
		ending = stdout
	}
	var found []form
	for _, f := range forms() {
		if f.as == o.As || o.As == "" && ending != stdout && slices.Contains(f.endings, ending) {
			found = append(found, f)
		}
	}
	switch {
	case len(found) > 0:
		at := max(0, slices.IndexFunc(found, func(f form) bool { return slices.Contains(f.endings, ending) }))
		return found[at], nil
	case o.As != "":
		return form{}, &UsageError{Where: "--as", Problem: fmt.Sprintf("unknown format %q; legal formats are %s", o.As, legalForms)}
	case ending == stdout:
		return form{}, &UsageError{Problem: "standard output does not tell what to write; say it by --as: " + legalForms}
	}
	return form{}, &UsageError{Where: o.Out, Problem: "its ending does not tell what to write; legal endings are " + legalEndings + ", or say it by --as: " + legalForms}
}

// target is what convert writes to.
type target struct {
	form    form
	name    string // file, or pattern of files, or stdout
	pattern bool
	replace bool
}

const legalFields = "{take}, {label}, {subject}, {session} and {split}"

var fieldPart = regexp.MustCompile(`\{[^{}]*\}|[{}]`)

// target reads what the user names to write to.
func (o Conversion) target() (*target, error) {
	if o.Out == "" {
		return nil, &UsageError{Problem: "no file is named to write to"}
	}
	f, err := o.form()
	if err != nil {
		return nil, err
	}
	t := &target{form: f, name: o.Out, replace: o.Replace}
	if f.as != bvhForm || o.Out == stdout {
		return t, nil
	}
	if isFolder(o.Out) {
		t.name = filepath.Join(o.Out, "{take}.bvh")
	}
	for _, part := range fieldPart.FindAllString(t.name, -1) {
		if _, ok := fields(&channels.Take{})[part]; !ok {
			return nil, t.fault("%q is no field; legal fields are %s", part, legalFields)
		}
		t.pattern = true
	}
	return t, nil
}

func isFolder(name string) bool {
	info, err := os.Stat(name)
	return err == nil && info.IsDir() || strings.HasSuffix(name, "/") || os.IsPathSeparator(name[len(name)-1])
}

// oneTake tells whether the target holds a single take.
func (t *target) oneTake() bool { return t.form.as == bvhForm && !t.pattern }

func (t *target) fault(format string, args ...any) error {
	return &UsageError{Where: t.name, Problem: fmt.Sprintf(format, args...)}
}

// free reports why the target cannot be written, as far as that is known before
// the takes are.
func (t *target) free() error {
	if t.name == stdout || t.pattern {
		return nil
	}
	return recording.Free(t.name, t.replace)
}

// fields returns what each field of a pattern stands for.
func fields(t *channels.Take) map[string]string {
	return map[string]string{
		"{take}": t.ID, "{label}": t.Label, "{subject}": t.Subject, "{session}": t.Session,
		"{split}": string(cmp.Or(t.Split, channels.Train)),
	}
}

// pathOf returns the file of a take. The error tells of a text that would lead
// elsewhere, or could not be read again from the path.
func (t *target) pathOf(take *channels.Take) (string, error) {
	values := fields(take)
	var err error
	name := fieldPart.ReplaceAllStringFunc(t.name, func(field string) string {
		value := values[field]
		if !fitsPath(value, field == "{take}") && err == nil {
			err = fmt.Errorf("%s: take %s: the %s %q cannot be part of a file name; put other fields into the name", take.Where, take.ID, field[1:len(field)-1], value)
		}
		return value
	})
	return name, err
}

// fitsPath tells whether a text can be part of a path: a name, or with folders
// some names joined by slashes.
func fitsPath(text string, folders bool) bool {
	return filepath.IsLocal(text) && path.Clean(text) == text && text != "." &&
		(folders || !strings.Contains(text, "/")) &&
		!strings.ContainsFunc(text, func(r rune) bool { return r == '\\' || unicode.IsControl(r) })
}
