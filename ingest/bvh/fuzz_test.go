package bvh_test

import (
	"bytes"
	"errors"
	"math"
	"os"
	"strings"
	"testing"

	"strandwise/ingest/bvh"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
	"strandwise/testdata/opendata"
)

// FuzzDecode checks that no file makes the reader panic, that what it refuses
// is a fault with a place and what it takes is finite, and can be written and
// read again with every joint where it was.
//
//	go test -fuzz FuzzDecode ./ingest/bvh
func FuzzDecode(f *testing.F) {
	f.Add([]byte(stilts(f)))
	f.Add([]byte("HIERARCHY ROOT A { OFFSET 0 1 0 CHANNELS 2 Yposition Xrotation End Site { OFFSET 0 1 0 } }\nMOTION\nFrames: 1\nFrame Time: 1\n2 3"))
	for _, path := range seeds(f) {
		text, err := os.ReadFile(path)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(shortened(text, 3))
	}
	f.Fuzz(func(t *testing.T, text []byte) {
		m, err := bvh.Format{}.Decode(bytes.NewReader(text), raw.Input{Name: "a.bvh"})
		if err != nil {
			var known *fault.Error
			if !errors.As(err, &known) || known.File == "" || known.Problem == "" || m != nil {
				t.Fatalf("refused with %v, motion %v", err, m)
			}
			return
		}
		take := m.Take()
		if len(take.Time) != m.Frames() || len(take.Data) != m.Frames()*len(take.Layout.Columns) {
			t.Fatalf("%d times, %d values for %d frames of %d channels", len(take.Time), len(take.Data), m.Frames(), len(take.Layout.Columns))
		}
		size := 0.0
		for _, v := range take.Data {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				t.Fatalf("takes a value that is %v", v)
			}
			size = math.Max(size, math.Abs(v))
		}
		var file bytes.Buffer
		if err := bvh.Write(&file, m); err != nil {
			t.Fatal(err)
		}
		again, err := bvh.Format{LengthUnit: m.Skeleton.Unit}.Decode(&file, raw.Input{Name: "again.bvh"})
		if err != nil {
			t.Fatalf("refuses what it wrote: %v", err)
		}
		if d := farthest(m, again); !(d <= 1e-6*(1+size)) {
			t.Fatalf("a joint strays by %g m in a world of %g m", d, size)
		}
	})
}

// seeds lists the open files, none where they are absent.
func seeds(f *testing.F) []string {
	if !opendata.Here(f) {
		return nil
	}
	return openFiles(f)
}

// shortened keeps the hierarchy and the first frames of a file.
func shortened(text []byte, frames int) []byte {
	lines := strings.Split(string(text), "\n")
	for i, l := range lines {
		if strings.HasPrefix(l, "Frames:") && i+2+frames < len(lines) {
			lines[i] = "Frames: 3"
			return []byte(strings.Join(lines[:i+2+frames], "\n"))
		}
	}
	return text
}
