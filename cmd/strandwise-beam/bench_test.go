package main

import (
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"syscall"
	"testing"
	"time"

	"strandwise/augment"
	"strandwise/augment/gate"
	"strandwise/augment/variation"
	"strandwise/channels"
	"strandwise/channels/group"
	"strandwise/export"
	"strandwise/ingest"
)

// wrist writes takes of an invented wristband, six channels of 50 frames, and
// returns the file.
func wrist(tb testing.TB, dir string, takes int) string {
	tb.Helper()
	var b bytes.Buffer
	b.WriteString("take,label,subject,time_s,left_wrist.accel.x,left_wrist.accel.y,left_wrist.accel.z,left_wrist.gyro.x,left_wrist.gyro.y,left_wrist.gyro.z\n")
	random := rand.New(rand.NewPCG(1, 2))
	around := func(middle, spread float64) float64 { return middle + spread*random.NormFloat64() }
	for n := range takes {
		label := float64(n % 4)
		tempo, late := around(1, 0.08), around(0, 0.05)
		var size, phase, drift [6]float64
		for c := range 6 {
			size[c], phase[c], drift[c] = around(2, 0.3), around(label+float64(c), 0.2), around(0, 0.3)
		}
		for i := range 50 {
			u := tempo*float64(i)/49 - late
			fmt.Fprintf(&b, "t%05d,cue-%d,person-%d,%.2f", n, n%4, n/4%5, float64(i)/50)
			for c := range 6 {
				at := size[c]*math.Sin((3+label)*u*(1+0.2*u)+phase[c]) + drift[c]*math.Cos(2*u) + around(0, 0.03)
				if c == 2 {
					at += 9.81
				}
				fmt.Fprintf(&b, ",%.5f", at)
			}
			b.WriteByte('\n')
		}
	}
	path := filepath.Join(dir, "wrist.csv")
	if err := os.WriteFile(path, b.Bytes(), 0o666); err != nil {
		tb.Fatal(err)
	}
	return path
}

// BenchmarkCost measures what each part of the work costs in processor time, for
// the model of DEVELOPERS.md:
//
//	go test -run '^$' -bench Cost -benchtime 1x -v .
func BenchmarkCost(b *testing.B) {
	const recorded, perTake = 400, 32
	dir := b.TempDir()
	r, err := ingest.Open(ingest.Options{Paths: []string{wrist(b, dir, recorded)}})
	if err != nil {
		b.Fatal(err)
	}
	defer r.Close()
	for range b.N {
		var takes []*channels.Take
		var scales channels.Scales
		begun := cpu(b, syscall.RUSAGE_SELF)
		lap := func(what string, n int) {
			now := cpu(b, syscall.RUSAGE_SELF)
			b.ReportMetric(float64((now-begun).Microseconds())/float64(n), what)
			begun = cpu(b, syscall.RUSAGE_SELF)
		}
		for t, err := range r.Takes() {
			if err != nil {
				b.Fatal(err)
			}
			takes = append(takes, t)
			scales.Add(t)
		}
		lap("read-µs/recorded", recorded)
		known := augment.Training{Scales: &scales, Takes: takes[:256]}
		if known.Measured, err = variation.Measure(context.Background(), known.Takes, &scales, variation.Default()); err != nil {
			b.Fatal(err)
		}
		known.Coupling = group.MeasureCoupling(known.Takes, &scales, 1)
		lap("measure-µs", 1)
		if known.Gates, err = gate.Fit(known.Takes, &scales, gate.Options{Off: gate.All()}); err != nil {
			b.Fatal(err)
		}
		make := func() (made []*channels.Take) {
			m, err := augment.NewMaker(augment.Default(), known, 1)
			if err != nil {
				b.Fatal(err)
			}
			in := func(yield func(*channels.Take, error) bool) {
				for _, t := range takes {
					if !yield(t, nil) {
						return
					}
				}
			}
			for t, err := range augment.Grow(context.Background(), in, m, augment.GrowOptions{PerTake: perTake, Workers: 1}) {
				if err != nil {
					b.Fatal(err)
				}
				made = append(made, t)
			}
			return made
		}
		begun = cpu(b, syscall.RUSAGE_SELF)
		make()
		lap("make-µs/take", recorded*perTake)
		if known.Gates, err = gate.Fit(known.Takes, &scales, gate.Default()); err != nil {
			b.Fatal(err)
		}
		begun = cpu(b, syscall.RUSAGE_SELF)
		made := make()
		b.ReportMetric(float64(len(made)-recorded)/(recorded*perTake), "made-of-wanted")
		lap("make-and-gate-µs/take", recorded*perTake)
		w, err := export.Create(filepath.Join(dir, fmt.Sprint("set", time.Now().UnixNano())), takes[0].Layout, export.Options{})
		if err != nil {
			b.Fatal(err)
		}
		for _, t := range made {
			if err := w.Add(t); err != nil {
				b.Fatal(err)
			}
		}
		m, err := w.Seal()
		if err != nil {
			b.Fatal(err)
		}
		lap("write-µs/take", len(made))
		bytes := int64(0)
		for _, f := range m.Files {
			bytes += f.Bytes
		}
		b.ReportMetric(float64(bytes)/float64(len(made)), "bytes/take")
	}
}

