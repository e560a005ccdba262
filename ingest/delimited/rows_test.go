package delimited_test

import (
	"errors"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/ingest/delimited"
	"strandwise/ingest/fault"
)

// textRows reads all rows as text, each with its line.
func textRows(t *testing.T, text string, sep byte) (out []string, err error) {
	t.Helper()
	rows, err := delimited.NewRows(strings.NewReader(text), "f", sep)
	if err != nil {
		return nil, err
	}
	for {
		fields, line, err := rows.Text()
		if err == io.EOF {
			return out, nil
		}
		if err != nil {
			return out, err
		}
		row := fmt.Sprintf("%d:", line)
		for _, f := range fields {
			row += "<" + string(f) + ">"
		}
		out = append(out, row)
	}
}

func TestRowsAsText(t *testing.T) {
	long := strings.Repeat("a long line\n", 60_000) // within quotes, over several blocks
	for name, c := range map[string]struct {
		text string
		sep  byte
		want []string
	}{
		"nothing":            {"", '\t', nil},
		"one row, no end":    {"a\tb", '\t', []string{"1:<a><b>"}},
		"blank lines":        {"\n \r\na\tb\r\n\n\tc\n", '\t', []string{"3:<a><b>", "5:<><c>"}},
		"no comments":        {"# a\n% b\n// c\n", '\t', []string{"1:<# a>", "2:<% b>", "3:<// c>"}},
		"quoted":             {"\"a\tb\"\t\"c\"\"d\ne\"\nf\n", '\t', []string{"1:<a\tb><c\"d\ne>", "3:<f>"}},
		"mark":               {"\ufeffa,b\n", ',', []string{"1:<a><b>"}},
		"quoted and long":    {"\"" + long + "\"\nx\n", ',', []string{"1:<" + long + ">", "60002:<x>"}},
		"a quote of its own": {"5\" long,b\n", ',', []string{"1:<5\" long><b>"}},
	} {
		got, err := textRows(t, c.text, c.sep)
		if d := cmp.Diff(c.want, got); d != "" || err != nil {
			t.Errorf("%s: %v\n%s", name, err, d)
		}
	}
}

func TestRowsFaults(t *testing.T) {
	for name, c := range map[string]struct{ text, want string }{
		"open quote":       {"a\n\"b\n", "f:2: a quote is opened and not closed"},
		"text after quote": {"\"a\"b\n", "f:1: text follows a closing quote"},
		"long row":         {"a\n" + strings.Repeat("b", 17<<20), "f:2: a row is longer than 16 MiB"},
		"half a character": {"\xff\xfea\x00b", "f:1: cannot be read: unexpected EOF"},
	} {
		_, err := textRows(t, c.text, ',')
		var f *fault.Error
		if !errors.As(err, &f) || !strings.HasPrefix(err.Error(), c.want) || f.Remedy == "" {
			t.Errorf("%s: error %v, want %q", name, err, c.want)
		}
	}
	broken := &fault.Error{File: "f", Problem: "its disk is gone"}
	for _, text := range []string{"", "1\t2\n"} {
		_, err := numberRows(io.MultiReader(strings.NewReader(text), failing{broken}), 2)
		if !errors.Is(err, broken) {
			t.Errorf("after %q: error %v, want that of the reader", text, err)
		}
	}
}

// failing is a reader that fails.
type failing struct{ err error }

// Read fails.
func (f failing) Read([]byte) (int, error) { return 0, f.err }

// numberRows reads rows as a format would: plain ones in one go, others field
// by field.
func numberRows(r io.Reader, width int) (out [][]string, err error) {
	rows, err := delimited.NewRows(r, "f", '\t')
	if err != nil {
		return nil, err
	}
	dst := make([]float64, width)
	for {
		line, ok := rows.Numbers(dst)
		if !ok {
			fields, at, err := rows.Text()
			if err == io.EOF {
				return out, nil
			}
			if err != nil {
				return out, err
			}
			line, dst = at, dst[:0]
			for _, f := range fields {
				v, _, err := delimited.Number(f)
				if err != nil {
					return out, err
				}
				dst = append(dst, v)
			}
		}
		row := []string{strconv.Itoa(line)}
		for _, v := range dst {
			row = append(row, strconv.FormatFloat(v, 'g', -1, 64))
		}
		out = append(out, row)
	}
}

// TestNumberRows holds the reading of plain rows against cutting every line at
// its tabs and reading the fields by strconv.
func TestNumberRows(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		width := rapid.IntRange(1, 5).Draw(t, "width")
		number := rapid.Custom(func(t *rapid.T) string {
			format := rapid.SampledFrom([]byte("efg")).Draw(t, "format")
			return strconv.FormatFloat(rapid.Float64Range(-1e9, 1e9).Draw(t, "value"), format, rapid.IntRange(-1, 20).Draw(t, "digits"), 64)
		})
		odd := rapid.SampledFrom([]string{"n/a", "", "NaN", " 1.5 ", "+2.", "007", `"3"`})
		end := rapid.SampledFrom([]string{"\n", "\r\n", "\n\n"})
		var text strings.Builder
		var want [][]string
		line := 1
		for range rapid.IntRange(0, 20).Draw(t, "rows") {
			row := []string{strconv.Itoa(line)}
			for i := range width {
				field := number.Draw(t, "field")
				if rapid.IntRange(0, 9).Draw(t, "odd") == 0 && width > 1 {
					field = odd.Draw(t, "field")
				}
				if i > 0 {
					text.WriteByte('\t')
				}
				text.WriteString(field)
				v, err := strconv.ParseFloat(strings.Trim(field, ` "`), 64)
				if err != nil {
					v = math.NaN()
				}
				row = append(row, strconv.FormatFloat(v, 'g', -1, 64))
			}
			e := end.Draw(t, "end")
			text.WriteString(e)
			line += strings.Count(e, "\n")
			want = append(want, row)
		}
		got, err := numberRows(strings.NewReader(text.String()), width)
		if d := cmp.Diff(want, got); d != "" || err != nil {
			t.Fatalf("%q: %v\n%s", text.String(), err, d)
		}
	})
}

func TestNumber(t *testing.T) {
	for field, want := range map[string]string{
		"1.5": "1.5 false <nil>", " -2e3 ": "-2000 false <nil>", "n/a": "NaN true <nil>", "": "NaN true <nil>", "NaN": "NaN true <nil>",
		"1e999": `NaN false "1e999" is no finite number`, "inf": `NaN false "inf" is no finite number`, "1,5": `NaN false "1,5" is not a number`,
	} {
		v, missing, err := delimited.Number([]byte(field))
		if got := fmt.Sprintf("%v %v %v", v, missing, err); got != want {
			t.Errorf("%q: %s, want %s", field, got, want)
		}
	}
}
