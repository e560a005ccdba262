package look

import (
	"fmt"
	"math"
	"path/filepath"
	"testing"
	"time"

	"strandwise/channels"
	"strandwise/export"
	"strandwise/export/marks"
)

// puppets returns the layout of an invented puppet: the places of two hands in
// space, and one channel of unknown quantity.
func puppets(t testing.TB) *channels.Layout {
	t.Helper()
	l := &channels.Layout{}
	for _, point := range []string{"left_hand", "right_hand"} {
		for _, axis := range []string{"x", "y", "z"} {
			l.Channels = append(l.Channels, channels.Channel{Name: point + ".pos." + axis, TrackedPoint: point, Quantity: channels.Position, Component: axis, Unit: "m"})
		}
	}
	l.Channels = append(l.Channels, channels.Channel{Name: "strings", Quantity: channels.Misc})
	out, err := l.WithGroups([]channels.Group{
		{Name: "left_hand.pos", Channels: []int{0, 1, 2}}, {Name: "right_hand.pos", Channels: []int{3, 4, 5}}, {Name: "strings", Channels: []int{6}},
	})
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// troupe returns invented takes: of each source, which is of the lengths given in
// turn, as many synthetic ones as said. The last source is for testing.
func troupe(l *channels.Layout, sources, perTake int, lengths ...int) []*channels.Take {
	var out []*channels.Take
	for n := range sources {
		source := perform(l, fmt.Sprintf("take %d", n), lengths[n%len(lengths)], float64(n))
		source.Label, source.Subject, source.Session = []string{"bow", "wave", "nod"}[n%3], []string{"pim", "wick"}[n%2], "one"
		if n == sources-1 {
			source.Split = channels.Test
		}
		out = append(out, source)
		for d := range perTake {
			if source.Split == channels.Test {
				break
			}
			made := perform(l, fmt.Sprintf("%s~%d", source.ID, d), source.Frames(), float64(n)+0.01*float64(d+1))
			made.Label, made.Subject, made.Session, made.Split = source.Label, source.Subject, source.Session, source.Split
			made.Made = &channels.Making{Source: source.ID, Draw: d, Rank: perTake - 1 - d, Method: "recipe", Parameters: map[string]float64{
				"mix": 0.25, "gate_stray": 0.5 + 0.01*float64(d), "gate_copy": 1 / float64(1+d),
			}}
			out = append(out, made)
		}
	}
	return out
}

// perform returns a take whose values tell which take, frame and channel they are
// of.
func perform(l *channels.Layout, id string, frames int, is float64) *channels.Take {
	t := &channels.Take{ID: id, Label: "bow", Subject: "pim", Split: channels.Train, Layout: l}
	for i := range frames {
		t.Time = append(t.Time, 3+float64(i)/50)
		for c := range l.Channels {
			t.Data = append(t.Data, is+math.Sin(float64(i)/9)*float64(c+1))
		}
	}
	return t
}

// write writes takes as a set and returns its folder.
func write(t testing.TB, o export.Options, takes []*channels.Take) string {
	t.Helper()
	dir := filepath.Join(t.TempDir(), "set")
	w, err := export.Create(dir, takes[0].Layout, o)
	if err != nil {
		t.Fatal(err)
	}
	for _, take := range takes {
		if err := w.Add(take); err != nil {
			t.Fatal(err)
		}
	}
	if _, err := w.Seal(); err != nil {
		t.Fatal(err)
	}
	return dir
}

// small makes row groups and files so small that a set has many.
func small() export.Options { return export.Options{RowGroupBytes: 4 << 10, FileBytes: 10 << 10} }

// open opens a set for a test.
func open(t testing.TB, dir string) *Set {
	t.Helper()
	s, err := Open(dir)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		if err := s.Close(); err != nil {
			t.Error(err)
		}
	})
	return s
}

// serve returns the page of a set.
func serve(t testing.TB, dir string) *Server {
	t.Helper()
	log, err := marks.Open(dir, "pim", func() time.Time { return time.Date(2026, 3, 1, 12, 0, 0, 0, time.UTC) })
	if err != nil {
		t.Fatal(err)
	}
	return NewServer(open(t, dir), log, "127.0.0.1:8123")
}
