package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// TestCheckFindsMistakes: each mistake in a file that is right without it is
// named.
func TestCheckFindsMistakes(t *testing.T) {
	const folder = "../../cmd/strandwise/deploy/"
	for _, tc := range []struct{ file, from, to, want string }{
		{"grow.yaml", "completionMode", "completionKind", "completionKind"},
		{"grow.yaml", "completions: 8", "completions: eight", "completions"},
		{"grow.yaml", "      restartPolicy", "          restartPolicy", "line 20"},
		{"grow.yaml", "batch/v1", "batch/v2", "not a Job of batch/v1"},
		{"seal.yaml", "        - name: data\n          persistent", "        - name: date\n          persistent", "volume data is mounted but not there"},
		{"Dockerfile", "FROM scratch", "FORM scratch", "FORM"},
		{"Dockerfile", "AS build", "as build", "FromAsCasing"},
		{"Dockerfile", "WORKDIR /src", "WORKDIR", "WORKDIR requires exactly one argument"},
	} {
		text, err := os.ReadFile(folder + tc.file)
		if err != nil {
			t.Fatal(err)
		}
		path := filepath.Join(t.TempDir(), tc.file)
		wrong := strings.Replace(string(text), tc.from, tc.to, 1)
		if wrong == string(text) {
			t.Errorf("%s does not say %q", tc.file, tc.from)
		}
		if err := os.WriteFile(path, []byte(wrong), 0o666); err != nil {
			t.Fatal(err)
		}
		if err := check(path); err == nil || !strings.Contains(err.Error(), tc.want) {
			t.Errorf("%s with %q: error %v, want one with %q", tc.file, tc.to, err, tc.want)
		}
	}
}
