package c3d_test

import (
	"bytes"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"strandwise/channels"
	"strandwise/ingest/c3d"
	"strandwise/ingest/raw"
)

// read reads the one take of a recording and the notices about it.
func read(t *testing.T, f c3d.Format, r *recording) (take *raw.Take, notices []string, err error) {
	t.Helper()
	path := filepath.Join(t.TempDir(), "a.c3d")
	data := r.write()
	if err := os.WriteFile(path, data, 0o644); err != nil {
		t.Fatal(err)
	}
	in := raw.Input{Name: "a.c3d", Path: path, Notice: func(text, evidence string) { notices = append(notices, text+": "+evidence) }}
	n := 0
	for take, err = range f.Read(bytes.NewReader(data), in) {
		n++
	}
	if n != 1 || (take == nil) == (err == nil) {
		t.Fatalf("%d takes, the last %v, %v", n, take, err)
	}
	return take, notices, err
}

func names(t *raw.Take) (out []string) {
	for _, c := range t.Layout.Columns {
		out = append(out, c.Channel.Name)
	}
	return out
}

func TestPointTake(t *testing.T) {
	r := sample()
	take, notices, err := read(t, c3d.Format{}, r)
	if err != nil {
		t.Fatal(err)
	}
	want := &raw.Take{Layout: &raw.Layout{}, Clock: raw.Seconds, Time: []float64{0, 0.01, 0.02}, Data: r.positions(), Annotations: sampleEvents()}
	for _, label := range r.labels {
		for _, axis := range []string{"x", "y", "z"} {
			want.Layout.Columns = append(want.Layout.Columns, raw.Column{
				Channel: channels.Channel{Name: label + ".pos." + axis, TrackedPoint: label, Quantity: channels.Position, Component: axis, Unit: "m"},
				Unit:    "mm",
			})
		}
	}
	if diff := cmp.Diff(want, take, cmpopts.EquateNaNs()); diff != "" {
		t.Errorf("want, got:\n%s", diff)
	}
	wantNotices := []string{
		"has analog channels beside its points, which are not part of the take: Fx1",
		"marks events, which are kept as annotations of an instant and cut nothing: 2 of them, the first is GO at 0.01 s",
	}
	if diff := cmp.Diff(wantNotices, notices); diff != "" {
		t.Errorf("notices: want, got:\n%s", diff)
	}
}

// sampleEvents are the events of the sample, whose times the file holds in
// single precision.
func sampleEvents() []raw.Annotation {
	at := func(s float32) float64 { return float64(s) }
	return []raw.Annotation{
		{Start: at(0.01), End: at(0.01), Label: "GO"},
		{Start: at(0.02), End: at(0.02), Label: "Left Grip", Subject: "P1"},
	}
}

func TestAnalogTake(t *testing.T) {
	r := sample()
	take, notices, err := read(t, c3d.Format{Stream: c3d.AnalogStream}, r)
	if err != nil {
		t.Fatal(err)
	}
	want := &raw.Take{
		Layout: &raw.Layout{Columns: []raw.Column{
			{Channel: channels.Channel{Name: "Fx1", TrackedPoint: "Fx1", Quantity: channels.Misc}}, // newtons are no unit we know
			{Channel: channels.Channel{Name: "ACC1", TrackedPoint: "ACC1", Quantity: channels.Misc}, Unit: "g"},
		}},
		Clock: raw.Seconds,
		Time:  []float64{0, 0.005, 0.01, 0.015, 0.02, 0.025},
		Data:  []float64{0, 2, 1, 4, 2, 6, 3, 8, 4, 10, 5, 12}, // (stored - offset) · scale · 2

		Annotations: sampleEvents(),
	}
	if diff := cmp.Diff(want, take, cmpopts.EquateApprox(0, 1e-12)); diff != "" {
		t.Errorf("want, got:\n%s", diff)
	}
	if !slices.Contains(notices, "has analog channels in N, whose numbers stay as recorded: Fx1") {
		t.Errorf("notices %q", notices)
	}
}

