package look

import (
	"fmt"
	"os"
	"path/filepath"
	"runtime"
	"testing"

	"strandwise/channels"
	"strandwise/export"
	"strandwise/export/marks"
)

// manyTakes is a set of 100,000 takes of 7 channels and 12 frames.
func manyTakes(b *testing.B) string {
	b.Helper()
	l := puppets(b)
	dir := filepath.Join(b.TempDir(), "set")
	w, err := export.Create(dir, l, export.Options{})
	if err != nil {
		b.Fatal(err)
	}
	for n := range 4000 {
		source := perform(l, fmt.Sprintf("recordings/%04d.csv", n), 12, float64(n))
		source.Label, source.Subject = fmt.Sprintf("label %d", n%40), fmt.Sprintf("subject %d", n%70)
		if err := w.Add(source); err != nil {
			b.Fatal(err)
		}
		for d := range 24 {
			made := *source
			made.ID = fmt.Sprintf("%s~%d", source.ID, d)
			made.Made = &channels.Making{Source: source.ID, Draw: d, Rank: d, Method: "recipe", Parameters: drawn(n, d)}
			if err := w.Add(&made); err != nil {
				b.Fatal(err)
			}
		}
	}
	if _, err := w.Seal(); err != nil {
		b.Fatal(err)
	}
	return dir
}

// drawn returns parameters of as many names as the recipe has.
func drawn(n, d int) map[string]float64 {
	out := map[string]float64{}
	for i, name := range []string{"start_s", "end_s", "mix", "rotation_rad", "duration", "gate_bandwidth", "gate_bones", "gate_copy", "gate_finite", "gate_jerk", "gate_range", "gate_stray"} {
		out[name] = float64((n*31+d*7+i)%1000) / 997
	}
	return out
}

// BenchmarkOpen opens a set of 100,000 takes.
//
//	go test -bench Open -run '^$' ./export/look
func BenchmarkOpen(b *testing.B) {
	dir := manyTakes(b)
	b.ReportAllocs()
	var held float64
	for b.Loop() {
		before := heap()
		s, err := Open(dir)
		if err != nil {
			b.Fatal(err)
		}
		held = float64(heap()-before) / float64(s.Takes())
		if s.Takes() != 100_000 {
			b.Fatalf("%d takes", s.Takes())
		}
		if err := s.Close(); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(held, "held-B/take")
}

func heap() int64 {
	runtime.GC()
	var m runtime.MemStats
	runtime.ReadMemStats(&m)
	return int64(m.HeapAlloc)
}

// BenchmarkPage lists a page of 100,000 takes in each order, and BenchmarkTake
// reads the signals of takes of row groups that are not at hand.
func BenchmarkPage(b *testing.B) {
	s := open(b, manyTakes(b))
	for _, o := range orders() {
		b.Run(string(o), func(b *testing.B) {
			for b.Loop() {
				s.find(query{label: -1, subject: -1, session: -1, source: -1, gate: 0, order: o, holds: "7"}, map[string]marks.Mark{})
			}
		})
	}
}

func BenchmarkTake(b *testing.B) {
	dir := manyTakes(b)
	s := open(b, dir)
	info, err := os.Stat(filepath.Join(dir, s.files[0].path))
	if err != nil {
		b.Fatal(err)
	}
	n := 0
	for b.Loop() {
		n = (n + 20_011) % s.Takes()
		s.groups = groupCache{}
		if _, err := s.motion(&s.takes.rows[n]); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(info.Size())/float64(len(s.files[0].groups))/1e6, "MB/row-group")
}
