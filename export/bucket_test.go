package export_test

import (
	"fmt"
	"math/rand/v2"
	"path/filepath"
	"strings"
	"sync"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/export"
)

// writeBucket writes those of the takes that belong to a bucket, and finishes it.
func writeBucket(w *export.Writer, number int, takes []*channels.Take) error {
	b := w.Bucket(number)
	defer b.Abandon()
	for _, t := range takes {
		if export.BucketOf(sourceOf(t), w.Buckets()) != number {
			continue
		}
		if err := b.Add(t); err != nil {
			return err
		}
		b.Tally("takes", 1)
	}
	return b.Finish()
}

func sourceOf(t *channels.Take) string {
	if t.Made != nil {
		return t.Made.Source
	}
	return t.ID
}

// ensemble returns the takes of many sources.
func ensemble(l *channels.Layout, sources int) []*channels.Take {
	r := newRand()
	var out []*channels.Take
	for s := range sources {
		t := perform(l, fmt.Sprintf("take-%d", s), 12+s%5, r)
		if s%5 == 4 {
			t.Split = channels.Test
			out = append(out, t)
			continue
		}
		out = append(out, t, vary(t, 0, r), vary(t, 1, r))
	}
	return out
}

// shard writes one shard of a set; shard 0 attaches and notes.
func shard(t testing.TB, dir string, l *channels.Layout, o export.Options, takes []*channels.Take) error {
	w, err := export.Create(dir, l, o)
	if err != nil {
		return err
	}
	defer w.Close()
	todo, err := w.Todo()
	for i := 0; i < len(todo) && err == nil; i++ {
		err = writeBucket(w, todo[i], takes)
	}
	if err == nil && o.Shard == 0 {
		if err = w.Attach("score.json", []byte("{}")); err == nil {
			err = w.Note("a notice")
		}
	}
	return err
}

// whole writes the same set by one writer, and returns it.
func whole(t testing.TB, l *channels.Layout, o export.Options, takes []*channels.Take) map[string]string {
	t.Helper()
	dir := t.TempDir()
	w, err := export.Create(dir, l, o)
	if err != nil {
		t.Fatal(err)
	}
	for number := range w.Buckets() {
		if err := writeBucket(w, number, takes); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Attach("score.json", []byte("{}")); err != nil {
		t.Fatal(err)
	}
	if _, err := w.Seal("a notice"); err != nil {
		t.Fatal(err)
	}
	return tree(t, dir)
}

// TestShardsMakeTheSameSet writes shards in random order, some at the same
// time, some twice: sealed, the set is byte for byte that of one writer.
func TestShardsMakeTheSameSet(t *testing.T) {
	l := wristband(t)
	takes := ensemble(l, 60)
	o := both()
	o.Buckets = 8
	want := whole(t, l, o, takes)
	for _, shards := range []int{1, 2, 3, 8, 11} {
		dir := filepath.Join(t.TempDir(), "set")
		order := rand.New(rand.NewPCG(uint64(shards), 5)).Perm(shards)
		order = append(order, order[:shards/2]...)
		var together sync.WaitGroup
		for _, s := range order {
			together.Go(func() {
				o := o
				o.Shard, o.Shards = s, shards
				if err := shard(t, dir, l, o, takes); err != nil {
					t.Errorf("shard %d of %d: %v", s, shards, err)
				}
			})
		}
		together.Wait()
		m, err := export.Seal(dir)
		if err != nil {
			t.Fatal(err)
		}
		if diff := cmp.Diff(want, tree(t, dir)); diff != "" {
			t.Errorf("%d shards: the set is not that of one writer:\n%s", shards, diff)
		}
		if m.Tallies["takes"] != int64(len(takes)) || m.Buckets != 8 {
			t.Errorf("%d shards: tallies %v in %d buckets, want %d takes", shards, m.Tallies, m.Buckets, len(takes))
		}
		if again, err := export.Seal(dir); err != nil || again.Seal != m.Seal {
			t.Errorf("sealed again: %v", err)
		}
	}
}

// TestSealNamesWhatIsMissing: a set is not sealed before all shards are there.
func TestSealNamesWhatIsMissing(t *testing.T) {
	l := wristband(t)
	takes := ensemble(l, 20)
	dir := filepath.Join(t.TempDir(), "set")
	o := both()
	o.Buckets, o.Shards = 4, 2
	refused := func(want string) {
		t.Helper()
		if _, err := export.Seal(dir); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("error %v, want one with %q", err, want)
		}
	}
	refused("holds no unfinished set")
	o.Shard = 1
	if err := shard(t, dir, l, o, takes); err != nil {
		t.Fatal(err)
	}
	refused("2 of 4 buckets are not finished: 0, 2")
	other := o
	other.Seed++
	if _, err := export.Create(dir, l, other); err == nil || !strings.Contains(err.Error(), "seed was") {
		t.Errorf("a shard of another plan: %v", err)
	}
	w, err := export.Create(dir, l, o)
	if err != nil {
		t.Fatal(err)
	}
	refused("another process is writing this set")
	if todo, err := w.Todo(); err != nil || len(todo) > 0 {
		t.Errorf("shard 1 has %v left to do, %v", todo, err)
	}
	if kept, err := w.Close(); !kept || err != nil {
		t.Errorf("Close of a shard: kept %v, %v", kept, err)
	}
	w, err = export.Create(dir, l, export.Options{Tables: o.Tables, RowGroupBytes: o.RowGroupBytes, FileBytes: o.FileBytes, Buckets: 4, Version: o.Version, Seed: o.Seed, Plan: o.Plan, Recordings: o.Recordings})
	if err != nil {
		t.Fatal(err)
	}
	if w.Resumed() != 2 {
		t.Errorf("one writer goes on with %d buckets of a shard, want 2", w.Resumed())
	}
	for _, number := range []int{0, 2} {
		if err := writeBucket(w, number, takes); err != nil {
			t.Fatal(err)
		}
	}
	if kept, err := w.Close(); !kept || err != nil {
		t.Errorf("Close: kept %v, %v", kept, err)
	}
	refused("shard 0, which scores the set, has not finished")
}

