package main

import (
	"context"
	"fmt"
	"reflect"

	"github.com/apache/beam/sdks/v2/go/pkg/beam"
	_ "github.com/apache/beam/sdks/v2/go/pkg/beam/core/runtime/exec/optimized"
	beamregister "github.com/apache/beam/sdks/v2/go/pkg/beam/register"
	_ "github.com/apache/beam/sdks/v2/go/pkg/beam/runners/prism"
	_ "github.com/apache/beam/sdks/v2/go/pkg/beam/runners/universal"

	"strandwise/augment/gate"
	"strandwise/cmd/internal/job"
	"strandwise/export"
)

// register makes the functions of the pipeline known to Beam, by names that are
// the same in every process.
func register() {
	beam.RegisterType(reflect.TypeFor[job.Reference]())
	beamregister.DoFn2x0[int, func(int, job.Reference)](&announce{})
	beamregister.DoFn3x1[context.Context, int, func(int, job.Reference), error](&refer{})
	beamregister.DoFn3x1[context.Context, int, func(*job.Reference) bool, error](&makeShard{})
	beamregister.Emitter2[int, job.Reference]()
	beamregister.Iter1[job.Reference]()
}

// pipeline returns the work of one run: numbered files of references in, each
// shard made once.
//
//	files ──▶ references, keyed by shard ──┐
//	shards ─▶ one empty reference each ────┴─▶ group by shard ─▶ make the shard
func pipeline(w Work, files, shards, buckets int) *beam.Pipeline {
	p, s := beam.NewPipelineWithRoot()
	references := beam.ParDo(s.Scope("refer"), &refer{Work: w, Shards: shards, Buckets: buckets}, numbers(s, files))
	every := beam.ParDo(s.Scope("announce"), &announce{}, numbers(s, shards))
	grouped := beam.GroupByKey(s, beam.Flatten(s, references, every))
	beam.ParDo0(s.Scope("make"), &makeShard{Work: w}, grouped)
	return p
}

// numbers returns the numbers below n, each to be worked on by itself.
func numbers(s beam.Scope, n int) beam.PCollection {
	list := make([]int, n)
	for i := range list {
		list[i] = i
	}
	return beam.Reshuffle(s, beam.CreateList(s, list))
}

// announce sees to it that a shard without takes is made too: its buckets must be
// finished, though empty.
type announce struct{}

// ProcessElement emits an empty reference.
func (announce) ProcessElement(shard int, emit func(int, job.Reference)) {
	emit(shard, job.Reference{})
}

// refer reads references, and says to which shard each take belongs: the bucket
// that the hash of its id says, modulo the number of shards.
type refer struct {
	Work    Work
	Shards  int
	Buckets int
}

// ProcessElement reads one file of references.
func (f *refer) ProcessElement(ctx context.Context, file int, emit func(int, job.Reference)) error {
	var refs []job.Reference
	if err := f.Work.read(ctx, referencesName(file), &refs); err != nil {
		return err
	}
	for _, r := range refs {
		emit(export.BucketOf(r.Take, f.Buckets)%f.Shards, r)
	}
	return nil
}

// here are the workers of this process.
var here = &workers{made: map[Work]*worker{}}

// makeShard makes a shard from the references to its takes.
type makeShard struct {
	Work Work
}

// namespace is that of the metrics.
const namespace = "strandwise"

// ProcessElement makes one shard. What it is killed in is made again by the next
// that gets the shard, from its last finished bucket on.
func (f *makeShard) ProcessElement(ctx context.Context, shard int, refs func(*job.Reference) bool) error {
	w, err := here.of(ctx, f.Work)
	if err != nil {
		return err
	}
	var list []job.Reference
	for r := (job.Reference{}); refs(&r); {
		if r.Take != "" {
			list = append(list, r)
		}
	}
	count(ctx, 0, job.Made{}) // some runners lose a counter that they first hear of at the end
	err = w.make(ctx, f.Work, shard, list, func(m job.Made) { count(ctx, 1, m) })
	if err != nil {
		return fmt.Errorf("shard %d: %w", shard, err)
	}
	return nil
}

// count adds finished buckets to the metrics.
func count(ctx context.Context, buckets int64, m job.Made) {
	add := func(name string, n int64) { beam.NewCounter(namespace, name).Inc(ctx, n) }
	add("buckets", buckets)
	add("takes made", m.Synthetic)
	add("takes recorded", m.Recorded)
	add("bytes", m.Bytes)
	for _, g := range gate.All() {
		add("gate "+g.String(), m.Failed[g.String()])
	}
}
