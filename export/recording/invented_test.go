package recording_test

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/export/recording"
)

// layout returns the layout of channels of these headers.
func layout(headers ...string) *channels.Layout {
	l := &channels.Layout{}
	for _, h := range headers {
		c, _ := channels.ParseHeader(h)
		l.Channels = append(l.Channels, c)
	}
	return l
}

// puppets returns invented takes of a puppet's hand: one with missing values,
// one whose name needs quotes, one that is known by its name alone.
func puppets() []*channels.Take {
	l := layout("Left Hand.pos.x", "Left Hand.pos.y", "strings")
	nan := math.NaN()
	return []*channels.Take{
		{ID: "bow_1", Label: "bow", Subject: "ember", Session: "matinee", Layout: l, Time: []float64{0, 0.02, 0.04}, Data: []float64{0.1, -1.5, 3, nan, nan, 4, 1e-7, 2.5e21, 5}},
		{ID: `the "long", bow`, Label: "bow; deep", Subject: "pim", Layout: l, Time: []float64{12.5, 12.75}, Data: []float64{1. / 3, 0, math.Copysign(0, -1), math.MaxFloat32, 2, 3}},
		{ID: "#3", Layout: l, Time: []float64{-0.25}, Data: []float64{7, 8, nan}},
	}
}

// form is one way to write takes.
type form struct {
	name  string
	begin func(io.Writer, *recording.Contents) (recording.Writer, error)
}

// forms are all of them.
func forms() []form {
	return []form{
		{"csv", func(w io.Writer, c *recording.Contents) (recording.Writer, error) { return recording.NewCSV(w, c) }},
		{"parquet", func(w io.Writer, c *recording.Contents) (recording.Writer, error) {
			return recording.NewParquet(w, c, "0.1.0")
		}},
		{"arrow file", func(w io.Writer, c *recording.Contents) (recording.Writer, error) {
			return recording.NewArrowFile(w, c, "0.1.0")
		}},
		{"arrow stream", func(w io.Writer, c *recording.Contents) (recording.Writer, error) {
			return recording.NewArrowStream(w, c, "0.1.0")
		}},
	}
}

// write writes takes to out as a program would.
func (f form) write(out io.Writer, takes []*channels.Take) error {
	var c recording.Contents
	for _, t := range takes {
		if err := c.Note(t); err != nil {
			return err
		}
	}
	w, err := f.begin(out, &c)
	if err != nil {
		return err
	}
	for _, t := range takes {
		if err := w.Add(t); err != nil {
			return err
		}
	}
	return w.Close()
}

// file returns takes as a file.
func (f form) file(t testing.TB, takes []*channels.Take) []byte {
	t.Helper()
	var out bytes.Buffer
	if err := f.write(&out, takes); err != nil {
		t.Fatalf("%s: %v", f.name, err)
	}
	return out.Bytes()
}

// drawTakes draws takes of one layout, with values missing, any text for their
// identity, and steps of time that 32-bit floats can tell apart.
func drawTakes(t *rapid.T) []*channels.Take {
	l := &channels.Layout{}
	for c := range rapid.IntRange(1, 5).Draw(t, "channels") {
		l.Channels = append(l.Channels, channels.Channel{Name: fmt.Sprintf("c%d", c), Quantity: channels.Misc})
	}
	split := rapid.SampledFrom([]channels.Split{channels.None, channels.Train, channels.Test})
	skeletons := []*body.Skeleton{nil, puppet("Hips"), puppet("Trunk")}
	text := rapid.StringMatching(`[a-zA-Zäß€,;"'#\t ]{0,6}`)
	value := rapid.OneOf(rapid.Float64Range(-math.MaxFloat32, math.MaxFloat32), rapid.SampledFrom([]float64{math.NaN(), 0, math.Copysign(0, -1), 5e-324, 0.1}))
	var out []*channels.Take
	for i := range rapid.IntRange(1, 6).Draw(t, "takes") {
		take := &channels.Take{
			ID: fmt.Sprint(i, text.Draw(t, "id")), Label: text.Draw(t, "label"), Subject: text.Draw(t, "subject"), Session: text.Draw(t, "session"),
			Split: split.Draw(t, "split"), Layout: l, Skeleton: rapid.SampledFrom(skeletons).Draw(t, "skeleton"),
		}
		at := rapid.Float64Range(-1e6, 1e6).Draw(t, "start")
		for range rapid.IntRange(1, 20).Draw(t, "frames") {
			take.Time = append(take.Time, at)
			at += rapid.Float64Range(1e-3, 10).Draw(t, "step")
			for range l.Channels {
				take.Data = append(take.Data, value.Draw(t, "value"))
			}
		}
		out = append(out, take)
	}
	return out
}

// puppet returns the skeleton of an invented puppet, its root of this name.
func puppet(root string) *body.Skeleton {
	return &body.Skeleton{Unit: "cm", Joints: []body.Joint{
		{Name: root, Parent: -1, Freedoms: []body.Freedom{body.MoveX, body.TurnZ, body.TurnX, body.TurnY}},
		{Name: "Arm_end", Parent: 0, Offset: r3.Vec{X: 0.1 + 0.2}, End: true},
	}}
}
