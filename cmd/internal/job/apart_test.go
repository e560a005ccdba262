package job

import (
	"bytes"
	"context"
	"encoding/gob"
	"errors"
	"fmt"
	"maps"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/spf13/pflag"

	"strandwise/export"
)

// apartPlan returns a plan that grows two files of invented takes into a folder.
func apartPlan(t *testing.T, recordings, out string) *Plan {
	t.Helper()
	p := NewPlan()
	if err := p.Load("", pflag.NewFlagSet("", pflag.ContinueOnError), []string{recordings}); err != nil {
		t.Fatal(err)
	}
	p.Out, p.PerTake, p.Buckets, p.TakesPerLabel, p.Repeats, p.Distance = out, 2, 5, []int{1}, 1, []string{"euclidean-dependent"}
	p.HoldOut = "subject=p2"
	return p
}

// twoFiles writes the recordings and returns their folder.
func twoFiles(t *testing.T) string {
	t.Helper()
	dir := t.TempDir()
	for file := range 2 {
		var b strings.Builder
		b.WriteString("take,label,subject,time_s,left.accel.x,left.accel.y\n")
		for n := range 9 {
			for i := range 24 {
				u := float64(i) / 23 * float64(1+n%2)
				fmt.Fprintf(&b, "t%d%d,cue-%d,p%d,%.2f,%.5f,%.5f\n", file, n, n%2, n%3, float64(i)/50, math.Sin(6*u+float64(n)/20), math.Cos(5*u*u))
			}
		}
		if err := os.WriteFile(filepath.Join(dir, fmt.Sprintf("%d.csv", file)), []byte(b.String()), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

// surveyed is a run whose buckets are to be made by others.
func surveyed(t *testing.T, p *Plan) (*Apart, []Reference) {
	t.Helper()
	var refs []Reference
	a, err := p.Apart(context.Background(), 3, "1", nil, silent{}, func(string) {}, func(r Reference) error {
		refs = append(refs, r)
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { a.Close() })
	return a, refs
}

// sent returns a briefing as it arrives in another process.
func sent(t *testing.T, a *Apart) *Briefing {
	t.Helper()
	b, err := a.Briefing()
	if err != nil {
		t.Fatal(err)
	}
	var buffer bytes.Buffer
	var out Briefing
	if err := errors.Join(gob.NewEncoder(&buffer).Encode(b), gob.NewDecoder(&buffer).Decode(&out)); err != nil {
		t.Fatal(err)
	}
	return &out
}

// TestApart: buckets made from a briefing and references are those of one run.
func TestApart(t *testing.T) {
	ctx, in, dir := context.Background(), twoFiles(t), t.TempDir()
	one := apartPlan(t, in, filepath.Join(dir, "one"))
	if _, err := one.Grow(ctx, nil, "1", silent{}, func(string) {}); err != nil {
		t.Fatal(err)
	}
	out := filepath.Join(dir, "apart")
	a, refs := surveyed(t, apartPlan(t, in, out))
	if a.Shards() != 3 || a.Buckets() != 5 || len(refs) != 18 || refs[17].File != 1 {
		t.Fatalf("%d shards, %d buckets, references %v", a.Shards(), a.Buckets(), refs)
	}
	if err := errors.Join(a.Begin(out), a.Score(ctx, out)); err != nil {
		t.Fatal(err)
	}
	m, err := sent(t, a).Maker(ctx, t.TempDir(), nil)
	if err != nil {
		t.Fatal(err)
	}
	defer m.Close()
	slices.Reverse(refs)
	made := map[int]bool{}
	synthetic := int64(0)
	for _, shard := range []int{2, 0, 0, 1} {
		var own []Reference
		for _, r := range refs {
			if export.BucketOf(r.Take, 5)%3 == shard {
				own = append(own, r)
			}
		}
		if err := m.Make(ctx, out, shard, own, func(b Made) error {
			if made[b.Bucket] {
				t.Errorf("bucket %d is made again", b.Bucket)
			}
			made[b.Bucket] = true
			synthetic += b.Synthetic
			return nil
		}); err != nil {
			t.Fatal(err)
		}
	}
	sealed, err := export.Seal(out)
	if err != nil {
		t.Fatal(err)
	}
	done, err := a.Done(sealed)
	if err != nil || int64(done.Synthetic) != synthetic || done.Buckets != 5 {
		t.Errorf("done %+v, %d synthetic takes reported (%v)", done, synthetic, err)
	}
	if want, got := folder(t, one.Out), folder(t, out); !maps.Equal(want, got) {
		t.Errorf("the sets differ: %v and %v", slices.Sorted(maps.Keys(want)), slices.Sorted(maps.Keys(got)))
	}
	other := *sealed
	other.Seed++
	if _, err := a.Done(&other); err == nil {
		t.Error("the set of another seed is taken for this one")
	}
}

// TestApartNoticesWhatChanged: recordings that are not those of the survey, and
// references that do not fit them, are faults, and no bucket is finished.
func TestApartNoticesWhatChanged(t *testing.T) {
	ctx, in := context.Background(), twoFiles(t)
	out := filepath.Join(t.TempDir(), "set")
	a, refs := surveyed(t, apartPlan(t, in, out))
	if err := a.Begin(out); err != nil {
		t.Fatal(err)
	}
	m, err := sent(t, a).Maker(ctx, t.TempDir(), nil)
	if err != nil {
		t.Fatal(err)
	}
	defer m.Close()
	var own []Reference
	for _, r := range refs {
		if export.BucketOf(r.Take, 5)%3 == 1 {
			own = append(own, r)
		}
	}
	makes := func(refs []Reference) error {
		return m.Make(ctx, out, 1, refs, func(Made) error { t.Error("a bucket is made"); return nil })
	}
	if err := makes(own[1:]); err == nil || !strings.Contains(err.Error(), "is there, and was not when") {
		t.Errorf("a reference short: %v", err)
	}
	more := Reference{Take: own[0].Take + "x", File: 0}
	for export.BucketOf(more.Take, 5)%3 != 1 {
		more.Take += "x"
	}
	if err := makes(append(own, more)); err == nil || !strings.Contains(err.Error(), "is not there any more") {
		t.Errorf("one too many: %v", err)
	}
	path := filepath.Join(in, fmt.Sprintf("%d.csv", own[0].File))
	text, err := os.ReadFile(path)
	if err == nil {
		err = os.WriteFile(path, bytes.Replace(text, []byte("0.9"), []byte("0.8"), 1), 0o666)
	}
	if err != nil {
		t.Fatal(err)
	}
	if err := makes(own); err == nil || !strings.Contains(err.Error(), "has changed since it was first read") {
		t.Errorf("another recording: %v", err)
	}
}

func folder(t *testing.T, dir string) map[string]string {
	t.Helper()
	out := map[string]string{}
	if err := filepath.WalkDir(dir, func(path string, e os.DirEntry, err error) error {
		if err != nil || e.IsDir() {
			return err
		}
		data, err := os.ReadFile(path)
		name, _ := filepath.Rel(dir, path)
		out[name] = string(data)
		return err
	}); err != nil {
		t.Fatal(err)
	}
	return out
}
