package job

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"slices"

	"strandwise/channels"
	"strandwise/export"
	"strandwise/ingest"
)

// Reference says where a recorded take is found. It is all of a take that is
// passed between the processes of a cluster.
type Reference struct {
	Take string // id, as in the set
	File int    // place of its file in the order of the recordings
}

// Remote says that the recordings lie in storage; see [ingest.Elsewhere].
type Remote interface {
	ingest.Elsewhere
	// Paths returns the stand-ins of the recordings, in the order of the plan.
	Paths() []string
}

// Apart is a run of grow whose buckets are made by other processes. This one
// reads the recordings once, tells the others what they must know, scores and
// seals; see [Briefing] for what the others do.
type Apart struct {
	g        *growing
	found    *survey
	training []*channels.Take
	held     map[string]bool // people kept for the test; nil keeps the splits of the recordings
	options  export.Options
	say      func(string)
}

// mostShards is the number of shards when none is stated: enough to keep a
// cluster busy. Each shard looks once at what is finished of the whole set.
const mostShards = 1024

// Apart surveys the plan's recordings, to make a set of at most so many shards;
// 0 makes one of each bucket, up to 1024. Each recorded take is referred
// to. recordings is nil when they are files of this machine.
func (p *Plan) Apart(ctx context.Context, shards int, version string, recordings Remote, progress Progress, notice func(string), refer func(Reference) error) (*Apart, error) {
	if slices.Contains(p.Recordings, "-") {
		return nil, p.fault("recordings", "standard input cannot be read by several processes; name files")
	}
	g, err := p.prepareAt(recordings, version, progress)
	if err != nil {
		return nil, err
	}
	a := &Apart{g: g}
	a.say = func(text string) {
		g.done.Notices = append(g.done.Notices, text)
		notice(text)
	}
	if err := a.look(ctx, shards, refer); err != nil {
		return nil, errors.Join(p.asUsage(err), a.Close())
	}
	return a, nil
}

// prepareAt is prepare, with recordings that lie elsewhere.
func (p *Plan) prepareAt(recordings Remote, version string, progress Progress) (*growing, error) {
	if recordings == nil {
		return p.prepare(nil, version, progress)
	}
	named := p.Recordings
	p.Recordings = recordings.Paths()
	g, err := p.prepare(nil, version, progress)
	p.Recordings = named // as the manifest tells of them
	if err == nil {
		g.recordings.FetchFrom(recordings)
	}
	return g, err
}

// Close lets go of the recordings.
func (a *Apart) Close() error { return a.g.recordings.Close() }

func (a *Apart) look(ctx context.Context, shards int, refer func(Reference) error) error {
	g := a.g
	held := map[string]bool{}
	noted := func(takes channels.Stream) channels.Stream {
		return func(yield func(*channels.Take, error) bool) {
			for t, err := range takes {
				if err == nil {
					if g.plan.HoldOut != "" && t.Split == channels.Test {
						held[t.Subject] = true
					}
					err = refer(Reference{Take: g.writing.take(t).ID, File: g.recordings.Reading()})
				}
				if !yield(t, err) {
					return
				}
			}
		}
	}
	var err error
	if _, a.found, err = g.survey(ctx, noted, a.say); err != nil {
		return err
	}
	a.training = a.found.training()
	if a.options, err = g.options(a.found.layout); err != nil {
		return err
	}
	g.divide(&a.options, a.found)
	if g.plan.HoldOut != "" {
		a.held = held
	}
	if shards == 0 {
		shards = mostShards
	}
	shards = min(shards, a.options.Buckets)
	g.plan.shard = &Shard{Index: 0, Of: shards}
	a.options.Shards = shards
	return nil
}

// Buckets returns the number of buckets of the set.
func (a *Apart) Buckets() int { return a.options.Buckets }

// Shards returns the number of shards in which the set is made.
func (a *Apart) Shards() int { return a.options.Shards }

// Synthetic returns the number of takes that are to be made.
func (a *Apart) Synthetic() int { return a.g.done.Synthetic }

// Begin makes the folder an unfinished set, or finds out that it is one.
func (a *Apart) Begin(dir string) error {
	w, err := export.Create(dir, a.found.layout, a.options)
	if err != nil {
		return err
	}
	_, err = w.Close()
	return err
}

// Score measures and scores, and puts the score and what else is to be said of
// the set into its folder, in which [Apart.Begin] was. It may be called while
// others make the buckets.
func (a *Apart) Score(ctx context.Context, dir string) error {
	if _, err := a.g.maker(ctx, a.found); err != nil {
		return err
	}
	w, err := export.Create(dir, a.found.layout, a.options)
	if err != nil {
		return err
	}
	if err := a.g.finish(ctx, w, a.found, a.say); err != nil {
		_, closed := w.Close()
		return errors.Join(a.g.plan.asUsage(err), closed)
	}
	return nil
}

// Done returns what the run did, from the manifest of the sealed set. A set of
// another plan, sealed meanwhile, is an error.
func (a *Apart) Done(m *export.Manifest) (*Grown, error) {
	same := m.Seed == a.options.Seed && m.ProgramVersion == a.options.Version && slices.Equal(m.Recordings, a.options.Recordings) &&
		sameJSON(m.Plan, a.options.Plan)
	if !same {
		return nil, fmt.Errorf("%s holds a set of another plan, which another run has sealed meanwhile", a.g.plan.Out)
	}
	g := &a.g.done
	g.Shard, g.Buckets, g.Files, g.Bytes = nil, m.Buckets, 0, 0
	g.Synthetic = int(m.Takes(channels.Synthetic))
	for _, f := range m.Files {
		g.Files++
		g.Bytes += f.Bytes
	}
	return g, nil
}

// sameJSON tells whether two texts say the same but for white space.
func sameJSON(a, b []byte) bool {
	var x, y bytes.Buffer
	return json.Compact(&x, a) == nil && json.Compact(&y, b) == nil && bytes.Equal(x.Bytes(), y.Bytes())
}
