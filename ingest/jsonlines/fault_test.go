package jsonlines_test

import (
	"errors"
	"fmt"
	"io"
	"strings"
	"testing"

	"strandwise/ingest/fault"
	"strandwise/ingest/jsonlines"
	"strandwise/ingest/raw"
)

// TestFaults gives files that are unsound. Each error is a fault that names the
// file and the line, and says what to do.
func TestFaults(t *testing.T) {
	deep := strings.Repeat(`{"a":`, 40) + "1" + strings.Repeat("}", 40)
	cases := []struct{ name, file, want string }{
		{"nothing", "", "f: is empty"},
		{"white space", " \n\t\n", "f: is empty"},
		{"an empty list", "[ ]", "f: is empty"},
		{"no frames", "{}\n{\"label\":\"a\"}", "f: holds no samples"},
		{"only a time", `{"t":1}`, "f:1: holds no numbers but the time"},
		{"only text", `{"t":1,"a":"b"}`, "f:1: holds no numbers but the time"},
		{"only lists of text", `{"t":[1],"a":["b"]}`, "f:1: holds no lists of numbers but the time"},
		{"no object", "{\"t_ms\":1,\"ax\":1}\n12", "f:2: has '1' where an object should begin"},
		{"a list within a list", "[[1]]", "f:1: has '[' where an object should begin"},
		{"commas without a list", "{\"t_ms\":1,\"ax\":1},\n{\"t_ms\":2,\"ax\":1}", "f:1: has ',' where an object should begin"},
		{"two commas", `[{"ax":1},,{"ax":1}]`, "f:1: has ',' where an object should begin"},
		{"comma at the end", "[{\"ax\":1},\n]", "f:2: has ']' where an object should begin"},
		{"no comma", "[{\"ax\":1}\n{\"ax\":1}]", "f:2: has '{' where an object should begin"},
		{"more after the list", "[{\"ax\":1}]\n{}", "f:2: has '{' where an object should begin"},
		{"list that is not closed", "\n[{\"ax\":1}\n", "f:2: opens a list of objects that is not closed"},
		{"object that is not closed", "{\"t_ms\":1,\"ax\":1}\n{\"t_ms\":2,\"ax\n", "f:2: begins an object that is not complete"},
		{"no JSON", "{\"t_ms\":1,\"ax\":1}\n\n{\"t_ms\":2,\n\"ax\":+1}", "f:4: invalid character '+'"},
		{"half a number", `{"ax":1.}`, "f:1: invalid character"},
		{"NaN within a word", `{"ax":NaNny}`, "f:1: invalid character 'N'"},
		{"NaN with a digit", `{"ax":NaN0}`, "f:1: invalid character 'N'"},
		{"a bracket for a brace", "{\"ax\":1]", "f:1: invalid character ']'"},
		{"objects too deep", deep, "f:1: holds objects more than 32 deep"},
		{"a name twice", `{"ax":1,"a":{"x":2},"ax":3}`, `f:1: holds "ax" twice`},
		{"a name twice by dots", `{"a.x":1,"a":{"x":2}}`, `f:1: holds "a.x" twice`},
		{"a channel twice by its unit", `{"t":1,"ax":1,"ax [g]":2}`, "f:1: holds two fields named ax"},
		{"a take twice", `{"take":"a","Take":"b","ax":1}`, "f:1: states the take twice"},
		{"a value without a name", `{"t":1,"":1}`, "f:1: holds a number that has no name"},
		{"a control character in a name", `{"t":1,"a\u0007":1}`, "f:1: the name \"a\\a\" holds control characters"},
		{"a control character in a label", `{"t":1,"label":"a\u0007","ax":1}`, "f:1: label \"a\\a\" holds control characters"},
		{"no UTF-8 in a label", "{\"t\":1,\"label\":\"a\xff\",\"ax\":1}", "f:1: label \"a\\xff\" is not valid UTF-8"},
		{"text among numbers", "{\"t_ms\":1,\"ax\":1}\n{\"t_ms\":2,\"ax\":\"two\"}", "f:2: channel ax: \"\\\"two\\\"\" is not a number"},
		{"truth among numbers", "{\"t_ms\":1,\"ax\":1}\n{\"t_ms\":2,\"ax\":true}", "f:2: channel ax: \"true\" is not a number"},
		{"an object among numbers", "{\"t_ms\":1,\"ax\":1}\n{\"t_ms\":2,\"ax\":{\"x\":1}}", ""},
		{"a number too large", `{"t":1,"ax":1e999}`, "f:1: channel ax: \"1e999\" is no finite number"},
		{"a list where a number was", "{\"t_ms\":1,\"ax\":1}\n{\"t_ms\":2,\"ax\":[1,2,3]}", "f:2: channel ax: \"[1,2,3]\" is unlike its values before"},
		{"a number where a list was", "{\"t_ms\":1,\"a\":[1,2,3]}\n{\"t_ms\":2,\"a\":1}", "f:2: channel a: \"1\" is unlike its values before"},
		{"a longer list", "{\"t_ms\":1,\"a\":[1,2,3]}\n{\"t_ms\":2,\"a\":[1,2,3,4]}", "f:2: channel a: \"[1,2,3,4]\" is unlike its values before"},
		{"a list for a frame", `{"t":1,"ax":[` + strings.Repeat("1,", 99) + `1]}`, "f:1: channel ax: holds a list of 100 numbers beside a single time"},
		{"no time", "{\"t_ms\":1,\"ax\":1}\n{\"ax\":1}", "f:2: has no field \"t_ms\", which holds the time of others"},
		{"time missing", "{\"t_ms\":1,\"ax\":1}\n{\"t_ms\":null,\"ax\":1}", "f:2: channel t_ms: holds no time"},
		{"time in words", "{\"t_ms\":1,\"ax\":1}\n{\"t_ms\":\"later\",\"ax\":1}", "f:2: channel t_ms: \"\\\"later\\\"\" is no time like those before"},
		{"a date among numbers", "{\"t_ms\":1,\"ax\":1}\n{\"t_ms\":\"2024-01-02T03:04:05Z\",\"ax\":1}", "f:2: channel t_ms: \"\\\"2024-01-02T03:04:05Z\\\"\" is no time like those before"},
		{"fraction of a frame", "{\"frame\":1,\"ax\":1}\n{\"frame\":1.5,\"ax\":1}", "f:2: channel frame: 1.5 is no whole number"},
		{"steps of 1", "{\"t\":1,\"ax\":1}\n{\"t\":2,\"ax\":1}", "f:1: channel t: counts 1, 2, 3: that may be milliseconds or frames"},
		{"two labels", "{\"t_ms\":1,\"ax\":1,\"label\":\"a\"}\n{\"t_ms\":2,\"ax\":1,\"label\":\"b\"}", `f:2: has the label "b", but line 1, where the take begins, has "a"; add a field take`},
		{"two labels in a take", "{\"take\":\"t\",\"t_ms\":1,\"ax\":1,\"label\":\"a\"}\n{\"take\":\"t\",\"t_ms\":2,\"ax\":1,\"label\":\"b\"}", `f:2: take t: has the label "b", but line 1, where the take begins, has "a"; give every frame of a take the same label`},
		{"a label that comes late", "{\"t_ms\":1,\"ax\":1}\n{\"t_ms\":2,\"ax\":1,\"label\":\"b\"}", `f:2: has the label "b", but line 1, where the take begins, states none`},
		{"a take that comes late", "{\"t_ms\":1,\"ax\":1}\n{\"t_ms\":2,\"ax\":1,\"take\":\"b\"}", `f:2: names the take "b", but the frames before it name none`},
		{"a take that goes missing", "{\"t_ms\":1,\"ax\":1,\"take\":\"b\"}\n{\"t_ms\":2,\"ax\":1}", `f:2: take b: names no take, but the frames before it do`},
		{"a channel too late", "{\"take\":1,\"t_ms\":1,\"ax\":1}\n{\"take\":2,\"t_ms\":2,\"ax\":1,\"ay\":2}", "f:2: take 2: channel ay: comes up here for the first time"},
		{"a frame among takes", "{\"t_ms\":[1],\"ax\":[1]}\n{\"t_ms\":1,\"ax\":1}", "f:2: holds a frame where others hold a take"},
		{"lists of two lengths", `{"t_ms":[1,2],"ax":[1]}`, "f:1: ax holds 1 values, but t_ms holds 2"},
		{"a take without times", "{\"t_ms\":[1],\"ax\":[1]}\n{\"ax\":[1]}", "f:2: has no field \"t_ms\", which holds the times of others"},
		{"time missing in a list", "{\"t_ms\":[1,\nnull],\"ax\":[1,2]}", "f:2: channel t_ms: holds no time"},
		{"text in a list", "{\"t_ms\":[1,2],\"ax\":[1,\n\"b\"]}", "f:1: channel ax: \"\\\"b\\\"\" is not a number"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			_, _, err := readAll(strings.NewReader(c.file), raw.Input{})
			if c.want == "" {
				if err != nil {
					t.Errorf("error %v", err)
				}
				return
			}
			var f *fault.Error
			if !errors.As(err, &f) || f.File != "f" || f.Remedy == "" || !strings.HasPrefix(err.Error(), c.want) {
				t.Errorf("error %v, want a fault that begins with %q", err, c.want)
			}
		})
	}
}