// TestBucketsDecideNothingButTheFiles: every take is in the set once, whatever
// the number of buckets, and each bucket holds its own.
func TestBucketsDecideNothingButTheFiles(t *testing.T) {
	l := wristband(t)
	takes := ensemble(l, 30)
	for _, buckets := range []int{1, 2, 5, 64} {
		o := both()
		o.Buckets = buckets
		dir := t.TempDir()
		write(t, dir, l, o, takes)
		if !sound(t, dir) {
			t.Errorf("%d buckets: not sound", buckets)
		}
		m, err := export.ReadManifest(dir)
		if err != nil {
			t.Fatal(err)
		}
		if n := m.Takes(channels.Recorded) + m.Takes(channels.Synthetic); n != int64(len(takes)) {
			t.Errorf("%d buckets: %d takes, want %d", buckets, n, len(takes))
		}
	}
}

func TestBucketRefusesOthersTakes(t *testing.T) {
	l := wristband(t)
	o := both()
	o.Buckets = 2
	w, err := export.Create(t.TempDir(), l, o)
	if err != nil {
		t.Fatal(err)
	}
	defer w.Discard()
	take := perform(l, "take", 12, newRand())
	at := export.BucketOf("take", 2)
	if err := w.Bucket(1 - at).Add(take); err == nil || !strings.Contains(err.Error(), "belongs to bucket") {
		t.Errorf("error %v, want one that names the bucket", err)
	}
	b := w.Bucket(at)
	if err := b.Add(take); err != nil {
		t.Fatal(err)
	}
	if err := b.Finish(); err != nil {
		t.Fatal(err)
	}
	if err := b.Add(take); err == nil {
		t.Error("a finished bucket takes more")
	}
	if err := b.Abandon(); err != nil {
		t.Error(err)
	}
}

// TestBuckets: the fewest, a power of two, that keep files within their size.
func TestBuckets(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		bytes := rapid.Int64Range(0, 1<<50).Draw(t, "bytes")
		file := rapid.Int64Range(1, 1<<40).Draw(t, "file")
		n := int64(export.Buckets(bytes, file))
		if n < 1 || n&(n-1) != 0 || n > 1<<20 {
			t.Fatalf("%d buckets", n)
		}
		if bytes/n > file && n < 1<<20 {
			t.Errorf("%d buckets of %d bytes each, more than %d", n, bytes/n, file)
		}
		if n > 1 && bytes/(n/2) <= file {
			t.Errorf("%d buckets are more than needed", n)
		}
	})
}

// TestBucketOf holds the function to values reckoned apart, with
//
//	printf %s ada-1 | sha256sum | cut -c 1-16
func TestBucketOf(t *testing.T) {
	for _, tc := range []struct {
		source  string
		buckets int
		want    int
	}{
		{"ada-1", 1, 0}, {"ada-1", 256, 0x09}, {"", 256, 0x14},
	} {
		if got := export.BucketOf(tc.source, tc.buckets); got != tc.want {
			t.Errorf("%q of %d: bucket %d, want %d", tc.source, tc.buckets, got, tc.want)
		}
	}
}
