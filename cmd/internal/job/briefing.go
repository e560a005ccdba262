package job

import (
	"context"
	"errors"
	"fmt"
	"maps"
	"os"
	"path/filepath"
	"slices"
	"sync"

	"strandwise/augment"
	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/cmd/internal/spill"
	"strandwise/export"
	"strandwise/export/marks"
	"strandwise/ingest"
)

// Briefing is all that a process must know to make any bucket of a set, apart
// from the recordings: the plan, and what the survey found. It is encoded by
// encoding/gob. Its size is that of the bounded sample of takes from which is
// measured. On another kind of processor the same arithmetic may round otherwise
// (a fused multiplication and addition), so the processes of one set must run on
// one kind.
type Briefing struct {
	Plan    Plan
	Given   map[string]bool   // keys that the plan states
	Beside  map[string][]byte // files that the plan names, by key
	Version string
	Options export.Options
	Held    map[string]bool // people kept for the test; nil keeps the splits of the recordings
	Files   []ingest.File

	Layout    channels.Layout
	Skeletons []body.Skeleton
	Takes     []Sampled // from which is measured, in order
	Scales    channels.Scales
}

// Sampled is a take of the sample. Its layout is that of the briefing, and so is
// its skeleton, by number from 0, −1 for none.
type Sampled struct {
	Take     channels.Take
	Skeleton int
}

// Briefing returns what the others must know.
func (a *Apart) Briefing() (*Briefing, error) {
	b := &Briefing{
		Plan: *a.g.plan, Given: a.g.plan.given, Beside: map[string][]byte{}, Version: a.g.version, Options: a.options,
		Held: a.held, Layout: *a.found.layout, Scales: a.found.scales,
	}
	b.Files = append(b.Files, a.g.recordings.Files()...)
	for key, n := range b.Plan.named() {
		if *n.path == "" {
			continue
		}
		text, err := os.ReadFile(filepath.Join(*n.path, n.file))
		if err != nil {
			return nil, err
		}
		b.Beside[key] = text
	}
	number := map[*body.Skeleton]int{}
	for _, t := range a.training {
		s := Sampled{Take: *t, Skeleton: -1}
		if t.Skeleton != nil {
			n, met := number[t.Skeleton]
			if !met {
				n = len(b.Skeletons)
				number[t.Skeleton] = n
				b.Skeletons = append(b.Skeletons, *t.Skeleton)
			}
			s.Skeleton = n
		}
		s.Take.Layout, s.Take.Skeleton = nil, nil
		b.Takes = append(b.Takes, s)
	}
	return b, nil
}

// named is a file that a plan names: a path, or this file in a folder of that
// path.
type named struct {
	path *string
	file string
}

// named returns the files that the plan names, the recordings apart, by key.
func (p *Plan) named() map[string]named {
	return map[string]named{
		"annotations": {&p.Annotations, ""}, "variation": {&p.Variation, ""}, "subject_salt": {&p.SubjectSalt, ""},
		"marks": {&p.Marks, marks.Name},
	}
}

// besideIn writes the files that the plan names into a folder, and has the plan
// name them there.
func (b *Briefing) besideIn(dir string, p *Plan) error {
	for key, n := range p.named() {
		text, there := b.Beside[key]
		if !there {
			continue
		}
		*n.path = filepath.Join(dir, key)
		at := filepath.Join(*n.path, n.file)
		if err := os.MkdirAll(filepath.Dir(at), 0o700); err != nil {
			return err
		}
		if err := os.WriteFile(at, text, 0o600); err != nil {
			return err
		}
	}
	return nil
}

// training returns the sample as it was.
func (b *Briefing) training() []*channels.Take {
	var out []*channels.Take
	for _, s := range b.Takes {
		t := s.Take
		t.Layout = &b.Layout
		if s.Skeleton >= 0 {
			t.Skeleton = &b.Skeletons[s.Skeleton]
		}
		out = append(out, &t)
	}
	return out
}

// Maker makes shards of one set. Its methods may be called at the same time.
type Maker struct {
	g       *growing
	maker   *augment.Maker
	options export.Options
	layout  *channels.Layout
	held    holdOut
	scratch string
	reading sync.Mutex // one pass over the recordings at a time
}

