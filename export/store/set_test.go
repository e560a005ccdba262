package store_test

import (
	"context"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"

	"strandwise/channels"
	"strandwise/export"
	"strandwise/export/store"
)

// take returns an invented take.
func take(n int, l *channels.Layout) *channels.Take {
	t := &channels.Take{ID: fmt.Sprintf("t%02d", n), Label: "bow", Subject: "ember", Split: channels.Train, Layout: l}
	for i := range 20 {
		t.Time = append(t.Time, float64(i)/50)
		t.Data = append(t.Data, math.Sin(float64(i*n)), float64(n))
	}
	return t
}

func layout() *channels.Layout {
	return &channels.Layout{
		Channels: []channels.Channel{{Name: "x"}, {Name: "y"}},
		Groups:   []channels.Group{{Name: "hand", Limb: "hand", Channels: []int{0, 1}}},
	}
}

const buckets = 4

// fill writes some buckets of a set into a folder.
func fill(t *testing.T, dir string, o export.Options, some ...int) {
	t.Helper()
	l := layout()
	w, err := export.Create(dir, l, o)
	if err != nil {
		t.Fatal(err)
	}
	for _, number := range some {
		b := w.Bucket(number)
		for n := range 16 {
			if x := take(n, l); export.BucketOf(x.ID, buckets) == number {
				if err := b.Add(x); err != nil {
					t.Fatal(err)
				}
			}
		}
		if err := b.Finish(); err != nil {
			t.Fatal(err)
		}
	}
	if slices.Contains(some, 0) {
		if err := w.Attach("score.json", []byte("{}\n")); err != nil {
			t.Fatal(err)
		}
		if err := w.Note("a notice"); err != nil {
			t.Fatal(err)
		}
	}
	if _, err := w.Close(); err != nil {
		t.Fatal(err)
	}
}

func shard(i int) export.Options { return export.Options{Buckets: buckets, Shards: buckets, Shard: i} }

// seal makes a set of a folder.
func seal(t *testing.T, dir string) {
	t.Helper()
	if _, err := export.Seal(dir); err != nil {
		t.Fatal(err)
	}
}

// process returns a process that works at the set in storage.
func process(t *testing.T, f *faulty) *store.Set {
	t.Helper()
	s := &store.Set{Transfer: store.Transfer{Store: f, Tries: 1}, Prefix: "sets/one/", Dir: filepath.Join(t.TempDir(), "set")}
	if err := s.Fetch(context.Background()); err != nil {
		t.Fatal(err)
	}
	return s
}

// TestSet: shards that are made in folders of their own and put into storage one
// after another, some twice, are the set that one folder gives; what vouches for
// others is put behind them.
func TestSet(t *testing.T) {
	ctx, dir := context.Background(), t.TempDir()
	for i := range buckets {
		fill(t, filepath.Join(dir, "alone"), shard(i), i)
	}
	seal(t, filepath.Join(dir, "alone"))

	f := newFaulty(filepath.Join(dir, "lab"))
	late := process(t, f) // sees nothing of what the others do until it is done
	fill(t, late.Dir, shard(2), 2)
	for _, i := range []int{3, 0, 1, 2} {
		s := process(t, f)
		s.Wanted = func(bucket int) bool { return bucket == i }
		if err := s.Fetch(ctx); err != nil {
			t.Fatal(err)
		}
		if brought, err := filepath.Glob(filepath.Join(s.Dir, "*", "bucket-*")); len(brought) > 0 || err != nil {
			t.Errorf("records that are not wanted are brought: %v (%v)", brought, err)
		}
		fill(t, s.Dir, shard(i), i)
		if err := s.Push(ctx); err != nil {
			t.Fatal(err)
		}
		room := int64(0)
		for name, text := range contents(t, s.Dir) {
			if strings.HasSuffix(name, ".parquet") && strings.Trim(text, "\x00") != "" {
				room += int64(len(text))
			}
		}
		if room > 0 {
			t.Errorf("%d bytes of tables are left in the folder", room)
		}
	}
	if err := late.Push(ctx); err != nil {
		t.Fatal(err)
	}
	s := process(t, f)
	if sealed, err := s.Sealed(ctx); sealed || err != nil {
		t.Errorf("the set is sealed already (%v)", err)
	}
	f.log = nil
	seal(t, s.Dir)
	if err := s.Push(ctx); err != nil {
		t.Fatal(err)
	}
	if sealed, err := s.Sealed(ctx); !sealed || err != nil {
		t.Errorf("the set is not sealed (%v)", err)
	}
	want, got := contents(t, filepath.Join(dir, "alone")), contents(t, filepath.Join(dir, "lab", "sets", "one"))
	if diff := cmp.Diff(want, got); diff != "" {
		t.Error(diff)
	}
	place := slices.Index(f.log, "put sets/one/manifest.json")
	for i, step := range f.log {
		if strings.HasPrefix(step, "put") && i > place || strings.HasPrefix(step, "remove sets/one/unfinished/") && i < place {
			t.Errorf("%s comes in the wrong place of %v", step, f.log)
		}
	}
	if last := f.log[len(f.log)-1]; last != "remove sets/one/unfinished/plan.json" {
		t.Errorf("the last step is %s", last)
	}
}

