package recording_test

import (
	"bytes"
	"encoding/json"
	"errors"
	"io"
	"testing"

	"strandwise/channels"
	"strandwise/export"
	"strandwise/export/recording"
)

// TestGrownStream: a stream of takes that are made while it is written has the
// metadata of a set, and holds takes that were not noted.
func TestGrownStream(t *testing.T) {
	l := &channels.Layout{Channels: []channels.Channel{{Name: "x", Unit: "m", Quantity: channels.Position}}}
	recorded := &channels.Take{ID: "a", Label: "bow", Layout: l, Split: channels.Train, Time: []float64{0, 0.1, 0.2}, Data: []float64{1, 2, 3}}
	made := &channels.Take{ID: "a~0", Label: "bow", Layout: l, Split: channels.Train, Time: []float64{0, 0.2}, Data: []float64{1, 2}, Made: &channels.Making{Source: "a", Method: "recipe"}}
	c := recording.Contents{Single: true}
	if err := c.Note(recorded); err != nil {
		t.Fatal(err)
	}
	var out bytes.Buffer
	o := export.Options{Version: "1.2.3", Seed: 7, Plan: []byte(`{"per_take": 1}`)}
	w, err := recording.NewGrownStream(&out, &c, o)
	if err != nil {
		t.Fatal(err)
	}
	for _, take := range []*channels.Take{recorded, made} {
		if err := w.Add(take); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	got, err := readArrowStream(out.Bytes())
	if err != nil {
		t.Fatal(err)
	}
	if len(got.rows) != 2 || got.rows[0]["id"] != "a" || got.rows[1]["source"] != "a" || got.rows[1]["split"] != "train" {
		t.Errorf("rows %v", got.rows)
	}
	var run export.Run
	if err := json.Unmarshal([]byte(got.metadata[export.RunKey]), &run); err != nil || run.Seed != 7 || string(run.Plan) != `{"per_take":1}` || run.ProgramVersion != "1.2.3" {
		t.Errorf("run %+v, %v", run, err)
	}
	var layout export.FileLayout
	if err := json.Unmarshal([]byte(got.metadata[export.LayoutKey]), &layout); err != nil || layout.RateHz != nil || layout.Table != export.Takes || layout.Channels[0].Unit != "m" {
		t.Errorf("layout %+v, %v", layout, err)
	}
}

// TestGrownStreamWaits: what a reader has not taken is not made, but for a batch.
func TestGrownStreamWaits(t *testing.T) {
	l := &channels.Layout{Channels: []channels.Channel{{Name: "x"}}}
	take := &channels.Take{ID: "a", Layout: l, Time: make([]float64, 1<<15), Data: make([]float64, 1<<15)}
	for i := range take.Time {
		take.Time[i] = float64(i)
	}
	c := recording.Contents{Single: true}
	if err := c.Note(take); err != nil {
		t.Fatal(err)
	}
	in, out := io.Pipe()
	w, err := recording.NewGrownStream(out, &c, export.Options{})
	if err != nil {
		t.Fatal(err)
	}
	added, failed := make(chan int, 1000), make(chan error, 1)
	go func() {
		for i := range 1000 {
			if err := w.Add(take); err != nil {
				failed <- err
				return
			}
			added <- i
		}
		failed <- nil
	}()
	if _, err := io.ReadFull(in, make([]byte, 100<<10)); err != nil { // into the first batch
		t.Fatal(err)
	}
	if err := in.Close(); err != nil {
		t.Fatal(err)
	}
	if err := <-failed; !errors.Is(err, io.ErrClosedPipe) {
		t.Errorf("error %v, want that nobody reads", err)
	}
	// A batch holds 1 MiB, and a take 256 KiB: the first batch could not be
	// written to its end, so the take that ended it was the last.
	if n := len(added); n != 3 {
		t.Errorf("%d takes were added while nobody read, want 3", n)
	}
}
