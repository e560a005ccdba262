package ingest_test

import (
	"testing"

	"strandwise/ingest"
	"strandwise/testdata/opendata"
)

// TestOpenSets holds what is read against the counts published with each set
// (UEA multivariate archive, Bagnall et al. 2018; UTD-MHAD, Chen et al. 2015).
func TestOpenSets(t *testing.T) {
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
			takes, _, err := read(t, ingest.Options{Paths: []string{opendata.Path(t, "sets", c.set)}, Rate: 50})
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
