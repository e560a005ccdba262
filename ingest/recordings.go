package ingest

import (
	"errors"
	"fmt"
	"maps"
	"os"
	"slices"
	"sync"

	"strandwise/channels"
)

// Recordings are the takes of the files a user named. One pass over them may
// run at a time.
type Recordings struct {
	options Options
	sources []source
	found   notices // of resolving the paths

	elsewhere Elsewhere // nil when the recordings are here
	expected  []File    // by source, nil when any will do
	reading   int       // source

	mu      sync.Mutex
	spools  []string
	frame   *frame
	files   map[int]known   // by source, of the last complete pass
	beside  map[string]File // read along with them
	notices []string
	repairs Repairs
}

// Open resolves the paths and checks the options. It reads no data. The caller
// closes the recordings.
func Open(o Options) (*Recordings, error) {
	if err := o.check(); err != nil {
		return nil, err
	}
	r := &Recordings{options: o}
	f := finder{options: &r.options, seen: map[string]bool{}, notices: &r.found}
	if o.Pattern != "" {
		p, err := parsePattern(o.Pattern)
		if err != nil {
			return nil, err
		}
		f.pattern = p
	}
	for _, path := range o.Paths {
		if err := f.add(path); err != nil {
			return nil, err
		}
	}
	r.sources = f.sources
	r.notices = r.found.lines()
	return r, nil
}

func (o *Options) check() error {
	switch o.TimeUnit {
	case "", "s", "ms", "us", "ns":
	default:
		return &UsageError{Key: "time_unit", Problem: fmt.Sprintf("unknown time unit %q; legal units are s, ms, us and ns", o.TimeUnit)}
	}
	switch o.Cut {
	case "", ByAnnotation, ByRest, Whole:
	default:
		return &UsageError{Key: "cut", Problem: fmt.Sprintf("unknown way to cut %q; legal are %s, %s and %s", o.Cut, ByAnnotation, ByRest, Whole)}
	}
	if !(o.Rate >= 0 && o.Rate < 1e9) {
		return &UsageError{Key: "rate", Problem: fmt.Sprintf("impossible frame rate %g; it is a positive number of frames per second", o.Rate)}
	}
	if len(o.Paths) == 0 {
		return &UsageError{Key: "recordings", Problem: "no recordings are named; name files, folders, or - for standard input"}
	}
	return nil
}

// Takes returns the takes of all files in order. It may be ranged over again
// and again and yields the same takes each time. Each take is valid in the
// sense of [channels.Take.Validate]. Errors are *UsageError or *fault.Error.
//
// A pass holds one take, the buffers of one file, and 20 to 40 bytes for each
// take met, by which it notices one that comes again.
func (r *Recordings) Takes() channels.Stream {
	return func(yield func(*channels.Take, error) bool) {
		p := r.newPass(yield)
		switch err := p.run(); {
		case errors.Is(err, errStopped):
		case err != nil:
			yield(nil, err)
		default:
			r.settle(p)
		}
	}
}

func (r *Recordings) newPass(yield func(*channels.Take, error) bool) *pass {
	return &pass{
		r: r, seen: register{}, files: map[int]known{}, beside: map[string]File{},
		notices: r.found.clone(), unwanted: map[string]bool{}, yield: yield,
	}
}

// settle keeps what a complete pass found.
func (r *Recordings) settle(p *pass) {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.files, r.beside, r.notices, r.repairs = p.files, p.beside, p.notices.lines(), p.repairs
}

// Files returns the files that were read, in order, and after them those that
// were read along with them. It is empty before the first complete pass.
func (r *Recordings) Files() []File {
	r.mu.Lock()
	defer r.mu.Unlock()
	var out []File
	for i := range r.sources {
		if k, ok := r.files[i]; ok {
			out = append(out, k.File)
		}
	}
	for _, path := range slices.Sorted(maps.Keys(r.beside)) {
		out = append(out, r.beside[path])
	}
	return out
}

// Notices returns what the user should know about the recordings, without
// repeats. It is complete after the first complete pass.
func (r *Recordings) Notices() []string {
	r.mu.Lock()
	defer r.mu.Unlock()
	return append([]string(nil), r.notices...)
}

// Repairs counts what was repaired. It is complete after the first complete
// pass.
func (r *Recordings) Repairs() Repairs {
	r.mu.Lock()
	defer r.mu.Unlock()
	return r.repairs
}

// Close removes what was kept of standard input.
func (r *Recordings) Close() error {
	r.mu.Lock()
	defer r.mu.Unlock()
	var errs []error
	for _, path := range r.spools {
		errs = append(errs, os.Remove(path))
	}
	r.spools = nil
	return errors.Join(errs...)
}

// spooled returns the source with standard input kept on disk.
func (r *Recordings) spooled(i int) (source, error) {
	s := &r.sources[i]
	if s.path != "" {
		return *s, nil
	}
	path, err := spool(r.options.Stdin)
	if err != nil {
		return *s, err
	}
	r.mu.Lock()
	r.spools = append(r.spools, path)
	r.mu.Unlock()
	s.path = path
	return *s, nil
}
