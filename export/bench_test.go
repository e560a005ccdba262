package export_test

import (
	"fmt"
	"math/rand/v2"
	"os"
	"path/filepath"
	"testing"

	"strandwise/channels"
	"strandwise/export"
)

// wide returns a layout of n invented position channels.
func wide(n int) *channels.Layout {
	l := &channels.Layout{}
	for c := range n {
		l.Channels = append(l.Channels, channels.Channel{Name: fmt.Sprintf("marker%02d.pos.%c", c/3, 'x'+rune(c%3)), Quantity: channels.Position, Unit: "m"})
	}
	return l
}

// BenchmarkAdd writes sealed sets, files synced, and reports the raw 32-bit
// floats of the channels (and of time_s in the table takes) written per second.
//
//	go test -bench Add -run '^$' ./export
func BenchmarkAdd(b *testing.B) {
	for _, table := range export.AllTables() {
		for _, shape := range []struct{ frames, channels int }{{64, 3}, {128, 6}, {512, 6}, {128, 75}} {
			b.Run(fmt.Sprintf("table=%s/frames=%d/channels=%d", table, shape.frames, shape.channels), func(b *testing.B) {
				benchmarkAdd(b, table, shape.frames, shape.channels)
			})
		}
	}
}

func benchmarkAdd(b *testing.B, table export.Table, frames, width int) {
	l := wide(width)
	r := rand.New(rand.NewPCG(3, 3))
	source := perform(l, "a take of some name", frames, r)
	var takes []*channels.Take
	for d := range max(32, 1<<20/(frames*width)) {
		takes = append(takes, vary(source, d, r))
	}
	perSet := 64 << 20 / (4 * frames * width) // 64 MB of channels
	dir, sets := filepath.Join(b.TempDir(), "set"), 0
	b.ReportAllocs()
	for b.Loop() {
		w, err := export.CreateOnly(dir, l, export.Options{}, table)
		if err != nil {
			b.Fatal(err)
		}
		for i := range perSet {
			if err := w.Add(takes[i%len(takes)]); err != nil {
				b.Fatal(err)
			}
		}
		if _, err := w.Seal(); err != nil {
			b.Fatal(err)
		}
		b.StopTimer()
		if err := os.RemoveAll(dir); err != nil {
			b.Fatal(err)
		}
		sets++
		b.StartTimer()
	}
	columns := width
	if table == export.Takes {
		columns++
	}
	floats := float64(sets) * float64(perSet) * float64(4*frames*columns)
	b.ReportMetric(floats/1e6/b.Elapsed().Seconds(), "MB/s")
}

// BenchmarkVerify verifies a set of 64 MB of channels in both tables and
// reports the bytes of its files checked per second.
//
//	go test -bench Verify -run '^$' ./export
func BenchmarkVerify(b *testing.B) {
	l := wristband(b)
	r := newRand()
	takes := []*channels.Take{perform(l, "a take of some name", 128, r)}
	for d := range 64 << 20 / (4 * 128 * 6) {
		takes = append(takes, vary(takes[0], d, r))
	}
	dir := b.TempDir()
	write(b, dir, l, export.Options{Tables: export.AllTables()}, takes)
	var bytes int64
	b.ReportAllocs()
	for b.Loop() {
		v, err := export.Verify(dir)
		if err != nil || !v.Sound() {
			b.Fatal(v, err)
		}
		bytes = v.Bytes
	}
	b.ReportMetric(float64(b.N)*float64(bytes)/1e6/b.Elapsed().Seconds(), "MB/s")
}
