package c3d_test

import (
	"bytes"
	"flag"
	"os"
	"path/filepath"
	"testing"

	"strandwise/ingest/c3d"
)

var update = flag.Bool("update", false, "rewrite the samples in testdata")

// TestSamples keeps the samples in testdata as the writer writes them. They
// seed the fuzzing and serve the example.
func TestSamples(t *testing.T) {
	cue := sample()
	cue.order = c3d.DEC
	cut := sample()
	cut.order, cut.float, cut.first = c3d.MIPS, true, 65530
	cut.longCount = "TRIAL"
	for name, r := range map[string]*recording{"cue.c3d": cue, "cut.c3d": cut, "wide.c3d": wide(256)} {
		path := filepath.Join("testdata", name)
		data := r.write()
		if *update {
			if err := os.WriteFile(path, data, 0o644); err != nil {
				t.Fatal(err)
			}
		}
		got, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if !bytes.Equal(got, data) {
			t.Errorf("%s is not what the writer writes; run with -update", path)
		}
	}
}
