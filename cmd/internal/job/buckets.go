package job

import (
	"context"
	"fmt"
	"slices"

	"strandwise/augment"
	"strandwise/channels"
	"strandwise/cmd/internal/spill"
	"strandwise/export"
)

// bucketsAtOnce is the number of buckets that one pass over the recordings
// serves: 32 GB of files of the default size, for which about a gigabyte of
// recorded takes is kept in a temporary file.
const bucketsAtOnce = 256

// divide says in how many buckets the set is written: as many as the plan says,
// or as give files of the size it says. Both depend on nothing but the plan and
// the recordings. It returns the bytes that the set will about have.
func (g *growing) divide(o *export.Options, s *survey) int64 {
	total, largest := o.Estimate(len(s.layout.Channels), g.extents(s)...)
	o.Buckets = g.plan.Buckets
	if o.Buckets == 0 {
		o.Buckets = export.Buckets(largest, g.plan.FileBytes)
	}
	if s := g.plan.shard; s != nil {
		o.Shard, o.Shards = s.Index, s.Of
	}
	return total
}

// extents returns how much of each split the set will hold.
func (g *growing) extents(s *survey) []export.Extent {
	each := int64(1 + g.plan.PerTake)
	if g.plan.Keep > 0 {
		each = int64(1 + min(g.plan.Keep, g.plan.PerTake))
	}
	return []export.Extent{
		{Takes: int64(s.trains) * each, Frames: int64(s.trainFrames) * each},
		{Takes: int64(s.takes - s.trains), Frames: int64(s.frames - s.trainFrames)},
	}
}

// room tells how much will be written, and refuses when that does not fit.
func (g *growing) room(w *export.Writer, todo int, total int64, notice func(string)) error {
	const muchBytes = 1e9
	bytes := total * int64(todo) / int64(w.Buckets())
	free, known := export.Free(g.plan.Out)
	if known && free < bytes {
		return fmt.Errorf("%s: about %s are to be written, and %s are free there; make room, or fewer takes (--per-take) or tables (--tables)", g.plan.Out, size(bytes), size(free))
	}
	if bytes > muchBytes {
		notice(fmt.Sprintf("about %s will be written to %s", size(bytes), g.plan.Out))
	}
	return nil
}

func size(bytes int64) string {
	if bytes >= 1e9 {
		return fmt.Sprintf("%.1f GB", float64(bytes)/1e9)
	}
	return fmt.Sprintf("%.1f MB", float64(bytes)/1e6)
}

// fill makes the buckets that are this run's to make and not finished yet.
func (g *growing) fill(ctx context.Context, w *export.Writer, takes channels.Stream, maker *augment.Maker, total int64, notice func(string)) error {
	todo, err := w.Todo()
	if err != nil {
		return err
	}
	if err := g.room(w, len(todo), total, notice); err != nil {
		return err
	}
	own := g.ownBuckets(w)
	if n := own - len(todo); n > 0 {
		notice(fmt.Sprintf("going on with the unfinished set in %s: %d of %d buckets are finished", g.plan.Out, n, own))
	}
	g.done.Buckets, g.done.Resumed = own, own-len(todo)
	steps := int64(g.done.Recorded+g.done.Synthetic) * int64(len(todo)) / int64(w.Buckets())
	g.progress.Begin("growing", steps, "takes")
	for some := range slices.Chunk(todo, bucketsAtOnce) {
		if err := g.fillSome(ctx, w, some, takes, maker); err != nil {
			return err
		}
	}
	return nil
}

// fillSome makes some buckets from one pass over the recordings.
func (g *growing) fillSome(ctx context.Context, w *export.Writer, some []int, takes channels.Stream, maker *augment.Maker) error {
	if len(some) == 1 {
		return g.fillBucket(ctx, w, some[0], g.within(takes, w, some), maker)
	}
	kept, err := spill.New("")
	if err != nil {
		return err
	}
	defer kept.Close()
	for t, err := range g.within(takes, w, some) {
		if err == nil {
			err = ctx.Err()
		}
		if err == nil {
			err = kept.Add(g.bucketOf(t, w), t)
		}
		if err != nil {
			return err
		}
	}
	for _, number := range some {
		if err := g.fillBucket(ctx, w, number, kept.Takes(number), maker); err != nil {
			return err
		}
	}
	return nil
}

// bucketOf returns the bucket of a recorded take, by the id it has in the set.
func (g *growing) bucketOf(t *channels.Take, w *export.Writer) int {
	return export.BucketOf(g.writing.take(t).ID, w.Buckets())
}

// within passes on the recorded takes of some buckets, given in ascending order.
func (g *growing) within(takes channels.Stream, w *export.Writer, some []int) channels.Stream {
	return func(yield func(*channels.Take, error) bool) {
		for t, err := range takes {
			if err == nil {
				if _, in := slices.BinarySearch(some, g.bucketOf(t, w)); !in {
					continue
				}
			}
			if !yield(t, err) {
				return
			}
		}
	}
}

// tally counts in a bucket what became of the draws of a source, so that the
// manifest and the card tell of it whichever run made the bucket.
func tally(b *export.Bucket, t augment.Tally) {
	b.Tally("takes wanted", int64(t.Wanted))
	b.Tally("takes made", int64(t.Made))
	b.Tally("sources refused", int64(t.Refused))
	b.Tally("takes dropped by a person", int64(t.Dropped))
	b.Tally("draws checked", int64(t.Gates.Checked))
	for gate, n := range t.Gates.Failed {
		b.Tally(gate.String(), int64(n))
	}
}

// fillBucket makes one bucket from its recorded takes.
func (g *growing) fillBucket(ctx context.Context, w *export.Writer, number int, takes channels.Stream, maker *augment.Maker) error {
	b := w.Bucket(number)
	defer b.Abandon()
	if err := g.make(ctx, takes, maker, b.Add, func(_ string, t augment.Tally) { tally(b, t) }); err != nil {
		return err
	}
	if err := b.Finish(); err != nil {
		return err
	}
	files, bytes := b.Size()
	g.done.Files += files
	g.done.Bytes += bytes
	return nil
}