// TestClockWithoutRate counts frames, and parts of them for analog data.
func TestClockWithoutRate(t *testing.T) {
	r := sample()
	r.rate = 0
	r.events = nil
	for stream, want := range map[string][]float64{"points": {0, 1, 2}, "analog": {0, 0.5, 1, 1.5, 2, 2.5}} {
		take, _, err := read(t, c3d.Format{Stream: stream}, r)
		if err != nil {
			t.Fatal(err)
		}
		if take.Clock != raw.Frames || !slices.Equal(take.Time, want) {
			t.Errorf("%s: clock %v, times %v, want %v", stream, take.Clock, take.Time, want)
		}
	}
}

func TestLabels(t *testing.T) {
	for _, c := range []struct {
		name    string
		labels  []string
		want    []string
		notices []string
	}{
		{"sound", []string{"a", "b"}, []string{"a", "b"}, nil},
		{"case counts", []string{"a", "A"}, []string{"a", "A"}, nil},
		{"spaces around", []string{" a ", "b"}, []string{"a", "b"}, nil},
		{"subject and dots", []string{"P1:LWRI", "L.wri 2"}, []string{"P1:LWRI", "L.wri 2"}, nil},
		{"twice", []string{"a", "b", "a"}, []string{"a", "b", "a_2"}, []string{"has points that share a label, told apart by a number: a_2"}},
		{"numbers taken", []string{"a", "a", "a_2", "a"}, []string{"a", "a_3", "a_2", "a_4"}, []string{
			"has points that share a label, told apart by a number: a_3",
		}},
		{"empty", []string{"a", "", "b"}, []string{"a", "point2", "b"}, []string{"has points without a label, named by their place: point2"}},
		{"place taken", []string{"point2", ""}, []string{"point2", "point2_2"}, []string{"has points without a label, named by their place: point2_2"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := &recording{order: c3d.DEC, labels: c.labels, unit: "mm", scale: 1, rate: 50, first: 1, frames: 1, xyz: make([]float64, 3*len(c.labels))}
			take, notices, err := read(t, c3d.Format{}, r)
			if err != nil {
				t.Fatal(err)
			}
			var want []string
			for _, label := range c.want {
				want = append(want, label+".pos.x", label+".pos.y", label+".pos.z")
			}
			if diff := cmp.Diff(want, names(take)); diff != "" {
				t.Errorf("want, got:\n%s", diff)
			}
			if diff := cmp.Diff(c.notices, notices); diff != "" {
				t.Errorf("notices: want, got:\n%s", diff)
			}
		})
	}
}

// TestManySharedLabels names thousands of points that share a label, in
// reasonable time.
func TestManySharedLabels(t *testing.T) {
	r := wide(20000)
	r.events = nil
	for i := range r.labels {
		r.labels[i] = "a"
	}
	take, notices, err := read(t, c3d.Format{}, r)
	if err != nil {
		t.Fatal(err)
	}
	if got := take.Layout.Columns[3*19999].Channel.Name; got != "a_20000.pos.x" || len(notices) != 1 {
		t.Errorf("last point %q, %d notices", got, len(notices))
	}
}

// TestFewLabels names the points beyond the last label.
func TestFewLabels(t *testing.T) {
	r := sample()
	r.edit = func(p *parameter) {
		if p.group == "POINT" && p.name == "LABELS" {
			p.texts = p.texts[:1]
		}
	}
	take, _, err := read(t, c3d.Format{}, r)
	if err != nil {
		t.Fatal(err)
	}
	if got := take.Layout.Columns[3].Channel.Name; got != "point2.pos.x" {
		t.Errorf("second point %q", got)
	}
}