// TestEveryMoment: whatever write the storage fails at, it holds either no
// manifest, and the same work done again makes the set, or the whole set.
func TestEveryMoment(t *testing.T) {
	ctx, dir := context.Background(), t.TempDir()
	work := func(s *store.Set) error {
		if sealed, err := s.Sealed(ctx); sealed || err != nil {
			return err
		}
		for i := range buckets {
			fill(t, s.Dir, shard(i), i)
			if err := s.Push(ctx); err != nil {
				return err
			}
		}
		seal(t, s.Dir)
		return s.Push(ctx)
	}
	whole := newFaulty(filepath.Join(dir, "whole"))
	if err := work(process(t, whole)); err != nil {
		t.Fatal(err)
	}
	want := contents(t, filepath.Join(dir, "whole"))
	steps := len(slices.DeleteFunc(whole.log, func(s string) bool { return strings.HasPrefix(s, "remove") }))
	for fatal := range steps {
		lab := filepath.Join(dir, fmt.Sprint("lab", fatal))
		f, n := newFaulty(lab), 0
		f.commit = func(string) error {
			if n++; n > fatal {
				return errTrouble // and from here on
			}
			return nil
		}
		if err := work(process(t, f)); err == nil {
			t.Fatalf("write %d fails without an error", fatal)
		}
		if _, err := os.Stat(filepath.Join(lab, "sets", "one", "manifest.json")); err == nil {
			t.Errorf("write %d fails, and there is a manifest", fatal)
		}
		f.commit = func(string) error { return nil }
		if err := work(process(t, f)); err != nil {
			t.Fatalf("after write %d had failed: %v", fatal, err)
		}
		if diff := cmp.Diff(want, contents(t, lab)); diff != "" {
			t.Errorf("after write %d had failed: %s", fatal, diff)
		}
	}
}

// TestAnotherPlan: a run of another plan that began in the same instant is told.
func TestAnotherPlan(t *testing.T) {
	ctx := context.Background()
	f := newFaulty(t.TempDir())
	one, other := process(t, f), process(t, f)
	fill(t, one.Dir, shard(0), 0)
	o := shard(0)
	o.Seed = 9
	fill(t, other.Dir, o, 0)
	if err := one.Push(ctx); err != nil {
		t.Fatal(err)
	}
	if err := other.Push(ctx); err == nil || !strings.Contains(err.Error(), "a set of another plan") {
		t.Errorf("error %v", err)
	}
	if _, err := export.Create(process(t, f).Dir, layout(), export.Options{Buckets: buckets}); err != nil {
		t.Errorf("the set of the first cannot be gone on with: %v", err)
	}
}

// TestTidy: records that come after the seal are removed, and nothing else.
func TestTidy(t *testing.T) {
	ctx, dir := context.Background(), t.TempDir()
	f := newFaulty(dir)
	s := store.Set{Transfer: store.Transfer{Store: f, Pause: time.Microsecond}, Prefix: "a/"}
	for _, name := range []string{"a/manifest.json", "a/unfinished/bucket-00000.json", "b/unfinished/plan.json"} {
		if err := s.PutBytes(ctx, []byte("{}"), name); err != nil {
			t.Fatal(err)
		}
	}
	if err := s.Tidy(ctx); err != nil {
		t.Fatal(err)
	}
	if got := contents(t, dir); len(got) != 2 || got["a/manifest.json"] == "" {
		t.Errorf("left are %v", got)
	}
}
