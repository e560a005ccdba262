package cut_test

import (
	"errors"
	"fmt"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/ingest/cut"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// uniform returns n times at a rate in Hz, from a start.
func uniform(start, rate float64, n int) []float64 {
	out := make([]float64, n)
	for i := range out {
		out[i] = start + float64(i)/rate
	}
	return out
}

func TestByAnnotation(t *testing.T) {
	one := [][]float64{uniform(0, 10, 101)}                        // 0 to 10 s
	two := [][]float64{uniform(0, 10, 51), {}, uniform(6, 10, 41)} // 0 to 5 s, 6 to 10 s
	for _, c := range []struct {
		name   string
		pieces [][]float64
		list   []raw.Annotation
		want   []cut.Cut
	}{
		{"none", one, nil, nil},
		{"both ends included", one, []raw.Annotation{{Start: 1, End: 2, Label: "bow", Subject: "ada", Line: 2}}, []cut.Cut{{First: 10, End: 21, Label: "bow", Subject: "ada", Line: 2}}},
		{"between frames", one, []raw.Annotation{{Start: 0.95, End: 2.05}}, []cut.Cut{{First: 10, End: 21}}},
		{"the whole recording", one, []raw.Annotation{{Start: 0, End: 10}}, []cut.Cut{{First: 0, End: 101}}},
		{"written with fewer digits", [][]float64{uniform(1./3, 3, 4)}, []raw.Annotation{{Start: 0.3333333, End: 1.3333333}}, []cut.Cut{{First: 0, End: 4}}},
		{"touching: the frame is the next one's", one, []raw.Annotation{{Start: 1, End: 2}, {Start: 2, End: 3}}, []cut.Cut{{First: 10, End: 20}, {First: 20, End: 31}}},
		{"in any order", one, []raw.Annotation{{Start: 5, End: 6, Line: 2}, {Start: 1, End: 2, Line: 3}}, []cut.Cut{{First: 10, End: 21, Line: 3}, {First: 50, End: 61, Line: 2}}},
		{"in two pieces", two, []raw.Annotation{{Start: 1, End: 5}, {Start: 6, End: 7}}, []cut.Cut{{First: 10, End: 51}, {Piece: 1, First: 0, End: 11}}},
	} {
		got, err := cut.ByAnnotation(c.pieces, c.list, "log.csv")
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
		}
		if d := cmp.Diff(c.want, got); d != "" {
			t.Errorf("%s: %s", c.name, d)
		}
	}
}

