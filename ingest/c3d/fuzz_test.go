package c3d_test

import (
	"bytes"
	"math"
	"os"
	"path/filepath"
	"runtime"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/ingest/c3d"
)

// FuzzRead holds for any bytes: reading does not panic and takes no more memory
// than the bytes warrant; what is read is consistent; it is the same whether
// the file's size is known or not; and it survives being written and read
// again, as far as 32-bit floats go.
func FuzzRead(f *testing.F) {
	for _, order := range orders {
		for _, float := range []bool{false, true} {
			r := sample()
			r.order, r.float = order, float
			f.Add(r.write())
		}
	}
	seeds, err := filepath.Glob("testdata/*.c3d")
	if err != nil || len(seeds) == 0 {
		f.Fatalf("no samples in testdata: %v", err)
	}
	for _, path := range seeds {
		data, err := os.ReadFile(path)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(data)
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		got, err := c3d.Read(bytes.NewReader(data), c3d.Options{})
		again, err2 := c3d.Read(bytes.NewReader(data), c3d.Options{Size: int64(len(data))})
		if errorText(err) != errorText(err2) {
			t.Fatalf("size unknown: %v; known: %v", err, err2)
		}
		if err != nil {
			return
		}
		if diff := cmp.Diff(got, again, compare...); diff != "" {
			t.Fatalf("size unknown, known:\n%s", diff)
		}
		checkSound(t, got, len(data))
		checkRewritten(t, got)
	})
}

func checkSound(t *testing.T, f *c3d.File, size int) {
	t.Helper()
	points, channels := len(f.Points.Labels), len(f.Analog.Labels)
	if f.Frames < 1 || len(f.Points.Data) != 3*points*f.Frames || len(f.Analog.Data) != channels*f.Analog.PerFrame*f.Frames {
		t.Fatalf("%d frames, %d coordinates, %d samples", f.Frames, len(f.Points.Data), len(f.Analog.Data))
	}
	if 2*(len(f.Points.Data)+len(f.Analog.Data)) > size {
		t.Fatalf("%d numbers out of %d bytes", len(f.Points.Data)+len(f.Analog.Data), size)
	}
	for _, v := range append(f.Points.Data, f.Analog.Data...) {
		if math.IsInf(v, 0) {
			t.Fatal("an infinite value")
		}
	}
	if points > 0 && !cmp.Equal(f.Points.Missing, missing(f.Points.Data, 3, points)) {
		t.Fatalf("missing %v", f.Points.Missing)
	}
	if channels > 0 && !cmp.Equal(f.Analog.Missing, missing(f.Analog.Data, 1, channels)) {
		t.Fatalf("missing %v", f.Analog.Missing)
	}
	seen := map[string]bool{}
	for _, l := range f.Points.Labels {
		if seen[l] || l == "" {
			t.Fatalf("label %q again", l)
		}
		seen[l] = true
	}
}

// checkRewritten writes the points as floats and reads them again.
func checkRewritten(t *testing.T, f *c3d.File) {
	t.Helper()
	r := &recording{order: c3d.MIPS, float: true, labels: f.Points.Labels, scale: 1, rate: 100, first: 1, frames: f.Frames, xyz: f.Points.Data, longCount: "float"}
	if len(r.labels) == 0 || len(r.labels) > 1000 || f.Frames > 1<<20 {
		return
	}
	for _, v := range r.xyz {
		if math.Abs(v) > math.MaxFloat32 {
			return
		}
	}
	got, err := c3d.Read(bytes.NewReader(r.write()), c3d.Options{})
	if err != nil {
		t.Fatal(err)
	}
	for i, v := range got.Points.Data {
		if want := float64(float32(r.xyz[i])); v != want && !math.IsNaN(v+want) {
			t.Fatalf("coordinate %d is %v, want %v", i, v, want)
		}
	}
}

// TestLyingHeader reads a few bytes that claim to be terabytes.
func TestLyingHeader(t *testing.T) {
	r := sample()
	r.edit = func(p *parameter) {
		if p.name == "FRAMES" {
			p.kind, p.numbers = c3d.Real, []float64{1 << 40}
		}
	}
	data := r.write()
	put(data, 8, 0, 0) // the header counts no frames
	for _, size := range []int64{0, int64(len(data))} {
		var before, after runtime.MemStats
		runtime.ReadMemStats(&before)
		_, err := c3d.Read(bytes.NewReader(data), c3d.Options{Size: size})
		runtime.ReadMemStats(&after)
		const most = 16 << 20
		if took := after.TotalAlloc - before.TotalAlloc; err == nil || took > most {
			t.Errorf("size %d: took %d bytes, error %v", size, took, err)
		}
	}
}
