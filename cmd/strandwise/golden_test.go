package main

import (
	"crypto/sha256"
	"fmt"
	"maps"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// TestGoldenSet holds every byte of the files of a tiny set to their checksums,
// so that a change of this program or of a package under it that changes bytes
// is noticed. Rewrite them with
//
//	go test -run GoldenSet ./cmd/strandwise -update
//
// when bytes are meant to change, and say so where the change is told of.
func TestGoldenSet(t *testing.T) {
	golden, err := filepath.Abs(filepath.Join("testdata", "tiny.sha256"))
	if err != nil {
		t.Fatal(err)
	}
	t.Chdir(t.TempDir()) // the plan in the files names the recordings as they are given
	write(t, ".", "long.csv", longCSV(2))
	must(t, "grow", "long.csv", "--rate", "50", "--per-take", "2", "--seed", "7", "--buckets", "2", "--tables", "takes,frames,windows",
		"--window-length", "16", "--distance", "euclidean-dependent", "--out", "set")
	files := contents(t, "set")
	var sums strings.Builder
	for _, name := range slices.Sorted(maps.Keys(files)) {
		fmt.Fprintf(&sums, "%x  %s\n", sha256.Sum256([]byte(files[name])), name)
	}
	checkGolden(t, sums.String(), golden)
}
