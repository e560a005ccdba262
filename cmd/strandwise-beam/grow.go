package main

import (
	"context"
	"crypto/rand"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"log/slog"
	"os"
	"path/filepath"

	"github.com/apache/beam/sdks/v2/go/pkg/beam"
	beamlog "github.com/apache/beam/sdks/v2/go/pkg/beam/log"

	"strandwise/cmd/internal/job"
	"strandwise/cmd/strandwise-beam/cloud"
	"strandwise/export"
)

// folder returns the folder of the work, if it is one.
func (w Work) folder() (string, bool) { return w.Work.Text, !cloud.IsAddress(w.Work.Text) }

// launch is one run under way, in the process that was started by the user.
type launch struct {
	streams Streams
	options options
	plan    *job.Plan
	work    Work
	scratch string
	apart   *job.Apart
	files   int // of references
	some    []job.Reference
	counted map[string]int64
}

// grow carries out a plan.
func grow(ctx context.Context, s Streams, plan *job.Plan, o options) error {
	if err := begin(o); err != nil {
		return err
	}
	quiet(s.Err)
	scratch, err := os.MkdirTemp("", "strandwise-beam-")
	if err != nil {
		return err
	}
	l := &launch{streams: s, options: o, plan: plan, scratch: scratch}
	done, err := l.run(ctx)
	if err := errors.Join(err, here.end(l.work), os.RemoveAll(scratch)); err != nil {
		return err
	}
	if o.asJSON {
		return printJSON(s.Out, grown{done, l.apart.Shards(), l.counted})
	}
	fmt.Fprintf(s.Out, "wrote %s: %d recorded takes, %d synthetic ones made from the %d that train, in %d files (%.1f MB)\n",
		done.Out, done.Recorded, done.Synthetic, done.Training, done.Files, float64(done.Bytes)/1e6)
	if done.Score != nil {
		fmt.Fprintln(s.Out, done.Score.Verdict)
	}
	return nil
}

// grown is what is told of a run.
type grown struct {
	*job.Grown
	Shards  int              `json:"shards"`
	Metrics map[string]int64 `json:"metrics"`
}

// quiet leaves of what Beam and its runner say what is wrong.
func quiet(w io.Writer) {
	level := &slog.HandlerOptions{Level: slog.LevelError}
	slog.SetDefault(slog.New(slog.NewTextHandler(w, level)))
	beamlog.SetLogger(&beamlog.Standard{Level: beamlog.SevError})
}

func (l *launch) run(ctx context.Context) (done *job.Grown, err error) {
	if err := l.places(); err != nil {
		return nil, err
	}
	defer func() {
		if failed := l.work.remove(context.WithoutCancel(ctx)); err == nil {
			err = failed
		}
	}()
	shop, err := openWorkshop(ctx, l.work.Set, filepath.Join(l.scratch, "set"), nil)
	if err != nil {
		return nil, err
	}
	defer shop.close()
	shown := l.plan.Out
	if l.plan.Out = shop.dir; shop.whole() {
		return nil, fmt.Errorf("%s already holds a set; choose another place or remove it", shown)
	}
	shut, err := l.survey(ctx)
	defer shut()
	if err != nil {
		return nil, err
	}
	defer l.apart.Close()
	m, err := l.carryOut(ctx, shop)
	if err != nil {
		return nil, err
	}
	if done, err = l.apart.Done(m); err == nil {
		done.Out = shown
	}
	return done, err
}

// places finds out where everything is to be.
func (l *launch) places() error {
	if l.plan.Out == "" {
		return &job.UsageError{Where: "--out", Problem: "no folder or address is named to write the set to"}
	}
	l.work.Set = Place{l.plan.Out}
	if cloud.IsAddress(l.plan.Out) {
		if _, err := cloud.Parse(l.plan.Out); err != nil {
			return &job.UsageError{Where: "--out", Problem: err.Error()}
		}
	} else if whole, err := filepath.Abs(l.plan.Out); err != nil {
		return err
	} else {
		l.work.Set = Place{whole}
	}
	// Several runs may write one set at a time, so each has a place of its own.
	var digits [4]byte
	if _, err := rand.Read(digits[:]); err != nil {
		return err
	}
	ending := "work-" + hex.EncodeToString(digits[:])
	if l.options.work == "" {
		l.work.Work = l.work.Set.beside("." + ending)
	} else {
		l.work.Work = Place{l.options.work}.beside("/" + ending)
	}
	return nil
}