// Maker measures the briefing's sample and returns what makes shards. What is
// temporary goes into the folder scratch. recordings is nil when they are files
// of this machine. The caller closes it.
func (b *Briefing) Maker(ctx context.Context, scratch string, recordings Remote) (*Maker, error) {
	p := b.Plan
	p.given, p.flags, p.shard = b.Given, b.Given, nil
	if err := b.besideIn(scratch, &p); err != nil {
		return nil, err
	}
	p.Out = filepath.Join(scratch, "none") // sets are made where Make says
	g, err := p.prepareAt(recordings, b.Version, silent{})
	if err != nil {
		return nil, err
	}
	m := &Maker{g: g, options: b.Options, layout: &b.Layout, scratch: scratch, held: b.Held}
	if err := g.recordings.Expect(b.Files); err != nil {
		return nil, errors.Join(err, m.Close())
	}
	known, err := g.making.learn(ctx, b.training(), &b.Scales, ready)
	if err == nil {
		m.maker, err = augment.NewMaker(g.making.variation, known, p.Seed)
	}
	if err != nil {
		return nil, errors.Join(err, m.Close())
	}
	return m, nil
}

// Shards returns the number of shards of the set.
func (m *Maker) Shards() int { return m.options.Shards }

// Close lets go of the recordings.
func (m *Maker) Close() error { return m.g.recordings.Close() }

// Made is a finished bucket.
type Made struct {
	Bucket    int
	Synthetic int64            // takes that were made
	Recorded  int64            // takes that were passed on
	Bytes     int64            // of the files
	Failed    map[string]int64 // draws that a gate refused, by its name
}

// Make makes the buckets of one shard that are not finished yet, in the folder
// of a set that was begun, and reports each. The references are those of all
// recorded takes of the shard, in any order. Several processes may make the same
// shard: they put the same bytes in place.
func (m *Maker) Make(ctx context.Context, dir string, shard int, refs []Reference, report func(Made) error) error {
	o := m.options
	o.Shard = shard
	w, err := export.Create(dir, m.layout, o)
	if err != nil {
		return err
	}
	err = m.make(ctx, w, refs, report)
	_, closed := w.Close()
	return errors.Join(err, closed)
}

func (m *Maker) make(ctx context.Context, w *export.Writer, refs []Reference, report func(Made) error) error {
	todo, err := w.Todo()
	if err != nil {
		return err
	}
	for some := range slices.Chunk(todo, bucketsAtOnce) {
		kept, err := m.keep(ctx, w, some, refs)
		if err != nil {
			return err
		}
		for _, number := range some {
			if err == nil {
				err = m.bucket(ctx, w, number, kept.Takes(number), report)
			}
		}
		if err = errors.Join(err, kept.Close()); err != nil {
			return err
		}
	}
	return nil
}

// keep reads the takes of some buckets, all of which must be there and no
// others.
func (m *Maker) keep(ctx context.Context, w *export.Writer, some []int, refs []Reference) (*spill.Spill, error) {
	m.reading.Lock()
	defer m.reading.Unlock()
	kept, err := spill.New(m.scratch)
	if err != nil {
		return nil, err
	}
	wanted, files := map[string]bool{}, map[int]bool{}
	for _, r := range refs {
		if _, in := slices.BinarySearch(some, export.BucketOf(r.Take, w.Buckets())); in {
			wanted[r.Take], files[r.File] = true, true
		}
	}
	takes := m.held.apply(m.g.recordings.TakesOf(slices.Sorted(maps.Keys(files))))
	for t, err := range m.g.within(takes, w, some) {
		if err == nil {
			err = ctx.Err()
		}
		if id := ""; err == nil {
			if id = m.g.writing.take(t).ID; !wanted[id] {
				err = fmt.Errorf("take %s is there, and was not when the recordings were first read", t.ID)
			}
			delete(wanted, id)
		}
		if err == nil {
			err = kept.Add(m.g.bucketOf(t, w), t)
		}
		if err != nil {
			return nil, errors.Join(err, kept.Close())
		}
	}
	if len(wanted) > 0 {
		return nil, errors.Join(fmt.Errorf("take %s is not there any more", slices.Sorted(maps.Keys(wanted))[0]), kept.Close())
	}
	return kept, nil
}

// bucket makes one bucket.
func (m *Maker) bucket(ctx context.Context, w *export.Writer, number int, takes channels.Stream, report func(Made) error) error {
	b := w.Bucket(number)
	defer b.Abandon()
	made := Made{Bucket: number, Failed: map[string]int64{}}
	put := func(t *channels.Take) error {
		if t.Origin() == channels.Recorded {
			made.Recorded++
		} else {
			made.Synthetic++
		}
		return b.Add(t)
	}
	became := func(_ string, t augment.Tally) {
		tally(b, t)
		for gate, n := range t.Gates.Failed {
			made.Failed[gate.String()] += int64(n)
		}
	}
	if err := m.g.make(ctx, takes, m.maker, put, became); err != nil {
		return err
	}
	if err := b.Finish(); err != nil {
		return err
	}
	_, made.Bytes = b.Size()
	return report(made)
}