// TestResults reads points that a model computed as what they are.
func TestResults(t *testing.T) {
	r := sample()
	r.labels = []string{"LKneeAngles", "LKneeForce"}
	r.extra = []parameter{
		{group: "POINT", name: "ANGLES", kind: c3d.Char, texts: []string{"LKneeAngles"}},
		{group: "POINT", name: "ANGLE_UNITS", kind: c3d.Char, texts: []string{"deg"}},
		{group: "POINT", name: "FORCES", kind: c3d.Char, texts: []string{"LKneeForce"}},
		{group: "POINT", name: "FORCE_UNITS", kind: c3d.Char, texts: []string{"N"}},
	}
	take, notices, err := read(t, c3d.Format{}, r)
	if err != nil {
		t.Fatal(err)
	}
	want := []raw.Column{
		{Channel: channels.Channel{Name: "LKneeAngles.jntang.x", TrackedPoint: "LKneeAngles", Quantity: channels.JointAngle, Component: "x", Unit: "rad"}, Unit: "deg"},
		{Channel: channels.Channel{Name: "LKneeForce.misc.x", TrackedPoint: "LKneeForce", Quantity: channels.Misc, Component: "x"}},
	}
	if diff := cmp.Diff(want, []raw.Column{take.Layout.Columns[0], take.Layout.Columns[3]}); diff != "" {
		t.Errorf("want, got:\n%s", diff)
	}
	if !strings.Contains(strings.Join(notices, "\n"), "POINT:ANGLES") {
		t.Errorf("notices %q", notices)
	}
}

func TestStreams(t *testing.T) {
	points, analog := sample(), sample()
	points.channels, points.stored, points.perFrame = nil, nil, 0
	analog.labels, analog.xyz = nil, nil
	for _, c := range []struct {
		stream string
		r      *recording
		want   string
	}{
		{"points", points, ""},
		{"analog", analog, ""},
		{"", analog, "a.c3d: byte 2: holds no points; read its analog stream"},
		{"analog", points, "a.c3d: byte 4: holds no analog channels; read its points"},
		{"force", points, `unknown stream "force" of a C3D file; legal streams are points and analog`},
	} {
		_, _, err := read(t, c3d.Format{Stream: c.stream}, c.r)
		if got := errorText(err); got != c.want {
			t.Errorf("stream %q: error %q, want %q", c.stream, got, c.want)
		}
	}
}

func errorText(err error) string {
	if err == nil {
		return ""
	}
	return err.Error()
}

func TestSniff(t *testing.T) {
	sound := sample().write()
	for _, c := range []struct {
		name string
		head []byte
		want bool
	}{
		{"take.bin", sound, true},
		{"take.c3d", sound[:400], true},
		{"TAKE.C3D.gz", sound[:400], true},
		{"take.bin", sound[:400], false},
		{"take.c3d", nil, false},
		{"take.c3d", []byte{2}, false},
		{"take.c3d", []byte("time,x,y\n0,1,2\n"), false},
		{"take.csv", []byte("IP,x,y\n0,1,2\n" + strings.Repeat("0,1,2\n", 600)), false},
		{"take.c3d", append([]byte{2, 0x50}, make([]byte, 600)...), true}, // so that its fault is told
		{"take.bin", append([]byte{2, 0x50}, make([]byte, 600)...), false},
	} {
		if got := (c3d.Format{}).Sniff(c.head, c.name); got != c.want {
			t.Errorf("%s of %d bytes: %v, want %v", c.name, len(c.head), got, c.want)
		}
	}
}

// TestEarlyEvents counts event times from the first frame of a file that was
// cut from a longer recording; those of the header count so as they are.
func TestEarlyEvents(t *testing.T) {
	r := sample()
	r.first = 201 // two seconds in
	f, err := c3d.Read(bytes.NewReader(r.write()), c3d.Options{})
	if err != nil {
		t.Fatal(err)
	}
	for i, want := range []float64{0.01, 0.02} {
		const tolerance = 1e-6 // stored in 32 bits
		if got := f.Events[i].Time; math.Abs(got-want) > tolerance {
			t.Errorf("event %d at %v s, want %v s", i, got, want)
		}
	}
	p := f.Parameters.Find("EVENT", "TIMES")
	if got := p.Numbers()[1]; math.Abs(got-2.02) > 1e-6 {
		t.Errorf("the file states %v s, want 2.02 s after frame 1", got)
	}
}
