package report_test

import (
	"flag"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"testing"

	"strandwise/channels"
	"strandwise/export/report"
	"strandwise/testdata/opendata"
)

var pages = flag.String("pages", "", "keep pages that are no golden files in this folder, for a browser to open")

// keep writes a page where it is wanted.
func keep(t *testing.T, name, page string) {
	t.Helper()
	if *pages == "" {
		return
	}
	if err := os.WriteFile(filepath.Join(*pages, name), []byte(page), 0o666); err != nil {
		t.Fatal(err)
	}
}

// inertial lays out a set of one accelerometer and one gyroscope.
func inertial(t testing.TB) *channels.Layout {
	t.Helper()
	l := &channels.Layout{}
	for _, name := range []string{"wrist.accel.x", "wrist.accel.y", "wrist.accel.z", "wrist.gyro.x", "wrist.gyro.y", "wrist.gyro.z"} {
		c, _ := channels.ParseHeader(name)
		c.Unit = c.Quantity.SI()
		l.Channels = append(l.Channels, c)
	}
	l, err := l.WithGroups([]channels.Group{{Name: "wrist.accel", Limb: "wrist", Channels: []int{0, 1, 2}}, {Name: "wrist.gyro", Limb: "wrist", Channels: []int{3, 4, 5}}})
	if err != nil {
		t.Fatal(err)
	}
	return l
}

// varied returns a plainly varied copy of a take, which is enough to draw.
func varied(t *channels.Take, draw int, r *rand.Rand) *channels.Take {
	out := t.Clone()
	out.ID, out.Made = fmt.Sprint(t.ID, "~", draw), &channels.Making{Source: t.ID, Draw: draw, Method: "scaling"}
	size, tempo := math.Exp(0.2*r.NormFloat64()), math.Exp(0.1*r.NormFloat64())
	for i := range out.Data {
		out.Data[i] *= size
	}
	for i := range out.Time {
		out.Time[i] *= tempo
	}
	return out
}

// The page of a set of 27 labels, 861 recorded takes and 16 synthetic ones each
// stays small.
func TestOpenRecordings(t *testing.T) {
	layout, c := inertial(t), report.NewCollector()
	var scales channels.Scales
	r := rand.New(rand.NewPCG(1, 1))
	var labels []string
	for _, take := range opendata.Set(t, "UTD_MHAD_inertial") {
		take.Layout, take.Split = layout, channels.None
		for i := range take.Time {
			take.Time[i] /= 50
		}
		if n := len(labels); n == 0 || labels[n-1] != take.Label {
			labels = append(labels, take.Label)
		}
		scales.Add(take)
		c.Add(take)
		for d := range 16 {
			c.Add(varied(take, d, r))
		}
	}
	in := whole(t, labels[:27]...)
	in.Counts, in.Labels = c.Counts(), c.Labels(&scales)
	page := written(t, in)
	t.Logf("%d labels, %.1f MB", len(in.Labels), float64(len(page))/1e6)
	if len(in.Labels) != 27 || len(page) > 10_000_000 {
		t.Errorf("%d labels make a page of %d bytes", len(in.Labels), len(page))
	}
	keep(t, "open.html", page)
}
