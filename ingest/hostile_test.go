package ingest_test

import (
	"errors"
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/ingest"
	"strandwise/ingest/fault"
)

var update = flag.Bool("update", false, "rewrite the golden files")

// TestHostileRecordings reads every unsound recording alone. Each must be
// refused by a fault that says what, where and what to do.
func TestHostileRecordings(t *testing.T) {
	files, err := filepath.Glob("../testdata/hostile/*.*")
	if err != nil || len(files) == 0 {
		t.Fatal("no recordings", err)
	}
	var got strings.Builder
	for _, name := range files {
		_, _, err := read(t, ingest.Options{Paths: []string{name}, Rate: 50})
		var f *fault.Error
		if !errors.As(err, &f) || f.File != name || f.Problem == "" || f.Remedy == "" {
			t.Errorf("%s: error %v (%T), want a fault with place, problem and remedy", name, err, err)
		}
		fmt.Fprintln(&got, filepath.ToSlash(fmt.Sprint(err)))
	}
	const golden = "../testdata/hostile.golden"
	if *update {
		if err := os.WriteFile(golden, []byte(got.String()), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(strings.Split(string(want), "\n"), strings.Split(got.String(), "\n")); d != "" {
		t.Error(d)
	}
}