func TestByAnnotationFaults(t *testing.T) {
	one := [][]float64{uniform(0, 10, 101)}
	two := [][]float64{uniform(0, 10, 51), uniform(6, 10, 41)}
	for _, c := range []struct {
		name   string
		pieces [][]float64
		list   []raw.Annotation
		says   string
	}{
		{"reversed", one, []raw.Annotation{{Start: 2, End: 1, Label: "bow", Line: 4}},
			`log.csv:4: annotation "bow" from 2 s to 1 s ends before it starts; exchange start and end, or correct them`},
		{"an instant", one, []raw.Annotation{{Start: 2, End: 2, Label: "bow", Line: 4}},
			`log.csv:4: annotation "bow" from 2 s to 2 s lasts no time; give it a start and an end`},
		{"too early", one, []raw.Annotation{{Start: -1, End: 2, Label: "bow", Line: 4}},
			`log.csv:4: annotation "bow" from -1 s to 2 s lies outside of the recording, which is from 0 s to 10 s; count its times from the same start as the recording, or correct them`},
		{"too late", one, []raw.Annotation{{Start: 9, End: 10.5, Label: "bow"}},
			`log.csv: annotation "bow" from 9 s to 10.5 s lies outside of the recording, which is from 0 s to 10 s; count its times from the same start as the recording, or correct them`},
		{"no recording", nil, []raw.Annotation{{Start: 1, End: 2, Label: "bow", Line: 4}},
			`log.csv:4: annotation "bow" from 1 s to 2 s lies outside of the recording, which is empty; name the recording it belongs to`},
		{"overlapping", one, []raw.Annotation{{Start: 1, End: 3, Label: "bow", Line: 4}, {Start: 2.9, End: 5, Label: "turn", Line: 9}},
			`log.csv:9: annotation "turn" from 2.9 s to 5 s overlaps annotation "bow" from 1 s to 3 s in line 4; end one before the other starts`},
		{"overlapping one further back", one, []raw.Annotation{{Start: 1, End: 9, Label: "a", Line: 2}, {Start: 1, End: 1.5, Label: "b", Line: 3}},
			`log.csv:3: annotation "b" from 1 s to 1.5 s overlaps annotation "a" from 1 s to 9 s in line 2; end one before the other starts`},
		{"over the gap", two, []raw.Annotation{{Start: 4, End: 7, Label: "bow", Line: 4}},
			`log.csv:4: annotation "bow" from 4 s to 7 s runs over the gap from 5 s to 6 s, where the recording is split; leave the take out, or shorten the annotation to one side of the gap`},
		{"in the gap", two, []raw.Annotation{{Start: 5.2, End: 5.8, Label: "bow", Line: 4}},
			`log.csv:4: annotation "bow" from 5.2 s to 5.8 s runs over the gap from 5 s to 6 s, where the recording is split; leave the take out, or shorten the annotation to one side of the gap`},
		{"one frame", one, []raw.Annotation{{Start: 1, End: 1.05, Label: "bow", Line: 4}},
			`log.csv:4: annotation "bow" from 1 s to 1.05 s holds fewer than two frames; give it the time of a whole take`},
	} {
		got, err := cut.ByAnnotation(c.pieces, c.list, "log.csv")
		var f *fault.Error
		if got != nil || !errors.As(err, &f) || err.Error() != c.says {
			t.Errorf("%s: %v\n%v, want\n%s", c.name, got, err, c.says)
		}
	}
}

// Annotations that do not overlap give cuts that do not; each holds exactly
// the frames within its times that no later one has.
func TestByAnnotationSharesFrames(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		time := uniform(rapid.Float64Range(-5, 5).Draw(t, "start"), 50, 500)
		var list []raw.Annotation
		at := time[0]
		for {
			at += float64(rapid.IntRange(0, 60).Draw(t, "pause")) / 97
			a := raw.Annotation{Start: at, End: at + float64(rapid.IntRange(8, 90).Draw(t, "length"))/97}
			if a.End > time[499] {
				break
			}
			list, at = append(list, a), a.End
		}
		cuts, err := cut.ByAnnotation([][]float64{time}, list, "x")
		if err != nil || len(cuts) != len(list) {
			t.Fatalf("%d cuts of %d annotations, %v", len(cuts), len(list), err)
		}
		owner := make([]int, len(time)) // by the plain rule; the later one wins
		for i, when := range time {
			for k, a := range list {
				if when >= a.Start-1e-6 && when <= a.End+1e-6 {
					owner[i] = k + 1
				}
			}
		}
		for k, c := range cuts {
			for i, o := range owner {
				if in := i >= c.First && i < c.End; in != (o == k+1) {
					t.Fatalf("frame %d at %g s in cut %d (%+v): %v; it belongs to %d", i, time[i], k, c, in, o-1)
				}
			}
		}
	})
}

func ExampleByAnnotation() {
	clock := make([]float64, 1000) // ten seconds at 100 Hz
	for i := range clock {
		clock[i] = float64(i) / 100
	}
	cuts, err := cut.ByAnnotation([][]float64{clock}, []raw.Annotation{
		{Start: 1, End: 2.5, Label: "raise", Line: 2},
		{Start: 4, End: 5, Label: "lower", Line: 3},
	}, "cues.csv")
	for _, c := range cuts {
		fmt.Println(c.Label, c.First, c.End)
	}
	fmt.Println(err)
	// Output:
	// raise 100 251
	// lower 400 501
	// <nil>
}
