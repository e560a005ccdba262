package ingest

import (
	"fmt"
	"path/filepath"

	"strandwise/channels"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// resolve returns the identity of a take from what the recording, the path and
// the options state, in this order. The take's own name is left as it is.
func resolve(r *raw.Take, s source, label string) (raw.Identity, error) {
	id := r.Identity
	for _, name := range []string{"label", "subject", "session", "split"} {
		own, path := id.Field(name), s.identity.Field(name)
		if *own != "" && *path != "" && *own != *path {
			return id, &fault.Error{
				File: s.name, Line: r.Line, Take: takeID(r.Take, s),
				Problem: fmt.Sprintf("the recording states the %s %q, its path %q", name, *own, *path),
				Remedy:  fmt.Sprintf("correct one of them, or leave {%s} out of the pattern", name),
			}
		}
		if *own == "" {
			*own = *path
		}
	}
	if id.Label == "" {
		id.Label = label
	}
	return id, nil
}

// identify names a take by its resolved identity.
func (p *pass) identify(t *channels.Take, r piece, s source) error {
	t.ID = takeID(r.Take.Take, s) + r.suffix
	if r.Label == "" && !p.r.options.Lenient {
		return &fault.Error{
			File: s.name, Line: r.Line, Take: t.ID, Problem: "has no label",
			Remedy: "give it one by a label column, by {label} in the pattern, or by --label",
		}
	}
	split, err := channels.ParseSplit(r.Split)
	if err != nil {
		return &fault.Error{File: s.name, Line: r.Line, Take: t.ID, Problem: err.Error(), Remedy: "correct the split or leave it empty"}
	}
	t.Label, t.Subject, t.Session, t.Split = r.Label, r.Subject, r.Session, split
	t.Where = where(s.name, r.Line)
	return nil
}

// takeID makes the id of a take: what the recording calls it, below the tail
// of the path when a pattern says that the path names it too. A recording that
// names no take is named by its path.
func takeID(own string, s source) string {
	switch {
	case own == "":
		return s.tail
	case s.matched:
		return filepath.ToSlash(s.tail) + "/" + own
	}
	return own
}
