package job

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"

	"strandwise/augment"
	"strandwise/channels"
	"strandwise/classify"
	"strandwise/export"
	"strandwise/ingest"
)

// Grown is what a run of grow did.
type Grown struct {
	Out       string           `json:"out"`
	Recorded  int              `json:"recorded"`  // takes read
	Training  int              `json:"training"`  // of them, takes that train
	Synthetic int              `json:"synthetic"` // takes made
	Files     int              `json:"files"`
	Bytes     int64            `json:"bytes"`
	Notices   []string         `json:"notices"`
	Score     *classify.Report `json:"score"` // null when the recordings cannot be scored; a notice says why
}

// Grow does the whole job: it reads the plan's recordings, makes takes, scores
// them and writes a sealed set. When it fails it leaves nothing behind.
func (p *Plan) Grow(ctx context.Context, in io.Reader, version string, progress Progress, notice func(string)) (*Grown, error) {
	g, err := p.prepare(in, version, progress)
	if err != nil {
		return nil, err
	}
	defer g.recordings.Close()
	defer progress.End()
	if err := g.run(ctx, notice); err != nil {
		return nil, p.asUsage(err)
	}
	return &g.done, nil
}

// growing is one run of grow under way.
type growing struct {
	plan       *Plan
	version    string
	variation  augment.Variation
	methods    []classify.Method
	scoring    classify.Options
	tables     []export.Table
	recordings *ingest.Recordings
	progress   Progress
	done       Grown
}

// prepare checks the whole plan before any data is read.
func (p *Plan) prepare(in io.Reader, version string, progress Progress) (*growing, error) {
	g := &growing{plan: p, version: version, progress: progress, done: Grown{Out: p.Out, Notices: []string{}}}
	var err error
	if g.variation, err = p.variation(); err != nil {
		return nil, err
	}
	if g.methods, err = p.methods(); err != nil {
		return nil, err
	}
	if g.scoring, err = p.scoring(); err != nil {
		return nil, err
	}
	for _, name := range p.Tables {
		t, err := export.ParseTable(name)
		if err != nil {
			return nil, p.fault("tables", "%v", err)
		}
		g.tables = append(g.tables, t)
	}
	if p.Out == "" {
		return nil, p.fault("out", "no folder is named to write the set into")
	}
	if err := export.Vacant(p.Out); err != nil {
		return nil, err
	}
	g.recordings, err = p.open(in, strict)
	return g, err
}

func (g *growing) run(ctx context.Context, notice func(string)) error {
	held, err := g.plan.holdOut(g.recordings.Takes())
	if err != nil {
		return err
	}
	takes := held.apply(g.recordings.Takes())
	g.progress.Begin("reading", -1, "takes")
	s, err := look(ctx, counted(takes, g.progress), mostScoredGrown, g.plan.Seed, g.plan.NoGesture)
	if err != nil {
		return err
	}
	say := func(text string) {
		g.done.Notices = append(g.done.Notices, text)
		notice(text)
	}
	for _, n := range g.recordings.Notices() {
		say(n)
	}
	if s.training == 0 {
		return errors.New("every take is in the test split; synthetic takes are only made from training takes")
	}
	g.done.Recorded, g.done.Training, g.done.Synthetic = s.takes, s.training, s.training*g.plan.PerTake

	w, err := export.Create(g.plan.Out, s.layout, g.options())
	if err != nil {
		return err
	}
	if err = g.write(ctx, w, takes, s, say); err != nil {
		return errors.Join(err, w.Discard())
	}
	return nil
}

// write fills and seals the set.
func (g *growing) write(ctx context.Context, w *export.Writer, takes channels.Stream, s *survey, say func(string)) error {
	maker, err := augment.NewMaker(g.variation, &s.scales, g.plan.Seed)
	if err != nil {
		return err
	}
	g.progress.Begin("growing", int64(g.done.Recorded+g.done.Synthetic), "takes")
	grown := augment.Grow(ctx, takes, maker, g.plan.PerTake, g.plan.Workers)
	for t, err := range counted(grown, g.progress) {
		if err != nil {
			return err
		}
		if err := w.Add(t); err != nil {
			return err
		}
	}
	if err := g.score(ctx, w, s, say); err != nil {
		return err
	}
	g.progress.Begin("sealing", -1, "files")
	manifest, err := w.Seal(g.done.Notices...)
	if err != nil {
		return err
	}
	for _, f := range manifest.Files {
		g.done.Files++
		g.done.Bytes += f.Bytes
	}
	return nil
}

// score adds the score to the set. Recordings that the protocol cannot score,
// such as those of a single label, still make a set.
func (g *growing) score(ctx context.Context, w *export.Writer, s *survey, say func(string)) error {
	if err := g.affordable(s.sample); err != nil {
		say(fmt.Sprintf("no score: %v", err))
		return nil
	}
	report, err := score(ctx, s, g.methods, g.scoring, g.progress)
	if err != nil {
		return err
	}
	g.done.Score = report
	text, err := json.MarshalIndent(report, "", "  ")
	if err != nil {
		return err
	}
	return w.Attach("score.json", append(text, '\n'))
}

// affordable makes a sample smaller until scoring it stays within the bound.
// The error says why it cannot be scored.
func (g *growing) affordable(s *classify.Sample) error {
	for most := mostScoredGrown; ; most /= 2 {
		takes := s.Takes()
		pairs, err := g.scoring.Comparisons(takes)
		if err != nil {
			return err
		}
		frames := 0
		for _, t := range takes {
			frames += t.Frames()
		}
		mean := float64(frames) / float64(len(takes))
		if most <= 2 || float64(pairs*len(g.methods))*mean*mean*2*g.plan.Band*float64(takes[0].Width()) <= mostCompared {
			return nil
		}
		s.Shrink(most / 2)
	}
}

// options says what the set records of where it came from. The plan stands
// there without the output folder and the number of workers, which change no
// byte.
func (g *growing) options() export.Options {
	plan := *g.plan
	text, err := json.Marshal(plan.settings(g.variation))
	if err != nil {
		panic("job: the plan is not JSON: " + err.Error()) // all its fields are plain
	}
	repairs, err := json.Marshal(g.recordings.Repairs())
	if err != nil {
		panic("job: repairs are not JSON: " + err.Error())
	}
	o := export.Options{Tables: g.tables, Version: g.version, Seed: plan.Seed, Plan: text, Repairs: repairs}
	for _, f := range g.recordings.Files() {
		o.Recordings = append(o.Recordings, export.Recording(f))
	}
	return o
}
