package ingest

import (
	"bytes"
	"errors"
	"fmt"
	"slices"

	"strandwise/ingest/cut"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// Cut says how long recordings are cut into takes.
type Cut string

// The ways to cut. ByAnnotation is what is done unless another way is named:
// a recording is cut by the annotations stated for it or that it carries
// itself, and whole where there are none.
const (
	ByAnnotation Cut = "annotations"
	ByRest       Cut = "rest" // where the body comes to rest
	Whole        Cut = "none"
)

// divide cuts the pieces of a raw take into takes.
func (p *pass) divide(pieces []piece, t *raw.Take, s source) ([]piece, error) {
	switch p.r.options.Cut {
	case Whole:
		return pieces, nil
	case ByRest:
		return p.atRest(pieces, s)
	}
	list, file, err := p.annotations(t, s)
	if err != nil || len(list) == 0 {
		return pieces, err
	}
	times := make([][]float64, len(pieces))
	frames := 0
	for i, piece := range pieces {
		times[i] = piece.Time
		frames += len(piece.Time)
	}
	cuts, err := cut.ByAnnotation(times, list, file)
	if err != nil {
		return nil, err
	}
	out := make([]piece, len(cuts))
	for i, c := range cuts {
		out[i] = stretch(pieces[c.Piece], c.First, c.End, i)
		if out[i].Label = c.Label; c.Subject != "" {
			out[i].Subject = c.Subject
		}
		frames -= c.End - c.First
	}
	p.repairs.Cuts += len(out)
	p.notices.add(s.name, "is cut into takes by its annotations", fmt.Sprintf("%d takes; %d frames of no annotation are left out", len(out), frames))
	return out, nil
}

// annotations returns those of a take: of the file the user names, on the
// take's clock, or else those it carries itself that last.
func (p *pass) annotations(t *raw.Take, s source) ([]raw.Annotation, string, error) {
	name := p.r.options.Annotations
	if name == "" {
		own := slices.DeleteFunc(slices.Clone(t.Annotations), func(a raw.Annotation) bool { return a.End <= a.Start })
		return own, s.name, nil
	}
	if p.annotated != "" {
		return nil, "", &UsageError{Key: "annotations", Problem: fmt.Sprintf("%s annotates one recording, but there are several: %s and %s", name, p.annotated, s.name)}
	}
	p.annotated = s.name
	text, file, err := readWhole(name, "check the path")
	if err != nil {
		return nil, "", err
	}
	p.beside[name] = file
	a, err := cut.Read(bytes.NewReader(text), name)
	if err != nil {
		return nil, "", err
	}
	if !a.Epoch && !(len(a.List) > 0 && a.List[0].Start >= epochAway) {
		return a.On(0), name, nil // seconds from the start of the recording
	}
	if t.Origin == 0 {
		return nil, "", &fault.Error{File: name, Problem: fmt.Sprintf("states dates, but %s does not say when it began", s.name), Remedy: "state the annotations in seconds from its start"}
	}
	return a.On(t.Origin), name, nil
}

// epochAway is the time in seconds beyond which annotations count from an
// epoch and not from the start of a recording: some three years.
const epochAway = 1e8

// atRest cuts pieces where the body comes to rest.
func (p *pass) atRest(pieces []piece, s source) ([]piece, error) {
	var out []piece
	for _, whole := range pieces {
		m, err := cut.AtRest(whole.Time, whole.Data, len(p.r.frame.layout.Channels), p.r.frame.groups(), cut.Rest{})
		var none *cut.NoRest
		if errors.As(err, &none) {
			return nil, &fault.Error{File: s.name, Line: whole.Line, Problem: "cannot be cut at rest: " + none.Error(), Remedy: "annotate it and name the file with --annotations, or take it whole with --cut none"}
		}
		if err != nil {
			return nil, &fault.Error{File: s.name, Line: whole.Line, Problem: "cannot be cut at rest", Err: err, Remedy: "take it whole with --cut none"}
		}
		for _, c := range m.List {
			out = append(out, stretch(whole, c.First, c.End, len(out)))
		}
		p.notices.add(s.name, "is cut into takes where the body comes to rest", fmt.Sprintf(
			"%d takes and %d stretches too short to be one; movement lies %.0f dB above rest, the thresholds at %.0f and %.0f dB",
			len(m.List), len(m.Short), m.Moving, m.Enter, m.Leave))
	}
	p.repairs.Cuts += len(out)
	return out, nil
}

// stretch is the frames of a piece from first up to end, as its own take.
func stretch(of piece, first, end, number int) piece {
	n := *of.Take
	w := len(n.Data) / len(n.Time)
	n.Line, n.Jumps = of.LineOf(first), nil
	n.Time, n.Data = slices.Clone(n.Time[first:end]), slices.Clone(n.Data[first*w:end*w])
	return piece{Take: &n, suffix: fmt.Sprintf("#%d", number+1)}
}
