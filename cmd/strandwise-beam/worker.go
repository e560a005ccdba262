package main

import (
	"bytes"
	"context"
	"encoding/gob"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"sync"

	"strandwise/cmd/internal/job"
)

// Work says where the processes of one run find what they need. It is a part of
// the pipeline.
type Work struct {
	Set  Place
	Work Place // briefing and references
}

// The names of what lies at the place of the work.
const briefingName = "briefing.gob"

func referencesName(n int) string { return fmt.Sprintf("references-%06d.gob", n) }

// worker makes shards of one set in this process.
type worker struct {
	maker   *job.Maker
	scratch string
	shut    func() error
}

// newWorker reads the briefing and measures.
func newWorker(ctx context.Context, w Work) (*worker, error) {
	scratch, err := os.MkdirTemp("", "strandwise-beam-")
	if err != nil {
		return nil, err
	}
	out := &worker{scratch: scratch, shut: func() error { return nil }}
	if err := out.begin(ctx, w); err != nil {
		return nil, errors.Join(fmt.Errorf("begin work: %w", err), out.close())
	}
	return out, nil
}

func (o *worker) begin(ctx context.Context, w Work) error {
	var b job.Briefing
	if err := w.read(ctx, briefingName, &b); err != nil {
		return err
	}
	for _, folder := range []string{"recordings", "beside"} {
		if err := os.Mkdir(filepath.Join(o.scratch, folder), 0o777); err != nil {
			return err
		}
	}
	there, shut, err := recordings(ctx, b.Plan.Recordings, filepath.Join(o.scratch, "recordings"))
	o.shut = shut
	if err != nil {
		return err
	}
	var remote job.Remote
	if there != nil {
		remote = there
	}
	o.maker, err = b.Maker(ctx, filepath.Join(o.scratch, "beside"), remote)
	return err
}

func (o *worker) close() error {
	var err error
	if o.maker != nil {
		err = o.maker.Close()
	}
	return errors.Join(err, o.shut(), os.RemoveAll(o.scratch))
}

// make makes what is not finished of a shard. A set that another run has sealed
// meanwhile needs nothing.
func (o *worker) make(ctx context.Context, w Work, shard int, refs []job.Reference, report func(job.Made)) error {
	room, err := os.MkdirTemp(o.scratch, "shard-")
	if err != nil {
		return err
	}
	defer os.RemoveAll(room)
	own := func(bucket int) bool { return bucket%o.maker.Shards() == shard }
	shop, err := openWorkshop(ctx, w.Set, filepath.Join(room, "set"), own)
	if err != nil {
		return err
	}
	done := func(m job.Made) error {
		if err := shop.push(ctx); err != nil {
			return err
		}
		report(m)
		return nil
	}
	if !shop.whole() {
		err = patiently(ctx, func() error { return o.maker.Make(ctx, shop.dir, shard, refs, done) })
	}
	if err != nil && shop.whole() {
		err = nil
	}
	return errors.Join(err, shop.close())
}

// read reads what another process has put at the place of the work.
func (w Work) read(ctx context.Context, name string, v any) error {
	t, prefix, shut, err := w.Work.open(ctx)
	if err != nil {
		return err
	}
	data, err := t.GetBytes(ctx, prefix+name)
	if err == nil {
		err = gob.NewDecoder(bytes.NewReader(data)).Decode(v)
	}
	return errors.Join(err, shut())
}

// write puts something there.
func (w Work) write(ctx context.Context, name string, v any) error {
	t, prefix, shut, err := w.Work.open(ctx)
	if err != nil {
		return err
	}
	var b bytes.Buffer
	if err = gob.NewEncoder(&b).Encode(v); err == nil {
		err = t.PutBytes(ctx, b.Bytes(), prefix+name)
	}
	return errors.Join(err, shut())
}

// remove takes all of it away.
func (w Work) remove(ctx context.Context) error {
	t, prefix, shut, err := w.Work.open(ctx)
	if err != nil {
		return err
	}
	found, err := t.List(ctx, prefix)
	for _, o := range found {
		if err == nil {
			err = t.Remove(ctx, o.Name)
		}
	}
	if dir, local := w.folder(); err == nil && local {
		err = os.RemoveAll(dir)
	}
	return errors.Join(err, shut())
}

// workers are those of this process. Beam makes the functions of a pipeline
// itself, many of one kind, and can hand them nothing but what the pipeline says;
// what they share in a process they must find by themselves.
type workers struct {
	mu   sync.Mutex
	made map[Work]*worker
}

// of returns the worker of a run, which is made on first use.
func (s *workers) of(ctx context.Context, w Work) (*worker, error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if o := s.made[w]; o != nil {
		return o, nil
	}
	o, err := newWorker(ctx, w)
	if err == nil {
		s.made[w] = o
	}
	return o, err
}

// end lets go of the worker of a run, if there is one here.
func (s *workers) end(w Work) error {
	s.mu.Lock()
	defer s.mu.Unlock()
	o := s.made[w]
	delete(s.made, w)
	if o == nil {
		return nil
	}
	return o.close()
}
