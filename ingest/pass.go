package ingest

import (
	"errors"
	"fmt"

	"strandwise/channels"
	"strandwise/channels/group"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

var errStopped = errors.New("receiver stopped")

// pass is one reading of all files.
type pass struct {
	r       *Recordings
	seen    register
	files   map[int]known
	beside  map[string]File
	notices notices
	repairs Repairs

	annotated string          // recording that the annotations of the options were used on
	unwanted  map[string]bool // patterns of columns to leave out that matched one
	check     *checker        // nil to stop at the first fault
	yield     func(*channels.Take, error) bool
}

func (p *pass) run() error {
	for i := range p.r.sources {
		if err := p.source(i); err != nil && !p.check.tolerate(err) {
			return err
		}
	}
	for _, pattern := range p.r.options.LeaveOut {
		if !p.unwanted[pattern] {
			return &UsageError{Key: "leave_out", Problem: fmt.Sprintf("no column is named %q", pattern)}
		}
	}
	if len(p.seen) > 0 {
		return nil
	}
	err := &fault.Error{File: p.r.sources[0].name, Problem: "holds no takes", Remedy: "name the recordings themselves"}
	if p.check != nil && p.check.faults > 0 || p.check.tolerate(err) {
		return nil
	}
	return err
}

// source reads one file.
func (p *pass) source(i int) (err error) {
	p.check.open(p.r.sources[i].name)
	leave, err := p.r.enter(i)
	if err != nil {
		return err
	}
	defer func() {
		if left := leave(); err == nil {
			err = left
		}
	}()
	s, err := p.r.spooled(i)
	if err != nil {
		return err
	}
	var before *known
	if k, ok := p.r.files[i]; ok {
		before = &k
	}
	f, err := openFile(s, &p.r.options, before)
	if err != nil {
		return err
	}
	defer f.close()
	return p.file(f, i)
}

func (p *pass) file(f *file, index int) error {
	in := raw.Input{
		Name: f.name, Path: f.path, Columns: p.r.options.Columns, TimeUnit: p.r.options.TimeUnit, LeaveOut: p.leaveOut,
		Notice: func(text, evidence string) { p.notices.add(f.name, text, evidence) },
		Beside: func(name string) ([]byte, error) {
			b, file, err := readBeside(f.source, name)
			if err == nil {
				p.beside[file.Path] = file
			}
			return b, err
		},
	}
	var fitted *fit
	var fittedTo *raw.Layout
	for t, err := range f.takes(in) {
		if err != nil {
			return err
		}
		if t.Layout != fittedTo {
			if fitted, err = p.fit(t.Layout, f.name); err != nil {
				return err
			}
			fittedTo = t.Layout
		}
		if err := p.take(t, f.source, index, fitted); err != nil && !p.check.tolerate(err) {
			return err
		}
	}
	done, err := f.finish()
	p.files[index] = done
	return err
}

// fit matches the layout of a file with the one of the run, which the first
// file fixes.
func (p *pass) fit(l *raw.Layout, file string) (*fit, error) {
	if p.r.frame == nil {
		f, err := fixFrame(l, file, &p.r.options, p.leaveOut)
		if err != nil {
			return nil, err
		}
		p.r.frame = f
	}
	if names := p.r.frame.unstated(); len(names) > 0 {
		p.notices.add(p.r.frame.file, "no unit is stated for "+abbreviate(names)+"; the values are taken to be in SI units", "")
	}
	return p.r.frame.fit(l, file)
}

// take hands on what a raw take becomes: itself, or the pieces of it.
func (p *pass) take(t *raw.Take, s source, index int, fitted *fit) error {
	if t.Synthetic && !p.r.options.Lenient {
		p.notices.add(s.name, "holds synthetic takes, which are left out: they are no recordings, and must not be scored on", "the first is "+takeID(t.Take, s))
		return nil
	}
	if err := p.clock(t, s); err != nil {
		return err
	}
	t.Data = fitted.apply(t.Data)
	id, err := resolve(t, s, p.r.options.Label)
	p.check.take(t, id, takeID(t.Take, s), p.r.frame)
	if err != nil {
		return err
	}
	t.Identity = id
	divided, err := p.pieces(t, s)
	if err != nil {
		p.check.count(t)
		return err
	}
	for _, piece := range divided {
		p.check.count(piece.Take)
		if err := p.hand(piece, s, index); err != nil {
			return err
		}
	}
	return nil
}

// pieces repairs a raw take and cuts it, as far as either was asked for.
func (p *pass) pieces(t *raw.Take, s source) ([]piece, error) {
	mended, err := p.mend(t, s)
	if err != nil {
		return nil, err
	}
	return p.divide(mended, t, s)
}

// hand hands on one take.
func (p *pass) hand(t piece, s source, index int) error {
	out := &channels.Take{Layout: p.r.frame.layout, Skeleton: t.Skeleton, Time: t.Time, Data: t.Data}
	if err := p.identify(out, t, s); err != nil {
		return err
	}
	if earlier, again := p.seen.enter(out.ID, index, t.Line); again {
		return repeated(out.ID, p.r.sources[earlier.file], int(earlier.line), s, t.Line)
	}
	if !p.r.options.Lenient {
		if err := out.Validate(); err != nil {
			return &fault.Error{File: s.name, Line: t.Line, Problem: err.Error(), Remedy: "leave the take out or record it again"}
		}
	}
	if !p.yield(out, nil) {
		return errStopped
	}
	return nil
}

// leaveOut tells whether the user leaves a column out.
func (p *pass) leaveOut(name string) bool {
	for _, pattern := range p.r.options.LeaveOut {
		if found, _ := group.Match([]channels.Channel{{Name: name}}, pattern); len(found) > 0 {
			p.unwanted[pattern] = true
			return true
		}
	}
	return false
}

// clock turns frame numbers into seconds.
func (p *pass) clock(t *raw.Take, s source) error {
	rate := p.r.options.Rate
	switch {
	case t.Clock == raw.Seconds && rate > 0:
		p.notices.add(s.name, "has a time column, so the frame rate stated is not used", "")
	case t.Clock == raw.Frames && rate == 0:
		return &UsageError{Key: "rate", Problem: fmt.Sprintf("no time column in %s: state the frame rate with --rate", s.name)}
	case t.Clock == raw.Frames:
		for i := range t.Time {
			t.Time[i] /= rate
		}
	}
	return nil
}
