package export

import (
	"crypto/sha256"
	"encoding/binary"
	"errors"
	"fmt"

	"strandwise/channels"
)

// BucketOf returns the bucket of a source take and of all takes made from it:
// the first eight bytes of the SHA-256 of its id, as a big-endian number,
// modulo the number of buckets.
func BucketOf(source string, buckets int) int {
	sum := sha256.Sum256([]byte(source))
	return int(binary.BigEndian.Uint64(sum[:8]) % uint64(buckets))
}

// sourceOf returns the id of the source take that a take belongs to: its own
// when it was recorded.
func sourceOf(t *channels.Take) string {
	if t.Made != nil {
		return t.Made.Source
	}
	return t.ID
}

// Buckets returns the number of buckets of a set of so many bytes in its
// largest table and split: the smallest power of two by which a bucket's file
// is no larger than fileBytes, on average. It is at most 2^20.
func Buckets(bytes, fileBytes int64) int {
	n := 1
	for int64(n) < maxBuckets && bytes/int64(n) > fileBytes {
		n *= 2
	}
	return n
}

const maxBuckets = 1 << 20

// Bucket is one part of a set while it is written: a Parquet file for each
// table and split, or more when it is much larger than its share. It is not
// safe for concurrent use: the order of the rows is the order of the calls, and
// so are the bytes. Several buckets of one writer may be written at a time.
type Bucket struct {
	set     *Writer
	number  int
	tables  map[tableKey]*table
	open    []*table // in the order of their first row
	accepts *channels.Layout
	counts  counts
	tallies map[string]int64
	files   []File
	err     error // the failure, or the end, after which nothing more is written
}

// Bucket begins a bucket, from 0. One that was finished before, by this
// process or another, may be written again: the same takes give the same bytes.
func (w *Writer) Bucket(number int) *Bucket {
	if number < 0 || number >= w.options.Buckets {
		panic("export: no bucket of this number")
	}
	return &Bucket{set: w, number: number, tables: map[tableKey]*table{}, accepts: w.layout, counts: counts{}, tallies: map[string]int64{}}
}

// Add writes one take as the next row of its split's tables. It copies what
// it needs. A take that cannot stand in a set (it has another layout, a value
// that is no 32-bit float, or is made but meant for testing), or belongs to
// another bucket, is an error that names the reason, and nothing of it is
// written. After a failed write every further call returns that failure.
func (b *Bucket) Add(t *channels.Take) error {
	if b.err != nil {
		return b.err
	}
	if err := b.check(t); err != nil {
		return err
	}
	split := t.Split
	if split == channels.None {
		split = channels.Train
	}
	for _, kind := range b.set.options.Tables {
		if err := b.table(kind, split).add(t); err != nil {
			return b.fail(fmt.Errorf("write %s: %w", kind, err))
		}
	}
	b.counts.add(split, t.Label, t.Origin(), 1, int64(t.Frames()))
	return nil
}

// Tally counts n of something that the manifest shall tell of, such as takes
// that the gate of this name refused; the counts of all buckets are added up there.
func (b *Bucket) Tally(name string, n int64) { b.tallies[name] += n }

// table returns the table for a split, new at its first take.
func (b *Bucket) table(kind Table, split channels.Split) *table {
	key := tableKey{kind, split}
	t := b.tables[key]
	if t == nil {
		t = newTable(b, kind, split)
		b.tables[key] = t
		b.open = append(b.open, t)
	}
	return t
}

// Finish puts the bucket's files in place and records that it is finished, so
// that no later run makes it again.
func (b *Bucket) Finish() error {
	if b.err != nil {
		return b.err
	}
	if err := b.finish(); err != nil {
		return b.fail(fmt.Errorf("finish bucket %d: %w", b.number, err))
	}
	b.err = errBucketFinished
	return nil
}

// Size returns the number of the bucket's finished files, and their bytes.
func (b *Bucket) Size() (files int, bytes int64) {
	for _, f := range b.files {
		bytes += f.Bytes
	}
	return len(b.files), bytes
}

func (b *Bucket) finish() error {
	for _, t := range b.open {
		if err := t.end(); err != nil {
			return err
		}
	}
	return b.set.record(bucketRecord(b.number), finished{Files: b.files, Counts: b.counts.list(), Tallies: b.tallies})
}

// Abandon removes what is unfinished of the bucket. It does nothing once the
// bucket is finished, so it can be deferred.
func (b *Bucket) Abandon() error {
	if errors.Is(b.err, errBucketFinished) {
		return nil
	}
	b.err = errDiscarded
	var errs []error
	for _, t := range b.open {
		errs = append(errs, t.abandon())
	}
	return errors.Join(errs...)
}

var errBucketFinished = errors.New("the bucket is finished already")

func (b *Bucket) fail(err error) error {
	b.err = err
	return err
}
