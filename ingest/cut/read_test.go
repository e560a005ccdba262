package cut_test

import (
	"errors"
	"fmt"
	"io"
	"math"
	"strings"
	"testing"
	"testing/iotest"

	"github.com/google/go-cmp/cmp"

	"strandwise/ingest/cut"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

func TestRead(t *testing.T) {
	bow := raw.Annotation{Start: 1, End: 2.5, Label: "bow", Subject: "ada", Line: 2}
	for _, c := range []struct {
		name, text string
		want       cut.Annotations
	}{
		{"plain", "start,end,label,subject\n1,2.5,bow,ada\n", cut.Annotations{List: []raw.Annotation{bow}}},
		{"no newline at the end", "start,end,label,subject\n1,2.5,bow,ada", cut.Annotations{List: []raw.Annotation{bow}}},
		{"mark, capitals, spaces, order", "\ufeffSubject, Label ,END,start\nada, bow ,2.5,1\n", cut.Annotations{List: []raw.Annotation{bow}}},
		{"semicolons and decimal commas", "start;end;label;subject\r\n1,0;2,5;bow;ada\r\n", cut.Annotations{List: []raw.Annotation{bow}}},
		{"tabs", "start\tend\tlabel\tsubject\n1\t2.5\tbow\tada\n", cut.Annotations{List: []raw.Annotation{bow}}},
		{"no subject, another column", "start,end,label,note\n1,2.5,bow,good one\n", cut.Annotations{List: []raw.Annotation{{Start: 1, End: 2.5, Label: "bow", Line: 2}}}},
		{"comments, blank lines and quotes", "# cues; by hand\n\nstart,end,label,subject\n# first\n1,2.5,\"bow, deep\",ada\n", cut.Annotations{List: []raw.Annotation{{Start: 1, End: 2.5, Label: "bow, deep", Subject: "ada", Line: 5}}}},
		// date -u -d '2026-01-31 12:00:00' +%s gives 1769860800
		{"time stamps", "start,end,label\n2026-01-31T12:00:00Z,2026-01-31 14:00:02.5+02:00,bow\n2026-01-31T12:00:03,2026-01-31T12:00:04.000001,bow\n", cut.Annotations{Epoch: true, List: []raw.Annotation{
			{Start: 1769860800, End: 1769860802.5, Label: "bow", Line: 2},
			{Start: 1769860803, End: 1769860804.000001, Label: "bow", Line: 3},
		}}},
		{"seconds since 1970", "start,end,label\n1769860800.25,1769860802.5,bow\n", cut.Annotations{Epoch: true, List: []raw.Annotation{{Start: 1769860800.25, End: 1769860802.5, Label: "bow", Line: 2}}}},
	} {
		got, err := cut.Read(strings.NewReader(c.text), "cues.csv")
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
		}
		if d := cmp.Diff(c.want, got); d != "" {
			t.Errorf("%s: %s", c.name, d)
		}
	}
}

func TestReadFaults(t *testing.T) {
	for _, c := range []struct{ name, text, says string }{
		{"empty", "", "cues.csv: is empty; give it the columns start, end, label and subject"},
		{"only comments", "# nothing\n", "cues.csv: is empty; give it the columns start, end, label and subject"},
		{"no header", "1,2,bow\n", "cues.csv:1: has no column start; give it the columns start, end, label and subject"},
		{"no label column", "start,end,name\n1,2,bow\n", "cues.csv:1: has no column label; give it the columns start, end, label and subject"},
		{"two columns", "start,end,label,End\n", "cues.csv:1: has two columns end; keep one of them"},
		{"no rows", "start,end,label\n", "cues.csv: holds no annotations; add a row for each take, or leave the file out"},
		{"a field short", "start,end,label\n1,2,bow\n3,4\n", "cues.csv:3: has 2 fields, and the header 3; give every row all fields, empty ones too"},
		{"no number", "start,end,label\n1,2,bow\nsoon,4,bow\n", `cues.csv:3: start "soon" is neither seconds nor a time stamp; write it like 12.5 or 2026-01-31T12:00:00.5Z`},
		{"no time", "start,end,label\n1,,bow\n", `cues.csv:2: end "" is neither seconds nor a time stamp; write it like 12.5 or 2026-01-31T12:00:00.5Z`},
		{"not finite", "start,end,label\nNaN,2,bow\n", `cues.csv:2: start "NaN" is neither seconds nor a time stamp; write it like 12.5 or 2026-01-31T12:00:00.5Z`},
		{"no such day", "start,end,label\n2026-02-30T12:00:00Z,2,bow\n", `cues.csv:2: start "2026-02-30T12:00:00Z" is neither seconds nor a time stamp; write it like 12.5 or 2026-01-31T12:00:00.5Z`},
		{"seconds and stamps", "start,end,label\n1,2,bow\n2026-01-31T12:00:00Z,2026-01-31T12:00:01Z,bow\n", `cues.csv:3: start "2026-01-31T12:00:00Z" counts from another time than the first annotation; write all times as seconds or all as time stamps`},
		{"no label", "start,end,label\n1,2, \n", "cues.csv:2: has no label; name what was performed, or remove the row"},
		{"an open quote", "start,end,label\n1,2,\"bow\n3,4,bow\n", `cues.csv:2: is no delimited text: extraneous or missing " in quoted-field; close the quotes, and double those inside a quoted field`},
	} {
		_, err := cut.Read(strings.NewReader(c.text), "cues.csv")
		var f *fault.Error
		if !errors.As(err, &f) || err.Error() != c.says {
			t.Errorf("%s: %v, want\n%s", c.name, err, c.says)
		}
	}
}

