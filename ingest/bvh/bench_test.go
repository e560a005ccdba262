package bvh_test

import (
	"bytes"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"strandwise/ingest/bvh"
	"strandwise/ingest/raw"
	"strandwise/testdata/opendata"
)

// long returns an open file with its frames repeated to about the given number
// of bytes.
func long(b *testing.B, name string, size int) []byte {
	b.Helper()
	text, err := os.ReadFile(filepath.Join(opendata.Path(b, "bvh"), name))
	if err != nil {
		b.Fatal(err)
	}
	head, rows, _ := strings.Cut(string(text), "MOTION")
	lines := strings.Split(strings.TrimSpace(rows), "\n")
	frames := strings.Join(lines[2:], "\n") + "\n"
	times := 1 + size/len(frames)
	return []byte(head + "MOTION\n" + fmt.Sprintf("Frames: %d\n", times*(len(lines)-2)) + lines[1] + "\n" + strings.Repeat(frames, times))
}

// go test -bench . -benchmem ./ingest/bvh
func BenchmarkDecode(b *testing.B) {
	for _, name := range []string{"20tab_test_mocapbank.bvh", "bvhfilesjl_Example.bvh"} {
		text := long(b, name, 8<<20)
		b.Run("stage=motion/file="+name, func(b *testing.B) {
			b.SetBytes(int64(len(text)))
			b.ReportAllocs()
			for b.Loop() {
				if _, err := (bvh.Format{}).Decode(bytes.NewReader(text), raw.Input{}); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run("stage=take/file="+name, func(b *testing.B) {
			b.SetBytes(int64(len(text)))
			b.ReportAllocs()
			for b.Loop() {
				for _, err := range (bvh.Format{}).Read(bytes.NewReader(text), raw.Input{}) {
					if err != nil {
						b.Fatal(err)
					}
				}
			}
		})
	}
}

func BenchmarkWrite(b *testing.B) {
	text := long(b, "20tab_test_mocapbank.bvh", 8<<20)
	m, err := bvh.Format{}.Decode(bytes.NewReader(text), raw.Input{})
	if err != nil {
		b.Fatal(err)
	}
	var file bytes.Buffer
	b.ReportAllocs()
	for b.Loop() {
		file.Reset()
		if err := bvh.Write(&file, m); err != nil {
			b.Fatal(err)
		}
	}
	b.SetBytes(int64(file.Len()))
}
