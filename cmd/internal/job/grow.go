package job

import (
	"context"
	"crypto/sha256"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"

	"strandwise/augment"
	"strandwise/channels"
	"strandwise/classify"
	"strandwise/classify/realism"
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
	Buckets   int              `json:"buckets"` // parts of the set that were this run's to make
	Resumed   int              `json:"resumed"` // of them, finished by an earlier run
	Shard     *Shard           `json:"shard"`   // null when the whole set was written
	Notices   []string         `json:"notices"`
	Score     *classify.Report `json:"score"`   // null when the recordings cannot be scored; a notice says why
	Tallies   map[string]int64 `json:"tallies"` // what became of the draws
	Harm      *classify.Harm   `json:"harm"`    // what growing does to labels, on training takes left out; null when there are too few
	Realism   *realism.Report  `json:"realism"` // how much like recorded takes the synthetic ones are
}

// Grow does the whole job: it reads the plan's recordings, makes takes, scores
// them and writes a sealed set, or one shard of a set. When it fails, finished
// parts of the set stay, of which an [UnfinishedError] tells, and the same plan
// goes on from there; when none is finished it leaves nothing behind.
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
	making     *making
	known      augment.Training // set when takes were measured
	scoring    classify.Options
	writing    *writing
	recordings *ingest.Recordings
	progress   Progress
	done       Grown
}

// prepare checks the whole plan before any data is read.
func (p *Plan) prepare(in io.Reader, version string, progress Progress) (*growing, error) {
	g := &growing{plan: p, version: version, progress: progress, done: Grown{Out: p.Out, Notices: []string{}}}
	var err error
	if g.making, err = p.making(); err != nil {
		return nil, err
	}
	if g.scoring, err = p.scoring(); err != nil {
		return nil, err
	}
	if g.writing, err = p.writing(); err != nil {
		return nil, err
	}
	if p.Out == "" {
		return nil, p.fault("out", "no folder is named to write the set into")
	}
	if err := export.Vacant(p.Out); p.Out != stdout && err != nil {
		return nil, err
	}
	g.recordings, err = p.open(in, strict)
	return g, err
}

// survey goes over the recordings for the first time. The takes it returns are
// those of the next pass.
func (g *growing) survey(ctx context.Context, note func(channels.Stream) channels.Stream, say func(string)) (channels.Stream, *survey, error) {
	held, err := g.plan.holdOut(g.recordings.Takes())
	if err != nil {
		return nil, nil, err
	}
	takes := held.apply(g.recordings.Takes())
	g.progress.Begin("reading", -1, "takes")
	s, err := look(ctx, counted(note(g.writing.noted(takes)), g.progress), mostScoredGrown, g.plan.Seed, g.plan.NoGesture)
	if err != nil {
		return nil, nil, err
	}
	for _, n := range g.recordings.Notices() {
		say(n)
	}
	if s.trains == 0 {
		return nil, nil, errors.New("every take is in the test split; synthetic takes are only made from training takes")
	}
	g.done.Recorded, g.done.Training, g.done.Synthetic = s.takes, s.trains, s.trains*g.plan.PerTake
	return takes, s, nil
}

func (g *growing) run(ctx context.Context, notice func(string)) error {
	say := func(text string) {
		g.done.Notices = append(g.done.Notices, text)
		notice(text)
	}
	nothingMore := func(takes channels.Stream) channels.Stream { return takes }
	takes, s, err := g.survey(ctx, nothingMore, say)
	if err != nil {
		return err
	}
	options, err := g.options(s.layout)
	if err != nil {
		return err
	}
	total := g.divide(&options, s)
	w, err := export.Create(g.plan.Out, s.layout, options)
	if err != nil {
		return err
	}
	maker, err := g.maker(ctx, s)
	if err == nil {
		err = g.fill(ctx, w, takes, maker, total, notice)
	}
	if err == nil {
		err = g.finish(ctx, w, s, say)
	}
	if err != nil {
		return g.leave(w, err)
	}
	return nil
}