// TestManyNames refuses a file whose names are values.
func TestManyNames(t *testing.T) {
	var b strings.Builder
	for i := range 5000 {
		fmt.Fprintf(&b, "{\"t_ms\":%d,\"at %d ms\":1}\n", i, i)
	}
	_, _, err := readAll(strings.NewReader(b.String()), raw.Input{})
	if err == nil || !strings.Contains(err.Error(), "values of more than 4096 names") {
		t.Errorf("error %v", err)
	}
}

// TestSniff tells JSON of objects from other text.
func TestSniff(t *testing.T) {
	for text, want := range map[string]bool{
		`{"t":1}`: true, " \n[ {\"t\":1}": true, "{}": true, "\ufeff{ \"a\"": true, "{": true,
		"": false, "[": false, "[1,2]": false, "{a:1}": false, "t,ax\n1,2": false, `"a"`: false, "PAR1": false,
	} {
		if got := (jsonlines.Format{}).Sniff([]byte(text), "x.txt"); got != want {
			t.Errorf("%q: %v", text, got)
		}
	}
}

// TestReadErrors passes on what r reports.
func TestReadErrors(t *testing.T) {
	broken := &fault.Error{File: "f", Problem: "its gzip data is damaged", Remedy: "copy it again"}
	for _, head := range []string{"", " ", "{", `{"t":1,"ax":2}`, `[{"t":1,"ax":2},`} {
		_, _, err := readAll(io.MultiReader(strings.NewReader(head), failing{broken}), raw.Input{})
		if err != broken {
			t.Errorf("after %q: error %v", head, err)
		}
	}
	_, _, err := readAll(failing{io.ErrClosedPipe}, raw.Input{})
	if !errors.Is(err, io.ErrClosedPipe) || !strings.HasPrefix(err.Error(), "f:1: cannot be read") {
		t.Errorf("error %v", err)
	}
}

type failing struct{ err error }

func (f failing) Read([]byte) (int, error) { return 0, f.err }

// TestStop stops after the first take.
func TestStop(t *testing.T) {
	n := 0
	for _, err := range (jsonlines.Format{}).Read(strings.NewReader("{\"take\":1,\"ax\":1}\n{\"take\":2,\"ax\":1}"), raw.Input{Name: "f"}) {
		if n++; err != nil {
			t.Fatal(err)
		}
		break
	}
	if n != 1 {
		t.Errorf("%d takes", n)
	}
}