// survey reads the recordings, and puts down where each take is.
func (l *launch) survey(ctx context.Context) (shut func() error, err error) {
	there, shut, err := recordings(ctx, l.plan.Recordings, filepath.Join(l.scratch, "recordings"))
	if err != nil {
		return shut, err
	}
	var remote job.Remote
	if there != nil {
		remote = there
	}
	refer := func(r job.Reference) error {
		const many = 1 << 16
		if l.some = append(l.some, r); len(l.some) < many {
			return nil
		}
		return l.putReferences(ctx)
	}
	notice := func(text string) { fmt.Fprintf(l.streams.Err, "note: %s\n", text) }
	l.apart, err = l.plan.Apart(ctx, l.options.shards, job.Version(), remote, &stages{w: l.streams.Err}, notice, refer)
	if err == nil {
		err = l.putReferences(ctx)
	}
	return shut, err
}

func (l *launch) putReferences(ctx context.Context) error {
	err := l.work.write(ctx, referencesName(l.files), l.some)
	l.files++
	l.some = l.some[:0]
	return err
}

// carryOut has the buckets made, and seals. The score comes first: should this
// process end while the engine goes on, strandwise seal, or the same command
// again, does the rest.
func (l *launch) carryOut(ctx context.Context, shop *workshop) (*export.Manifest, error) {
	briefing, err := l.apart.Briefing()
	if err != nil {
		return nil, err
	}
	if err := l.work.write(ctx, briefingName, briefing); err != nil {
		return nil, err
	}
	err = patiently(ctx, func() error { return l.apart.Begin(shop.dir) })
	if err == nil {
		err = shop.push(ctx) // from here on another plan is refused
	}
	if err == nil {
		err = patiently(ctx, func() error { return l.apart.Score(ctx, shop.dir) })
	}
	if err == nil {
		err = shop.push(ctx)
	}
	if err != nil && !shop.whole() {
		return nil, err
	}
	if err := l.engine(ctx); err != nil {
		return nil, err
	}
	return l.seal(ctx, shop)
}

func (l *launch) engine(ctx context.Context) error {
	fmt.Fprintf(l.streams.Err, "growing %d takes in %d shards on %s\n", l.apart.Synthetic(), l.apart.Shards(), l.options.runner)
	result, err := beam.Run(ctx, l.options.runner, pipeline(l.work, l.files, l.apart.Shards(), l.apart.Buckets()))
	if err != nil {
		return fmt.Errorf("%s: %w", l.options.runner, err)
	}
	l.counted = map[string]int64{}
	for _, c := range result.Metrics().AllMetrics().Counters() {
		if c.Namespace() == namespace {
			l.counted[c.Name()] += c.Result()
		}
	}
	return nil
}

// seal makes one set of what all have made.
func (l *launch) seal(ctx context.Context, shop *workshop) (m *export.Manifest, err error) {
	if err := shop.again(ctx); err != nil {
		return nil, err
	}
	err = patiently(ctx, func() error {
		m, err = export.Seal(shop.dir)
		return err
	})
	if m == nil && shop.whole() { // another run was faster
		m, err = export.ReadManifest(shop.dir)
	}
	if err == nil {
		err = shop.push(ctx)
	}
	if err == nil && shop.set != nil {
		err = shop.set.Tidy(ctx)
	}
	return m, err
}

// stages says on a line of its own when a stage begins.
type stages struct{ w io.Writer }

// Begin names the stage.
func (s *stages) Begin(stage string, _ int64, _ string) { fmt.Fprintln(s.w, stage) }

// Step does nothing.
func (s *stages) Step(int64) {}

// End does nothing.
func (s *stages) End() {}
