package jsonlines

import (
	"encoding/json"
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"

	"strandwise/ingest/raw"
)

// outcome is all that reading a file gives.
type outcome struct {
	takes   []*raw.Take
	notices []string
	err     string
}

// readBy reads a file, every object by the slow path or not.
func readBy(file string, slow bool) (o outcome) {
	d := &reader{source: newObjects(strings.NewReader(file)), columns: map[string]*column{}, slow: slow}
	d.in = raw.Input{Name: "f", Notice: func(text, evidence string) { o.notices = append(o.notices, text+evidence) }}
	d.yield = func(t *raw.Take, err error) bool {
		o.takes = append(o.takes, t)
		return true
	}
	if err := d.read(); err != nil {
		o.err = err.Error()
	}
	return o
}

func checkSame(t interface {
	Helper()
	Fatalf(string, ...any)
}, file string) {
	t.Helper()
	slow, fast := readBy(file, true), readBy(file, false)
	if diff := cmp.Diff(slow, fast, cmp.AllowUnexported(outcome{}), cmpopts.EquateNaNs(), cmpopts.EquateEmpty()); diff != "" {
		t.Fatalf("slow, fast:\n%s\nfile:\n%s", diff, file)
	}
}

// TestFastPath reads invented logs by both paths: frames of the same fields,
// now and then one that is odd in some way.
func TestFastPath(t *testing.T) {
	values := rapid.SampledFrom([]string{"0", "-1.5", "1e3", "12345678901234567890", "0.1234567890123456789", "null", "NaN", `"2.5"`, `""`, `"x"`, "true", "1e999", "01", "-", `"\u0031"`, "[1,2,3]", `{"z":1}`, " 7 "})
	times := rapid.SampledFrom([]string{"%d", "%d.25", "1700000000%03d", `"%d"`, "null", `"2024-01-02T03:04:05.%03dZ"`})
	rapid.Check(t, func(t *rapid.T) {
		time := times.Draw(t, "time")
		sensors := rapid.IntRange(1, 3).Draw(t, "sensors")
		var b strings.Builder
		for i := range rapid.IntRange(1, 30).Draw(t, "frames") {
			x, y := strconv.Itoa(i), strconv.Itoa(i*i)
			if rapid.IntRange(0, 9).Draw(t, "odd") == 0 {
				x = values.Draw(t, "x")
			}
			if rapid.IntRange(0, 40).Draw(t, "odd clock") == 0 {
				time = times.Draw(t, "time")
			}
			at := fmt.Sprintf(time, 7*i)
			switch k := i % sensors; {
			case rapid.IntRange(0, 30).Draw(t, "bare") == 0:
				fmt.Fprintf(&b, `{"t_ms":%s,"ax":%s}`, at, x)
			case k == 0:
				fmt.Fprintf(&b, `{"take":"t%d","t_ms":%s,"ax":%s,"note":"%d","a":{"y":%s}}`, i/12, at, x, i, y)
			default:
				fmt.Fprintf(&b, `{"take":"t%d","sensor":"s%d","values":[%s,%s,1], "t_ms" : %s}`, i/12, k, x, y, at)
			}
			b.WriteString(rapid.SampledFrom([]string{"\n", "\n", "\n", " \n\n", ""}).Draw(t, "end"))
		}
		checkSame(t, b.String())
	})
}

// TestNumber reads numbers as encoding/json takes and strconv rounds them.
func TestNumber(t *testing.T) {
	check := func(t interface{ Fatalf(string, ...any) }, s string) {
		v, n := parseNumber([]byte(s + "\x00"))
		whole := n == len(s) && n > 0
		if legal := json.Valid([]byte(s)); whole != legal {
			t.Fatalf("%q: %d of %d bytes read, legal %v", s, n, len(s), legal)
		}
		if want, _ := strconv.ParseFloat(s, 64); whole && math.Float64bits(v) != math.Float64bits(want) {
			t.Fatalf("%q: %v, want %v", s, v, want)
		}
	}
	for _, s := range []string{"0", "-0", "0.1", "-0.0", "1e5", "1E+05", "1e-400", "1e400", "123456789012345", "1234567890123456", "9007199254740993",
		"0.000000000000001", "0.0000000000000000000000001", "00", "01", "-", "1.", ".5", "1e", "1e+", "+1", "0x1", "1_0", "", "Inf", "1.5.5"} {
		check(t, s)
	}
	digits := rapid.StringMatching(`-?[0-9]{1,20}(\.[0-9]{0,20})?([eE][+-]?[0-9]{0,3})?`)
	rapid.Check(t, func(t *rapid.T) { check(t, digits.Draw(t, "number")) })
}

// FuzzRead holds for any bytes: reading them does not panic, gives the same by
// the fast and the slow path, and yields takes that are consistent.
func FuzzRead(f *testing.F) {
	for _, file := range []string{
		"{\"take\":\"a\",\"label\":\"w\",\"t_ms\":0,\"accel\":{\"x\":0.5}}\n{\"take\":\"a\",\"label\":\"w\",\"t_ms\":5,\"accel\":{\"x\":1.5}}\n",
		"{\"sensor\":\"a\",\"time\":0,\"values\":[1,2,3]}\n{\"sensor\":\"g\",\"time\":20,\"x\":\"5\"}\n{\"sensor\":\"a\",\"time\":40,\"values\":[1,2,NaN]}",
		"[{\"label\":\"w\",\"time_s\":[0,0.01,0.03],\"ax\":[1,null,3]},\n{\"time_s\":[],\"ax\":null}]",
		"{\"rate\":50}\n{\"time\":\"2024-01-02T03:04:05Z\",\"a\\u0078\":1e3}\n{\"time\":\"2024-01-02T03:04:06.5Z\",\"ax\":2}",
		"{\"t\":1700000000000000001,\"ax\":1}{\"t\":1700000000020000001,\"ax\":-0.0}",
	} {
		f.Add(file)
	}
	f.Fuzz(func(t *testing.T, file string) {
		checkSame(t, file)
		for _, take := range readBy(file, false).takes {
			checkSound(t, take)
		}
	})
}

func checkSound(t *testing.T, take *raw.Take) {
	width := len(take.Layout.Columns)
	if width == 0 || len(take.Data) != width*len(take.Time) {
		t.Fatalf("%d values for %d frames of %d channels", len(take.Data), len(take.Time), width)
	}
	for i, at := range take.Time {
		if at-at != 0 || take.LineOf(i) < 1 {
			t.Fatalf("frame %d: time %g in line %d", i, at, take.LineOf(i))
		}
	}
	for i, v := range take.Data {
		if math.IsInf(v, 0) {
			t.Fatalf("value %d is %g", i, v)
		}
	}
}
