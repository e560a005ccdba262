package export_test

import (
	"fmt"
	"math/rand/v2"
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"sync"
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
				benchmarkAdd(b, table, shape.frames, shape.channels, nil)
			})
		}
	}
}

// BenchmarkAddInt16 is BenchmarkAdd of windows as 16-bit numbers, which counts
// the 32-bit floats that they are made from.
func BenchmarkAddInt16(b *testing.B) {
	benchmarkAdd(b, export.Windows, 128, 6, slices.Repeat([]float64{2.0 / 32767}, 6))
}

func benchmarkAdd(b *testing.B, table export.Table, frames, width int, scale []float64) {
	l := wide(width)
	r := rand.New(rand.NewPCG(3, 3))
	source := perform(l, "a take of some name", frames, r)
	var takes []*channels.Take
	for d := range max(32, 1<<20/(frames*width)) {
		takes = append(takes, vary(source, d, r))
	}
	perSet := 64 << 20 / (4 * frames * width) // 64 MB of channels
	// Windows as long as a quarter of a take, side by side: no float stands twice.
	o := export.Options{Windowing: export.Windowing{Length: frames / 4, Hop: frames / 4, Scale: scale}}
	dir, sets := filepath.Join(b.TempDir(), "set"), 0
	b.ReportAllocs()
	for b.Loop() {
		w, err := export.CreateOnly(dir, l, o, table)
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

// BenchmarkVerify verifies a set of 64 MB of channels in both tables, without and
// with takes for testing, of which near-copies are looked for, and reports the
// bytes of its files checked per second.
//
//	go test -bench Verify -run '^$' ./export
func BenchmarkVerify(b *testing.B) {
	for _, tested := range []int{0, 10, 100} {
		b.Run(fmt.Sprintf("testing=%d%%", tested/10), func(b *testing.B) { benchmarkVerify(b, tested) })
	}
}

// benchmarkVerify verifies a set of which so many takes in a thousand test.
func benchmarkVerify(b *testing.B, tested int) {
	l := wristband(b)
	r := newRand()
	takes := []*channels.Take{perform(l, "a take of some name", 128, r)}
	for d := range 64 << 20 / (4 * 128 * 6) {
		take := vary(takes[0], d, r)
		if d%1000 < tested {
			take = perform(l, fmt.Sprint("a take for testing ", d), 128, r)
			take.Split = channels.Test
			size := 0.5 + r.Float64()
			for i := range take.Data {
				take.Data[i] *= size
			}
		}
		takes = append(takes, take)
	}
	dir := b.TempDir()
	write(b, dir, l, export.Options{Tables: []export.Table{export.Takes, export.Frames}}, takes)
	var bytes int64
	b.ReportAllocs()
	for b.Loop() {
		v, err := export.Verify(dir)
		if err != nil || len(v.Problems) > len(v.Copies) {
			b.Fatal(v, err)
		}
		bytes = v.Bytes
	}
	b.ReportMetric(float64(b.N)*float64(bytes)/1e6/b.Elapsed().Seconds(), "MB/s")
}

// BenchmarkBuckets writes sets of ten million frames of 6 channels in 8 buckets,
// several at a time, and reports the raw 32-bit floats written per second and
// the memory that the process has taken from the system.
//
//	go test -bench Buckets -run '^$' -cpu 2 ./export
func BenchmarkBuckets(b *testing.B) {
	for _, table := range []export.Table{export.Takes, export.Frames} {
		for _, workers := range []int{1, 2} {
			b.Run(fmt.Sprintf("table=%s/workers=%d", table, workers), func(b *testing.B) { benchmarkBuckets(b, table, workers) })
		}
	}
}

func benchmarkBuckets(b *testing.B, table export.Table, workers int) {
	const frames, width, buckets = 128, 6, 8
	takes := ofBuckets(wide(width), frames, buckets)
	dir := filepath.Join(b.TempDir(), "set")
	n := 10_000_000 / frames / buckets
	if testing.Short() {
		n /= 100
	}
	for b.Loop() {
		w, err := export.CreateOnly(dir, takes[0].Layout, export.Options{Buckets: buckets}, table)
		if err != nil {
			b.Fatal(err)
		}
		todo := make(chan int, buckets)
		for number := range buckets {
			todo <- number
		}
		close(todo)
		var together sync.WaitGroup
		for range workers {
			together.Go(func() {
				for number := range todo {
					if err := repeat(w.Bucket(number), takes[number], n); err != nil {
						b.Error(err)
					}
				}
			})
		}
		together.Wait()
		if _, err := w.Seal(); err != nil {
			b.Fatal(err)
		}
		b.StopTimer()
		if err := os.RemoveAll(dir); err != nil {
			b.Fatal(err)
		}
		b.StartTimer()
	}
	columns := width
	if table == export.Takes {
		columns++
	}
	var memory runtime.MemStats
	runtime.ReadMemStats(&memory)
	b.ReportMetric(float64(b.N)*float64(n*buckets)*float64(4*frames*columns)/1e6/b.Elapsed().Seconds(), "MB/s")
	b.ReportMetric(float64(memory.Sys)/(1<<20), "MiB")
}

// ofBuckets returns an invented recorded take for each bucket.
func ofBuckets(l *channels.Layout, frames, buckets int) []*channels.Take {
	out := make([]*channels.Take, buckets)
	r := rand.New(rand.NewPCG(3, 3))
	for i, left := 0, buckets; left > 0; i++ {
		t := perform(l, fmt.Sprint("a take of some name ", i), frames, r)
		if at := export.BucketOf(t.ID, buckets); out[at] == nil {
			out[at] = t
			left--
		}
	}
	return out
}

// repeat writes a recorded take and n−1 synthetic ones into a bucket.
func repeat(b *export.Bucket, source *channels.Take, n int) error {
	r := rand.New(rand.NewPCG(4, 4))
	var takes []*channels.Take
	for d := range 32 {
		takes = append(takes, vary(source, d, r))
	}
	err := b.Add(source)
	for i := 1; i < n && err == nil; i++ {
		err = b.Add(takes[i%len(takes)])
	}
	if err != nil {
		return err
	}
	return b.Finish()
}
