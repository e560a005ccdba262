package delimited

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"
	"testing/iotest"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"

	"strandwise/ingest/raw"
)

// readAll reads a text; the takes come without their layout.
func readAll(r io.Reader, slow bool, in raw.Input) ([]raw.Take, error) {
	var out []raw.Take
	in.Name = "f"
	if in.Notice == nil {
		in.Notice = func(string, string) {}
	}
	d := &reader{in: in, slow: slow, yield: func(t *raw.Take, _ error) bool {
		x := *t
		x.Layout = nil
		out = append(out, x)
		return true
	}}
	err := d.read(r)
	return out, err
}

// reference is the plain reader: encoding/csv, strconv and maps. It knows
// well-formed text only.
func reference(text string, sep rune, decimalComma bool) ([]raw.Take, error) {
	c := csv.NewReader(strings.NewReader(strings.TrimPrefix(text, "\ufeff")))
	c.Comma = sep
	rows, err := c.ReadAll()
	if err != nil {
		return nil, err
	}
	var out []raw.Take
	for _, row := range rows[1:] {
		is := map[string]string{}
		var data []float64
		for i, name := range rows[0] {
			text := row[i]
			if decimalComma && name[0] == 'c' {
				text = strings.Replace(text, ",", ".", 1)
			}
			if v, err := strconv.ParseFloat(text, 64); err == nil && strings.HasPrefix(name, "c") {
				data = append(data, v)
			}
			is[name] = text
		}
		now, err := strconv.ParseFloat(is["time_ms"], 64)
		if err != nil {
			return nil, err
		}
		if n := len(out); n == 0 || out[n-1].Take != is["take"] {
			out = append(out, raw.Take{Identity: raw.Identity{Take: is["take"], Label: is["label"], Subject: is["subject"]}})
		}
		t := &out[len(out)-1]
		t.Time = append(t.Time, now/1000)
		t.Data = append(t.Data, data...)
	}
	return out, nil
}

// drawTable invents a well-formed table.
func drawTable(t *rapid.T) (text string, sep rune, decimalComma bool) {
	sep = rapid.SampledFrom([]rune{',', ';', '\t'}).Draw(t, "separator")
	decimalComma = sep != ',' && rapid.Bool().Draw(t, "decimal comma")
	end := rapid.SampledFrom([]string{"\n", "\r\n"}).Draw(t, "line end")
	names := []string{"take", "label", "subject", "time_ms", "note"}
	for i := range rapid.IntRange(1, 4).Draw(t, "channels") {
		names = append(names, fmt.Sprintf("c%d", i))
	}
	names = rapid.Permutation(names).Draw(t, "columns")
	number := func(v float64) string {
		s := strconv.FormatFloat(v, rapid.SampledFrom([]byte("feg")).Draw(t, "form"), rapid.IntRange(-1, 20).Draw(t, "digits"), 64)
		if decimalComma {
			s = strings.Replace(s, ".", ",", 1)
		}
		return s
	}
	word := rapid.StringMatching(`w[a-z ,;"\t]{0,4}[a-z]`)
	plain := rapid.StringMatching(`[a-zé][a-z ,;"]{0,4}[a-z]`)
	quoted := rapid.Bool().Draw(t, "quote all")
	var b strings.Builder
	line := func(fields []string) {
		for i, f := range fields {
			if i > 0 {
				b.WriteRune(sep)
			}
			if quoted || strings.ContainsAny(f, ",;\t\"\n") {
				f = `"` + strings.ReplaceAll(f, `"`, `""`) + `"`
			}
			b.WriteString(f)
		}
		b.WriteString(end)
	}
	if rapid.Bool().Draw(t, "mark") {
		b.WriteString("\ufeff")
	}
	line(names)
	for take := range rapid.IntRange(1, 3).Draw(t, "takes") {
		is := map[string]string{"take": fmt.Sprint("t", take), "label": plain.Draw(t, "label"), "subject": rapid.SampledFrom([]string{"", "ana"}).Draw(t, "subject")}
		for frame := range rapid.IntRange(1, 5).Draw(t, "frames") {
			row := make([]string, len(names))
			for i, name := range names {
				switch {
				case name == "time_ms":
					row[i] = strconv.Itoa(frame * 20)
				case name == "note":
					row[i] = word.Draw(t, "note")
				case name[0] == 'c':
					row[i] = number(rapid.Float64Range(-1e6, 1e6).Draw(t, "value"))
				default:
					row[i] = is[name]
				}
			}
			line(row)
		}
	}
	text = b.String()
	if rapid.Bool().Draw(t, "no last line end") {
		text = strings.TrimSuffix(text, end)
	}
	return text, sep, decimalComma
}

