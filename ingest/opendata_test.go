package ingest_test

import (
	"os"
	"path/filepath"
	"testing"

	"strandwise/ingest"
)

// openData returns the folder of open recordings, or skips the test.
func openData(t testing.TB) string {
	t.Helper()
	dir := os.Getenv("STRANDWISE_DATA")
	if dir == "" {
		root, err := os.Getwd()
		if err != nil {
			t.Fatal(err)
		}
		for root != filepath.Dir(root) {
			if _, err := os.Stat(filepath.Join(root, "go.mod")); err == nil {
				break
			}
			root = filepath.Dir(root)
		}
		dir = filepath.Join(filepath.Dir(root), "shared", "data")
	}
	if _, err := os.Stat(dir); err != nil {
		t.Skipf("the open recordings are not here: %v", err)
	}
	return dir
}

// TestOpenSets holds what is read against the counts published with each set
// (UEA multivariate archive, Bagnall et al. 2018; UTD-MHAD, Chen et al. 2015).
func TestOpenSets(t *testing.T) {
	dir := openData(t)
	for _, c := range []struct {
		set                             string
		train, test, width, least, most int
	}{
		{"BasicMotions", 40, 40, 6, 100, 100},
		{"Epilepsy", 137, 138, 3, 206, 206},
		{"Libras", 180, 180, 2, 45, 45},
		{"NATOPS", 180, 180, 24, 51, 51},
		{"UWaveGestureLibrary", 120, 320, 3, 315, 315},
		{"UTD_MHAD_inertial", 431, 430, 6, 107, 326},
	} {
		t.Run(c.set, func(t *testing.T) {
			takes, _, err := read(t, ingest.Options{Paths: []string{filepath.Join(dir, "sets", c.set)}, Rate: 50})
			if err != nil {
				t.Fatal(err)
			}
			count := map[string]int{}
			least, most := 1<<30, 0
			for _, x := range takes {
				count[string(x.Split)]++
				least, most = min(least, x.Frames()), max(most, x.Frames())
			}
			if count["train"] != c.train || count["test"] != c.test || takes[0].Width() != c.width || least != c.least || most != c.most {
				t.Errorf("%v takes of %d channels, %d to %d frames; want %+v", count, takes[0].Width(), least, most, c)
			}
		})
	}
}
