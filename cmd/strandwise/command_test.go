package main

import (
	"bytes"
	"context"
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// outcome is what one command line did.
type outcome struct {
	code     int
	out, err string
}

// strandwise runs one command line with the given standard input.
func strandwise(t *testing.T, in string, args ...string) outcome {
	t.Helper()
	var out, err bytes.Buffer
	s := Streams{In: strings.NewReader(in), Out: &out, Err: &err}
	code := ExitCode(s, Run(context.Background(), s, args))
	return outcome{code, out.String(), err.String()}
}

// must runs a command line that has to succeed and returns its output.
func must(t *testing.T, args ...string) string {
	t.Helper()
	o := strandwise(t, "", args...)
	if o.code != exitDone {
		t.Fatalf("strandwise %s: exit code %d\n%s%s", strings.Join(args, " "), o.code, o.out, o.err)
	}
	return o.out
}

// write writes a file of the test and returns its path.
func write(t *testing.T, dir, name, text string) string {
	t.Helper()
	path := filepath.Join(dir, name)
	if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	return path
}

// contents reads every file below a folder, by its path inside it.
func contents(t *testing.T, dir string) map[string]string {
	t.Helper()
	out := make(map[string]string)
	err := filepath.WalkDir(dir, func(path string, e os.DirEntry, err error) error {
		if err != nil || e.IsDir() {
			return err
		}
		data, err := os.ReadFile(path)
		name, _ := filepath.Rel(dir, path)
		out[filepath.ToSlash(name)] = string(data)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return out
}

var update = flag.Bool("update", false, "rewrite the golden files")

// checkGolden holds a text to a golden file.
func checkGolden(t *testing.T, text, golden string) {
	t.Helper()
	if *update {
		if err := os.WriteFile(golden, []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(strings.Split(string(want), "\n"), strings.Split(text, "\n")); diff != "" {
		t.Errorf("%s (-want +got):\n%s", golden, diff)
	}
}