// cpu returns the processor time that was used so far.
func cpu(tb testing.TB, who int) time.Duration {
	tb.Helper()
	var used syscall.Rusage
	if err := syscall.Getrusage(who, &used); err != nil {
		tb.Fatal(err)
	}
	return time.Duration(used.Utime.Nano() + used.Stime.Nano())
}

// BenchmarkShards grows 100,000 takes in one run, in shards of an array of jobs
// that run one after another, and on Beam, and reports processor and wall time:
//
//	go test -run '^$' -bench Shards -benchtime 1x -timeout 2h .
func BenchmarkShards(b *testing.B) {
	dir := b.TempDir()
	csv := wrist(b, dir, 3125)
	grow := filepath.Join(dir, "strandwise")
	build := exec.Command("go", "build", "-o", grow, "./cmd/strandwise")
	build.Dir = filepath.Join("..", "..") // a module of its own
	if out, err := build.CombinedOutput(); err != nil {
		b.Fatalf("%v\n%s", err, out)
	}
	flags := append([]string{csv, "--per-take", "32", "--buckets", "8", "--workers", "2"}, quick...)
	at := 0
	run := func(b *testing.B, program string, args ...string) (wall, used time.Duration) {
		c := exec.Command(program, args...)
		begun := time.Now()
		if out, err := c.CombinedOutput(); err != nil {
			b.Fatalf("%v\n%s", err, out)
		}
		return time.Since(begun), c.ProcessState.UserTime() + c.ProcessState.SystemTime()
	}
	for _, shards := range []int{1, 2, 8} {
		b.Run(fmt.Sprintf("array-%d", shards), func(b *testing.B) {
			for range b.N {
				at++
				set := filepath.Join(dir, fmt.Sprint("set", at))
				var wall, used, longest time.Duration
				for i := range shards {
					w, u := run(b, grow, append([]string{"grow", "--shard", fmt.Sprint(i), "--shards", fmt.Sprint(shards), "--out", set}, flags...)...)
					wall, used, longest = wall+w, used+u, max(longest, u)
				}
				w, u := run(b, grow, "seal", set)
				report(b, wall+w, used+u)
				b.ReportMetric(longest.Seconds(), "longest-shard-cpu-s")
			}
		})
		b.Run(fmt.Sprintf("beam-%d", shards), func(b *testing.B) {
			for range b.N {
				at++
				set := filepath.Join(dir, fmt.Sprint("set", at))
				w, u := run(b, program("strandwise-beam"), append([]string{"--shards", fmt.Sprint(shards), "--out", set}, flags...)...)
				report(b, w, u)
			}
		})
	}
	b.Run("grow", func(b *testing.B) {
		for range b.N {
			at++
			w, u := run(b, grow, append([]string{"grow", "--out", filepath.Join(dir, fmt.Sprint("set", at))}, flags...)...)
			report(b, w, u)
		}
	})
	want, err := export.ReadManifest(filepath.Join(dir, "set1"))
	if err != nil {
		b.Fatal(err)
	}
	for i := 2; i <= at; i++ {
		got, err := export.ReadManifest(filepath.Join(dir, fmt.Sprint("set", i)))
		if err != nil || got.Seal != want.Seal {
			b.Errorf("set %d is another than the first (%v)", i, err)
		}
	}
	text, _ := json.Marshal(want.Counts)
	b.Logf("%s", text)
}

func report(b *testing.B, wall, used time.Duration) {
	b.ReportMetric(wall.Seconds(), "wall-s")
	b.ReportMetric(used.Seconds(), "cpu-s")
}