func TestReadsLikeTheReference(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text, sep, decimalComma := drawTable(t)
		want, err := reference(text, sep, decimalComma)
		if err != nil {
			t.Fatal(err)
		}
		for _, slow := range []bool{false, true} {
			got, err := readAll(strings.NewReader(text), slow, raw.Input{})
			if err != nil {
				t.Fatalf("%v\n%s", err, text)
			}
			for i := range got {
				got[i].Line = 0
			}
			if d := cmp.Diff(want, got, cmpopts.EquateNaNs()); d != "" {
				t.Fatalf("slow %v: %s\n%s", slow, d, text)
			}
		}
	})
}

// same fails unless both ways of reading gave the same takes and error.
func same(t interface{ Fatalf(string, ...any) }, what string, a, b []raw.Take, errA, errB error) {
	if fmt.Sprint(errA) != fmt.Sprint(errB) {
		t.Fatalf("%s: errors differ:\n%v\n%v", what, errA, errB)
	}
	if d := cmp.Diff(a, b, cmpopts.EquateNaNs()); d != "" {
		t.Fatalf("%s: %s", what, d)
	}
}

// FuzzRead holds for any bytes: reading does not panic; the fast path and the
// slow one agree, in their errors too; the size of the reads does not matter;
// and what is accepted is well formed.
func FuzzRead(f *testing.F) {
	for _, s := range []string{
		"take,label,time,x\na,w,0,1\na,w,0.02,2\nb,w,0,3\n", "x;y\n1,5;2\n1,25;3\n", "\ufefft,x\r\n0,1\r\n20,2",
		"# c\n% d\n// e\n\nframe x y\n 0  1  2 \n1 2 3\n", "\"x\",\"y\nz\",n\n\"1\",2,\"a\"\"b\"\n", "\xff\xfex\x00\n\x001\x00\n\x002\x00",
		"timestamp,x\n1700000000000000000,1\n1700000000010000000,2\n", "time,x\n2024-01-02T03:04:05.25Z,1\n2024-01-02T03:04:05.26Z,2\n",
		"x,\n1,\n2,\n", "x\n1e400\n", "x\n\"1\n", "time,x\n1700000000.25,1\n1700000000.5,2\n17e8,3\n", "note,x\nhello,1\nbye,2\n",
	} {
		f.Add([]byte(s))
	}
	f.Fuzz(func(t *testing.T, text []byte) {
		fast, err := readAll(bytes.NewReader(text), false, raw.Input{})
		slow, errSlow := readAll(bytes.NewReader(text), true, raw.Input{})
		same(t, "slow path", fast, slow, err, errSlow)
		small, errSmall := readAll(iotest.OneByteReader(bytes.NewReader(text)), false, raw.Input{})
		same(t, "one byte at a time", fast, small, err, errSmall)
		for i, take := range fast {
			frames := len(take.Time)
			if frames == 0 || len(take.Data)%frames != 0 || len(take.Data) == 0 {
				t.Fatalf("take %d: %d values in %d frames", i, len(take.Data), frames)
			}
			if take.Clock == raw.Seconds && take.Line < 2 || slices.ContainsFunc(take.Data, func(v float64) bool { return math.IsInf(v, 0) }) {
				t.Fatalf("take %d: %+v", i, take)
			}
		}
	})
}
