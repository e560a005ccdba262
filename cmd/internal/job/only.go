package job

import (
	"context"
	"fmt"
	"io"
	"strings"

	"strandwise/channels"
)

// Only makes one synthetic take of a set again, by its id, and nothing else. It
// makes the takes of the same source, because they are chosen together.
func (p *Plan) Only(ctx context.Context, in io.Reader, id, version string, progress Progress, notice func(string)) (*channels.Take, error) {
	plan := *p
	plan.Out = stdout // no set is written
	g, err := plan.prepare(in, version, progress)
	if err != nil {
		return nil, err
	}
	defer g.recordings.Close()
	defer progress.End()
	t, err := g.only(ctx, id, notice)
	return t, p.asUsage(err)
}

func (g *growing) only(ctx context.Context, id string, notice func(string)) (*channels.Take, error) {
	all := func(takes channels.Stream) channels.Stream { return takes }
	takes, s, err := g.survey(ctx, all, notice)
	if err != nil {
		return nil, err
	}
	source, err := g.sourceOf(ctx, takes, id)
	if err != nil {
		return nil, err
	}
	maker, err := g.maker(ctx, s)
	if err != nil {
		return nil, err
	}
	made, err := maker.Make(source, g.plan.PerTake)
	if err != nil {
		return nil, err
	}
	var ids []string
	for _, t := range made {
		shown := g.writing.take(t)
		if shown.ID == id {
			return shown, nil
		}
		ids = append(ids, shown.ID)
	}
	return nil, &UsageError{Where: "--only", Problem: fmt.Sprintf("no take %q is made from %s; there are %s", id, g.writing.take(source).ID, strings.Join(ids, ", "))}
}

// sourceOf finds the recorded take that a synthetic one is made from: its id is
// that of the source and a draw.
func (g *growing) sourceOf(ctx context.Context, takes channels.Stream, id string) (*channels.Take, error) {
	cut := strings.LastIndexByte(id, '~')
	if cut < 0 {
		return nil, &UsageError{Where: "--only", Problem: fmt.Sprintf("%q is no synthetic take; their ids are those of recorded takes with a draw, such as bow-1~0", id)}
	}
	for t, err := range takes {
		if err == nil {
			err = ctx.Err()
		}
		switch {
		case err != nil:
			return nil, err
		case g.writing.take(t).ID != id[:cut]:
		case t.Split == channels.Test:
			return nil, &UsageError{Where: "--only", Problem: fmt.Sprintf("take %s is for testing, and none are made from it", id[:cut])}
		default:
			return t, nil
		}
	}
	return nil, &UsageError{Where: "--only", Problem: fmt.Sprintf("no recorded take is named %q, of which %q would be made", id[:cut], id)}
}

// WriteTake writes one take as a recording, as [Plan.Convert] would.
func WriteTake(ctx context.Context, t *channels.Take, out io.Writer, o Conversion) error {
	target, err := o.target()
	if err != nil {
		return err
	}
	if err := target.free(); err != nil {
		return err
	}
	one := func(yield func(*channels.Take, error) bool) { yield(t.Clone(), nil) }
	c := &conversion{target: target, out: out, version: o.Version, takes: one, progress: silent{}}
	c.contents.Single = target.form.single
	if err := c.look(ctx); err != nil {
		return err
	}
	return c.write(ctx)
}

// silent is told of progress and tells nobody.
type silent struct{}

// Begin does nothing.
func (silent) Begin(string, int64, string) {}

// Step does nothing.
func (silent) Step(int64) {}

// End does nothing.
func (silent) End() {}