// An error of the reader is passed on as it is, wherever it comes.
func TestReadErrors(t *testing.T) {
	broken := errors.New("broken")
	text := "start,end,label\n1,2,bow\n3,4,bow\n"
	for n := range len(text) {
		_, err := cut.Read(io.MultiReader(strings.NewReader(text[:n]), iotest.ErrReader(broken)), "cues.csv")
		if !errors.Is(err, broken) {
			t.Errorf("after %d bytes: %v", n, err)
		}
	}
}

func TestOn(t *testing.T) {
	a := cut.Annotations{Epoch: true, List: []raw.Annotation{{Start: 1769860800, End: 1769860802.5, Label: "bow"}}}
	if d := cmp.Diff([]raw.Annotation{{Start: 10, End: 12.5, Label: "bow"}}, a.On(1769860790)); d != "" || a.List[0].Start != 1769860800 {
		t.Error(d)
	}
}

// Whatever is read is finite and labelled, and writing it out gives the same.
func FuzzRead(f *testing.F) {
	for _, seed := range []string{
		"start,end,label,subject\n1,2.5,bow,ada\n", "start;end;label\n1,0;2,5;bow\n", "\ufeffstart\tend\tlabel\n1\t2\tbow\n",
		"start,end,label\n2026-01-31T12:00:00Z,2026-01-31 12:00:02,bow\n", "# c\nstart,end,label\n1e9,2e9,\"a\"\"b\"\n", "start,end,label\n\"1\n", "", "\x00\xff",
	} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, text string) {
		got, err := cut.Read(strings.NewReader(text), "x")
		if err != nil {
			var e *fault.Error
			if !errors.As(err, &e) {
				t.Fatalf("%v is no fault", err)
			}
			return
		}
		var out strings.Builder
		out.WriteString("start,end,label,subject\n")
		for _, a := range got.List {
			if math.IsNaN(a.Start+a.End) || math.IsInf(a.Start, 0) || math.IsInf(a.End, 0) || a.Label == "" || a.Line < 2 {
				t.Fatalf("%+v", a)
			}
			fmt.Fprintf(&out, "%v,%v,%s,%s\n", a.Start, a.End, quoted(a.Label), quoted(a.Subject))
		}
		again, err := cut.Read(strings.NewReader(out.String()), "x")
		if err != nil {
			t.Fatalf("%v: %q", err, out.String())
		}
		for i := range again.List {
			again.List[i].Line = got.List[i].Line
		}
		if stamped := got.Epoch != again.Epoch; stamped {
			return // a stamp near 1970 reads back as plain seconds
		}
		if d := cmp.Diff(got, again); d != "" {
			t.Fatal(d)
		}
	})
}

func quoted(s string) string { return `"` + strings.ReplaceAll(s, `"`, `""`) + `"` }

func ExampleRead() {
	a, err := cut.Read(strings.NewReader("start,end,label,subject\n1.5,3,raise,ada\n"), "cues.csv")
	fmt.Printf("%+v %v\n", a.List[0], err)
	// Output: {Start:1.5 End:3 Label:raise Subject:ada Line:2} <nil>
}
