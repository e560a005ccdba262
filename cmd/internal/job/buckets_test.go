package job_test

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"maps"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"strandwise/cmd/internal/job"
	"strandwise/export"
)

// recordings writes invented takes of two labels by three people.
func recordings(t *testing.T) string {
	t.Helper()
	var b strings.Builder
	b.WriteString("take,label,subject,time_s,left.accel.x,right.accel.x\n")
	for n := range 18 {
		label := []string{"bow", "wave"}[n%2]
		for i := range 24 {
			u := float64(i) / 23 * float64(1+n%2)
			fmt.Fprintf(&b, "t%02d,%s,person-%d,%.2f,%.4f,%.4f\n", n, label, n%3, float64(i)/50, math.Sin(6*u+float64(n)/20), math.Cos(5*u*u))
		}
	}
	path := filepath.Join(t.TempDir(), "long.csv")
	if err := os.WriteFile(path, []byte(b.String()), 0o666); err != nil {
		t.Fatal(err)
	}
	return path
}

// interrupting is progress that ends the run after so many steps of growing.
type interrupting struct {
	stage string
	steps int
	at    int
	end   func()
}

func (p *interrupting) Begin(stage string, _ int64, _ string) { p.stage = stage }
func (p *interrupting) End()                                  {}
func (p *interrupting) Step(n int64) {
	if p.stage != "growing" {
		return
	}
	if p.steps += int(n); p.steps >= p.at {
		p.end()
	}
}

// measured returns a file of what is measured of a recording, so that a test of
// many runs measures once.
func measured(t *testing.T, csv string) string {
	t.Helper()
	p := job.NewPlan()
	p.Recordings = []string{csv}
	m, err := p.Measure(context.Background(), nil, &interrupting{}, func(string) {})
	if err != nil {
		t.Fatal(err)
	}
	var b bytes.Buffer
	if err := m.Write(&b); err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(t.TempDir(), "variation.json")
	if err := os.WriteFile(path, b.Bytes(), 0o666); err != nil {
		t.Fatal(err)
	}
	return path
}

// grow runs a plan of four buckets until so many takes are made.
func grow(csv, variation, out string, at int) (*job.Grown, []string, error) {
	p := job.NewPlan()
	p.Variation = variation
	p.Recordings, p.Out, p.PerTake, p.Buckets, p.Distance, p.Workers = []string{csv}, out, 4, 4, []string{"euclidean-dependent"}, 2
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()
	var notices []string
	done, err := p.Grow(ctx, nil, "0.1.0", &interrupting{at: at, end: cancel}, func(text string) { notices = append(notices, text) })
	return done, notices, err
}

func files(t *testing.T, dir string) map[string]string {
	t.Helper()
	out := map[string]string{}
	err := filepath.WalkDir(dir, func(path string, e os.DirEntry, err error) error {
		if err != nil || e.IsDir() {
			return err
		}
		data, err := os.ReadFile(path)
		out[strings.TrimPrefix(path, dir)] = string(data)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// TestInterruptedGrowGoesOn interrupts a run early and late, again and again:
// a set without a finished bucket is removed, one with any goes on to the bytes
// of a run that was left alone.
func TestInterruptedGrowGoesOn(t *testing.T) {
	csv, root := recordings(t), t.TempDir()
	variation := measured(t, csv)
	if _, _, err := grow(csv, variation, filepath.Join(root, "whole"), math.MaxInt); err != nil {
		t.Fatal(err)
	}
	want := files(t, filepath.Join(root, "whole"))
	kept, removed := 0, 0
	for at := 1; at <= 90; at += 16 {
		dir := filepath.Join(root, fmt.Sprint("set", at))
		_, _, err := grow(csv, variation, dir, at)
		if !errors.Is(err, context.Canceled) {
			t.Fatalf("interrupted after %d takes: error %v", at, err)
		}
		var unfinished *job.UnfinishedError
		if !errors.As(err, &unfinished) {
			if _, err := os.Stat(dir); !errors.Is(err, os.ErrNotExist) {
				t.Errorf("after %d takes: nothing is said to be kept, but the folder is there", at)
			}
			removed++
			continue
		}
		kept++
		if _, err := export.ReadManifest(dir); err == nil || unfinished.Finished == 0 || unfinished.Of != 4 {
			t.Errorf("after %d takes: %v; manifest: %v", at, unfinished, err)
		}
		done, notices, err := grow(csv, variation, dir, math.MaxInt)
		if err != nil {
			t.Fatal(err)
		}
		if done.Resumed != unfinished.Finished || !strings.Contains(strings.Join(notices, "\n"), "going on with the unfinished set") {
			t.Errorf("after %d takes: went on from %d buckets of %d; notices %q", at, done.Resumed, unfinished.Finished, notices)
		}
		if !maps.Equal(want, files(t, dir)) {
			t.Errorf("after %d takes: the set is not that of a run left alone", at)
		}
	}
	if kept == 0 || removed == 0 {
		t.Errorf("%d runs were kept and %d removed; the test means to see both", kept, removed)
	}
}
