package cut

import (
	"cmp"
	"fmt"
	"slices"

	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// Cut is the frames of one take in a long recording.
type Cut struct {
	Piece      int // of the recording
	First, End int // frames of the piece: the first, and the one after the last
	Label      string
	Subject    string
	Line       int // of the annotation, 0 when unknown
}

// sameTime is how near two times must be to be taken for equal, in seconds:
// annotations are written with fewer digits than clocks.
const sameTime = 1e-6

// ByAnnotation finds the frames of each annotation, in the order of their
// starts. Pieces are the times in seconds of the recording, ascending; there
// are several when it was split where frames are missing. A frame belongs to
// an annotation from its start to its end, both included, and where one ends
// as the next begins, to the next. Frames of no annotation are of no take.
//
// An annotation that is reversed, empty, outside of the recording, across the
// place where it was split, of fewer than two frames, or that overlaps another
// is a *fault.Error about the line that states it; file names the annotations.
func ByAnnotation(pieces [][]float64, list []raw.Annotation, file string) ([]Cut, error) {
	pieces = slices.DeleteFunc(slices.Clone(pieces), func(p []float64) bool { return len(p) == 0 })
	list = slices.Clone(list)
	slices.SortStableFunc(list, func(a, b raw.Annotation) int { return cmp.Compare(a.Start, b.Start) })
	var out []Cut
	last := -1 // the one that ends last
	for i, a := range list {
		if e := sound(a, pieces); e != nil {
			e.File, e.Line = file, a.Line
			return nil, e
		}
		if last >= 0 && a.Start < list[last].End-sameTime {
			return nil, overlap(list[last], a, file)
		}
		if last < 0 || a.End > list[last].End {
			last = i
		}
	}
	for i, a := range list {
		c := Cut{Label: a.Label, Subject: a.Subject, Line: a.Line}
		end := a.End + sameTime
		if i+1 < len(list) && list[i+1].Start < end {
			end = list[i+1].Start - sameTime
		}
		c.Piece = slices.IndexFunc(pieces, func(p []float64) bool { return a.Start <= p[len(p)-1]+sameTime })
		c.First, _ = slices.BinarySearch(pieces[c.Piece], a.Start-sameTime)
		c.End, _ = slices.BinarySearch(pieces[c.Piece], end)
		if n := c.End - c.First; n < 2 {
			return nil, &fault.Error{File: file, Line: a.Line, Problem: fmt.Sprintf("%s holds fewer than two frames", name(a)), Remedy: "give it the time of a whole take"}
		}
		out = append(out, c)
	}
	return out, nil
}

// sound finds what is wrong with one annotation by itself.
func sound(a raw.Annotation, pieces [][]float64) *fault.Error {
	switch {
	case a.End < a.Start:
		return &fault.Error{Problem: name(a) + " ends before it starts", Remedy: "exchange start and end, or correct them"}
	case !(a.End > a.Start):
		return &fault.Error{Problem: name(a) + " lasts no time", Remedy: "give it a start and an end"}
	case len(pieces) == 0:
		return &fault.Error{Problem: name(a) + " lies outside of the recording, which is empty", Remedy: "name the recording it belongs to"}
	}
	first, end := pieces[0][0], pieces[len(pieces)-1]
	if last := end[len(end)-1]; a.Start < first-sameTime || a.End > last+sameTime {
		return &fault.Error{
			Problem: fmt.Sprintf("%s lies outside of the recording, which is from %.6g s to %.6g s", name(a), first, last),
			Remedy:  "count its times from the same start as the recording, or correct them",
		}
	}
	for i, p := range pieces[1:] {
		from, to := pieces[i][len(pieces[i])-1], p[0]
		if a.Start < to-sameTime && a.End > from+sameTime {
			return &fault.Error{
				Problem: fmt.Sprintf("%s runs over the gap from %.6g s to %.6g s, where the recording is split", name(a), from, to),
				Remedy:  "leave the take out, or shorten the annotation to one side of the gap",
			}
		}
	}
	return nil
}

func overlap(a, b raw.Annotation, file string) error {
	other := name(a)
	if a.Line > 0 {
		other += fmt.Sprintf(" in line %d", a.Line)
	}
	return &fault.Error{File: file, Line: b.Line, Problem: name(b) + " overlaps " + other, Remedy: "end one before the other starts"}
}

// name says which annotation is meant.
func name(a raw.Annotation) string {
	return fmt.Sprintf("annotation %q from %.6g s to %.6g s", a.Label, a.Start, a.End)
}