// finish scores and seals a set whose buckets are made. Of a shard nothing is
// sealed, and only the first scores.
func (g *growing) finish(ctx context.Context, w *export.Writer, s *survey, say func(string)) error {
	if g.done.Shard = g.plan.shard; !g.plan.scores() {
		_, err := w.Close()
		return err
	}
	if err := g.score(ctx, w, s, say); err != nil {
		return err
	}
	if err := g.judge(ctx, w, s, say); err != nil {
		return err
	}
	g.progress.Begin("sealing", -1, "files")
	if lacks := g.writing.missing(); lacks != "" && g.plan.Title != "" {
		say(lacks)
	}
	w.Describe(g.card())
	if g.plan.shard != nil {
		err := w.Note(g.writing.texts(g.done.Notices)...)
		_, closed := w.Close()
		return errors.Join(err, closed)
	}
	manifest, err := w.Seal(g.writing.texts(g.done.Notices)...)
	if err != nil {
		return err
	}
	g.done.Files, g.done.Bytes = 0, 0
	g.done.Synthetic, g.done.Tallies = int(manifest.Takes(channels.Synthetic)), manifest.Tallies
	for _, f := range manifest.Files {
		g.done.Files++
		g.done.Bytes += f.Bytes
	}
	return nil
}

// maker measures the takes of the survey and returns what makes takes as the
// plan says.
func (g *growing) maker(ctx context.Context, s *survey) (*augment.Maker, error) {
	g.progress.Begin("measuring", -1, "takes")
	known, err := g.making.learn(ctx, s.training(), &s.scales, ready)
	if err != nil {
		return nil, err
	}
	g.known = known
	return augment.NewMaker(g.making.variation, known, g.plan.Seed)
}

// grow makes all takes and puts each out as it is to be written.
func (g *growing) grow(ctx context.Context, takes channels.Stream, s *survey, put func(*channels.Take) error) error {
	maker, err := g.maker(ctx, s)
	if err != nil {
		return err
	}
	g.progress.Begin("growing", int64(g.done.Recorded+g.done.Synthetic), "takes")
	return g.make(ctx, takes, maker, put, nil)
}

// make makes the takes of these recorded ones and puts each out. What became of
// the draws is reported, unless report is nil.
func (g *growing) make(ctx context.Context, takes channels.Stream, maker *augment.Maker, put func(*channels.Take) error, report func(string, augment.Tally)) error {
	grown := augment.Grow(ctx, takes, maker, augment.GrowOptions{PerTake: g.plan.PerTake, Keep: g.plan.Keep, Workers: g.plan.Workers, Report: report})
	for t, err := range counted(grown, g.progress) {
		if err != nil {
			return err
		}
		if err := put(g.writing.take(t)); err != nil {
			return err
		}
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
	report, err := score(ctx, s, g.plan.methods(g.making), g.scoring, g.progress)
	if err != nil {
		return err
	}
	g.done.Score = report
	return g.attach(w, "score.json", report)
}

// attach adds a document to the set.
func (g *growing) attach(w *export.Writer, name string, document any) error {
	text, err := json.MarshalIndent(document, "", "  ")
	if err != nil {
		return fmt.Errorf("%s: %w", name, err)
	}
	return w.Attach(name, append(g.writing.json(text), '\n'))
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
		if most <= 2 || float64(pairs*len(g.plan.methods(g.making)))*mean*mean*2*g.plan.Band*float64(takes[0].Width()) <= mostCompared {
			return nil
		}
		s.Shrink(most / 2)
	}
}

// options says what the set records of where it came from. The plan stands
// there without the output folder and the number of workers, which change no
// byte.
func (g *growing) options(l *channels.Layout) (export.Options, error) {
	repairs, err := json.Marshal(g.recordings.Repairs())
	if err != nil {
		panic("job: repairs are not JSON: " + err.Error())
	}
	o := export.Options{Version: g.version, Seed: g.plan.Seed, Repairs: repairs}
	for _, f := range g.recordings.Files() {
		o.Recordings = append(o.Recordings, export.Recording(f))
	}
	settings := g.plan.settings()
	if g.plan.Variation != "" {
		content, err := os.ReadFile(g.plan.Variation)
		if err != nil {
			return o, err
		}
		settings["variation_sha256"] = fmt.Sprintf("%x", sha256.Sum256(content)) // the file may change before a run that goes on
	}
	return g.writing.complete(o, settings, l)
}
