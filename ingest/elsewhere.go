package ingest

import (
	"fmt"

	"strandwise/channels"
	"strandwise/ingest/fault"
)

// Elsewhere tells of recordings that lie in storage this machine does not have
// as files. The paths that were opened are then stand-ins, empty files of the
// names and sizes of the recordings, each of which holds its recording while it
// is read.
type Elsewhere interface {
	// Name returns the name under which the recording of a stand-in is known.
	Name(path string) string
	// Fetch makes the stand-in hold its recording until release is called. Its
	// time of modification is that of the recording.
	Fetch(path string) (release func() error, err error)
}

// FetchFrom says that the recordings lie elsewhere. It is called before the
// first pass. What is read along with a recording (annotations, the other files
// of Motion-BIDS) is not fetched.
func (r *Recordings) FetchFrom(e Elsewhere) {
	r.elsewhere = e
	for i := range r.sources {
		if s := &r.sources[i]; s.path != "" {
			s.name = e.Name(s.path)
		}
	}
}

// Reading returns the place, from 0, of the file from which the pass under way
// has the take it yields, in the order of the files.
func (r *Recordings) Reading() int { return r.reading }

// enter makes a file ready for being read.
func (r *Recordings) enter(i int) (leave func() error, err error) {
	r.reading = i
	s := r.sources[i]
	if r.elsewhere == nil || s.path == "" {
		return func() error { return nil }, nil
	}
	leave, err = r.elsewhere.Fetch(s.path)
	if err != nil {
		err = &fault.Error{File: s.name, Problem: "cannot be fetched", Err: err, Remedy: "check that it is there and may be read"}
	}
	return leave, err
}

// Expect says what the files of a run are, in order, as [Recordings.Files] of
// another process gave them. It is called before the first pass. A file that is
// another one is a fault after its last take.
func (r *Recordings) Expect(files []File) error {
	if len(files) < len(r.sources) {
		return fmt.Errorf("there are %d recordings here, and %d were read before", len(r.sources), len(files))
	}
	r.expected = files[:len(r.sources)]
	for i, s := range r.sources {
		if s.name != files[i].Path {
			return fmt.Errorf("recording %d is %s here, and was %s before", i, s.name, files[i].Path)
		}
	}
	return nil
}

// TakesOf returns the takes of some of the files, given by their places in
// ascending order. They are those of [Recordings.Takes], on the same layout;
// but what only all files together can tell (a pattern of columns to leave out
// that matches none, a take that two files hold) is left to a whole pass.
func (r *Recordings) TakesOf(files []int) channels.Stream {
	return func(yield func(*channels.Take, error) bool) {
		if err := r.fixLayout(); err != nil {
			yield(nil, err)
			return
		}
		p := r.newPass(yield)
		for _, i := range files {
			err := p.source(i)
			if err == nil {
				err = r.unexpected(p, i)
			}
			if err == errStopped {
				return
			}
			if err != nil {
				yield(nil, err)
				return
			}
		}
	}
}

// fixLayout reads as far as the layout of the run is fixed: to the first take.
func (r *Recordings) fixLayout() error {
	for i := 0; i < len(r.sources) && r.frame == nil; i++ {
		p := r.newPass(func(*channels.Take, error) bool { return false })
		if err := p.source(i); err != nil && err != errStopped {
			return err
		}
	}
	return nil
}

// unexpected tells when a file that was read is not the one that was expected.
func (r *Recordings) unexpected(p *pass, i int) error {
	if r.expected == nil || p.files[i].SHA256 == r.expected[i].SHA256 {
		return nil
	}
	return &fault.Error{File: r.sources[i].name, Problem: "has changed since it was first read", Remedy: "start again once it is complete"}
}
