package export_test

import (
	"crypto/sha256"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"strandwise/channels"
	"strandwise/export"
)

// wristband returns the layout of an invented wristband: six channels in two
// groups on one limb.
func wristband(t testing.TB) *channels.Layout {
	t.Helper()
	l := &channels.Layout{}
	for _, q := range []channels.Quantity{channels.Acceleration, channels.AngularRate} {
		for _, axis := range []string{"x", "y", "z"} {
			l.Channels = append(l.Channels, channels.Channel{
				Name: "left_wrist." + q.Word() + "." + axis, TrackedPoint: "left_wrist", Quantity: q, Component: axis, Unit: q.SI(),
			})
		}
	}
	out, err := l.WithGroups([]channels.Group{
		{Name: "left_wrist.accel", Limb: "left_wrist", Channels: []int{0, 1, 2}},
		{Name: "left_wrist.gyro", Limb: "left_wrist", Channels: []int{3, 4, 5}},
	})
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// perform returns an invented take of so many frames at 50 Hz: slow waves with
// a little noise, as a sensor of 16 bits would give them.
func perform(l *channels.Layout, id string, frames int, r *rand.Rand) *channels.Take {
	t := &channels.Take{ID: id, Label: "curtain", Subject: "ada", Session: "one", Split: channels.Train, Layout: l}
	start := math.Round(1e5*r.Float64()) / 50
	for i := range frames {
		t.Time = append(t.Time, start+float64(i)/50)
		for c := range l.Channels {
			v := math.Sin(float64(i)/20+float64(c)) + 0.02*r.NormFloat64()
			t.Data = append(t.Data, math.Round(v*1e4)/1e4)
		}
	}
	return t
}

// vary returns an invented synthetic take of a recorded one.
func vary(source *channels.Take, draw int, r *rand.Rand) *channels.Take {
	t := *source
	t.ID = fmt.Sprintf("%s~%03d", source.ID, draw)
	t.Time = slices.Clone(source.Time)
	t.Data = make([]float64, len(source.Data))
	for i, v := range source.Data {
		t.Data[i] = v + 0.01*r.NormFloat64()
	}
	t.Made = &channels.Making{Source: source.ID, Draw: draw, Rank: draw, Method: "combined", Parameters: map[string]float64{
		"trim_start_s": r.NormFloat64() / 10, "amplitude": math.Exp(r.NormFloat64() / 10), "duration": 1 + r.NormFloat64()/10,
	}}
	return &t
}

func newRand() *rand.Rand { return rand.New(rand.NewPCG(7, 7)) }

// troupe returns invented takes of two labels by three people, each training
// take followed by its synthetic ones; the last person's are for testing.
func troupe(l *channels.Layout, perTake int) []*channels.Take {
	r := newRand()
	var out []*channels.Take
	for s, subject := range []string{"ada", "bo", "cleo"} {
		for n, label := range []string{"curtain", "spotlight"} {
			t := perform(l, fmt.Sprintf("%s-%s", subject, label), 20+5*s+n, r)
			t.Label, t.Subject = label, subject
			if subject == "cleo" {
				t.Split = channels.Test
			}
			out = append(out, t)
			for d := range perTake {
				if t.Split == channels.Train {
					out = append(out, vary(t, d, r))
				}
			}
		}
	}
	return out
}

// write writes takes as a sealed set.
func write(t testing.TB, dir string, l *channels.Layout, o export.Options, takes []*channels.Take) *export.Manifest {
	t.Helper()
	w, err := export.Create(dir, l, o)
	return writeTo(t, w, err, takes)
}

// writeTo is write with the writer that Create returned.
func writeTo(t testing.TB, w *export.Writer, err error, takes []*channels.Take) *export.Manifest {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
	m, err := fill(w, takes)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// fill adds takes and a score, and seals the set.
func fill(w *export.Writer, takes []*channels.Take) (*export.Manifest, error) {
	for _, take := range takes {
		if err := w.Add(take); err != nil {
			return nil, err
		}
	}
	if err := w.Attach("score.json", []byte("{\"error\": 0.25}\n")); err != nil {
		return nil, err
	}
	return w.Seal("invented for a test")
}

// both asks for both tables in small row groups and files.
func both() export.Options {
	return export.Options{
		Tables: []export.Table{export.Takes, export.Frames}, RowGroupBytes: 4 << 10, FileBytes: 10 << 10,
		Version: "0.1.0", Seed: 42, Plan: []byte(`{"reach": 1, "labels": ["curtain", "spotlight"]}`),
		Recordings: []export.Recording{{Path: "recordings/ada.csv", Bytes: 1200, SHA256: "00ff"}},
	}
}

// bucketed is both in three buckets.
func bucketed() export.Options {
	o := both()
	o.Buckets = 3
	return o
}

// sha returns the SHA-256 of a text in hexadecimal.
func sha(text string) string { return fmt.Sprintf("%x", sha256.Sum256([]byte(text))) }
