package job

import (
	"context"
	"errors"
	"io"
	"syscall"

	"strandwise/channels"
	"strandwise/export/recording"
)

// Streamed is what a run of grow that writes a stream did.
type Streamed struct {
	Takes   int64 // written, recorded and synthetic
	Stopped bool  // the reader went away before the last one
}

// GrowStream makes takes as [Plan.Grow] does, and writes them to out as an Arrow
// IPC stream in place of a set: one row a take, in record batches, in the same
// order and with the same values. It scores nothing. No more is made than out
// takes: a reader that waits holds the making up. One that goes away is no error,
// since a reader may have enough.
func (p *Plan) GrowStream(ctx context.Context, in io.Reader, out io.Writer, version string, progress Progress, notice func(string)) (*Streamed, error) {
	g, err := p.prepare(in, version, progress)
	if err != nil {
		return nil, err
	}
	defer g.recordings.Close()
	defer progress.End()
	s := &streaming{growing: g, out: out}
	err = s.run(ctx, notice)
	if goneAway(err) {
		s.streamed.Stopped, err = true, nil
	}
	if err != nil {
		return nil, p.asUsage(err)
	}
	return &s.streamed, nil
}

// goneAway reports whether an error says that nobody reads what is written.
func goneAway(err error) bool {
	return errors.Is(err, syscall.EPIPE) || errors.Is(err, io.ErrClosedPipe)
}

// streaming is one run under way.
type streaming struct {
	*growing
	out      io.Writer
	contents recording.Contents
	streamed Streamed
}

func (s *streaming) run(ctx context.Context, notice func(string)) error {
	takes, found, err := s.survey(ctx, s.note, notice)
	if err != nil {
		return err
	}
	options, err := s.options(found.layout)
	if err != nil {
		return err
	}
	w, err := recording.NewGrownStream(s.out, &s.contents, options)
	if err != nil {
		return err
	}
	err = s.grow(ctx, takes, found, func(t *channels.Take) error {
		s.streamed.Takes++
		return w.Add(t)
	})
	if err != nil {
		return err
	}
	return w.Close()
}

// note takes note of recorded takes for what stands at the head of the stream.
func (s *streaming) note(takes channels.Stream) channels.Stream {
	s.contents.Single = true
	return func(yield func(*channels.Take, error) bool) {
		for t, err := range takes {
			if err == nil {
				err = s.contents.Note(s.writing.take(t))
			}
			if !yield(t, err) || err != nil {
				return
			}
		}
	}
}
