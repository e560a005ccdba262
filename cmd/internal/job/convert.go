package job

import (
	"context"
	"errors"
	"fmt"
	"io"

	"strandwise/channels"
	"strandwise/export/recording"
	"strandwise/ingest"
	"strandwise/ingest/bvh"
)

// Conversion says what convert writes.
type Conversion struct {
	Out     string // file; "-" for standard output; for BVH also a folder, or a name with fields such as {take}
	As      string // csv, parquet, arrow or bvh; empty leaves it to the ending of Out
	Replace bool   // take the place of a file that exists
	Version string // of the program
}

// Converted is what a run of convert did.
type Converted struct {
	Out      string         `json:"out"`
	As       string         `json:"as"`
	Takes    int            `json:"takes"`
	Frames   int            `json:"frames"`
	Channels int            `json:"channels"`
	Files    int            `json:"files"`
	Bytes    int64          `json:"bytes"`
	Repairs  ingest.Repairs `json:"repairs"`
	Notices  []string       `json:"notices"`
}

// Convert writes the plan's recordings as they are, repaired only as far as the
// plan allows, in another format. When it fails it leaves no file behind; what
// went to out, the standard output, cannot be taken back.
func (p *Plan) Convert(ctx context.Context, in io.Reader, out io.Writer, o Conversion, progress Progress, notice func(string)) (*Converted, error) {
	target, err := o.target()
	if err != nil {
		return nil, err
	}
	if err := target.free(); err != nil {
		return nil, err
	}
	r, err := p.open(in, lenient)
	if err != nil {
		return nil, err
	}
	defer r.Close()
	defer progress.End()
	held, err := p.holdOut(r.Takes())
	if err != nil {
		return nil, p.asUsage(err)
	}
	c := &conversion{target: target, out: out, version: o.Version, takes: held.apply(r.Takes()), progress: progress}
	c.contents.Single = target.form.single
	if err := c.look(ctx); err != nil {
		return nil, p.asUsage(err)
	}
	done := &Converted{Out: o.Out, As: target.form.as, Takes: c.contents.Takes, Frames: c.contents.Frames, Channels: len(c.contents.Layout.Channels)}
	done.Notices = append([]string{}, r.Notices()...)
	for _, n := range done.Notices {
		notice(n)
	}
	if err := c.write(ctx); err != nil {
		return nil, p.asUsage(err)
	}
	done.Files, done.Bytes, done.Repairs = c.files, c.bytes, r.Repairs()
	return done, nil
}

// conversion is one run of convert under way.
type conversion struct {
	target   *target
	out      io.Writer // standard output
	version  string
	takes    channels.Stream
	contents recording.Contents
	progress Progress
	files    int
	bytes    int64
}

// look reads all recordings once: what stands at the head of a file depends on
// all of them.
func (c *conversion) look(ctx context.Context) error {
	c.progress.Begin("reading", -1, "takes")
	return c.each(ctx, func(t *channels.Take) error {
		switch {
		case c.target.form.as == bvhForm && t.Skeleton == nil:
			return fmt.Errorf("%s: take %s has no skeleton, and BVH holds nothing else; write csv, parquet or arrow", t.Where, t.ID)
		case c.target.oneTake() && c.contents.Takes == 1:
			return c.target.fault("the recordings hold more than one take, and a BVH file holds one: name a folder (--as bvh folder/), or put {take} into the name (legal fields are %s)", legalFields)
		}
		if err := c.contents.Note(t); err != nil {
			return fmt.Errorf("%s: %w", t.Where, err)
		}
		return nil
	})
}

// each goes over the takes until one cannot be done.
func (c *conversion) each(ctx context.Context, do func(t *channels.Take) error) error {
	for t, err := range counted(c.takes, c.progress) {
		if err == nil {
			err = ctx.Err()
		}
		if err == nil {
			err = do(t)
		}
		if err != nil {
			return err
		}
	}
	return nil
}

// write writes what look has found.
func (c *conversion) write(ctx context.Context) error {
	c.progress.Begin("writing", int64(c.contents.Takes), "takes")
	if c.target.name == stdout {
		c.files = 1
		counting := &counter{Writer: c.out}
		err := c.fill(ctx, counting)
		c.bytes = counting.n
		return err
	}
	files := recording.NewFiles(c.target.replace)
	err := c.writeFiles(ctx, files)
	if err == nil {
		err = files.Commit()
	}
	if err != nil {
		return errors.Join(err, files.Discard())
	}
	return nil
}

func (c *conversion) writeFiles(ctx context.Context, files *recording.Files) error {
	put := func(path string, fill func(io.Writer) error) error {
		n, err := files.Write(path, fill)
		c.files++
		c.bytes += n
		return err
	}
	if c.target.form.as != bvhForm {
		return put(c.target.name, func(w io.Writer) error { return c.fill(ctx, w) })
	}
	return c.each(ctx, func(t *channels.Take) error {
		path, err := c.target.pathOf(t)
		if err != nil {
			return err
		}
		return put(path, func(w io.Writer) error { return writeBVH(w, t) })
	})
}

// fill writes all takes into one file.
func (c *conversion) fill(ctx context.Context, w io.Writer) error {
	if c.target.form.as == bvhForm {
		return c.each(ctx, func(t *channels.Take) error { return writeBVH(w, t) })
	}
	writer, err := c.target.form.writer(w, &c.contents, c.version)
	if err != nil {
		return err
	}
	if err := c.each(ctx, writer.Add); err != nil {
		return err
	}
	return writer.Close()
}

func writeBVH(w io.Writer, t *channels.Take) error {
	m, err := bvh.FromTake(t, t.Skeleton)
	if err != nil {
		return fmt.Errorf("%s: %w", t.Where, err)
	}
	return bvh.Write(w, m)
}

// counter counts what is written.
type counter struct {
	io.Writer
	n int64
}

// Write writes and counts.
func (c *counter) Write(b []byte) (int, error) {
	n, err := c.Writer.Write(b)
	c.n += int64(n)
	return n, err
}
