package c3d

import (
	"cmp"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"strandwise/channels"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// The streams of a file that can become a take.
const (
	PointStream  = "points"
	AnalogStream = "analog"
)

// Format is the C3D format. A file is one take. It is stateless and safe for
// concurrent use.
type Format struct {
	// Stream is what becomes the take: "points" or "analog", each on its own
	// clock. Empty is "points".
	Stream string
}

var _ raw.Format = Format{}

// Extensions returns the extension of C3D files.
func (Format) Extensions() []string { return []string{".c3d"} }

// Sniff knows a file by its second byte and by the machine its parameters
// state, or its name where these lie beyond the head.
func (Format) Sniff(head []byte, name string) bool {
	if len(head) <= keyAt || head[keyAt] != key || head[parameterBlockAt] < 2 {
		return false
	}
	if at := offsetOf(int(head[parameterBlockAt])) + orderAt; at < int64(len(head)) {
		return Order(head[at]).known() || named(name)
	}
	return named(name)
}

func named(name string) bool {
	return strings.Contains(strings.ToLower(filepath.Base(name)), ".c3d")
}

// Read yields the one take of a file. Where the file states no rate, the times
// count frames. Missing values are NaN.
func (f Format) Read(r io.Reader, in raw.Input) raw.Stream {
	return func(yield func(*raw.Take, error) bool) {
		yield(f.take(r, in))
	}
}

func (f Format) take(r io.Reader, in raw.Input) (*raw.Take, error) {
	points := f.Stream == "" || f.Stream == PointStream
	if !points && f.Stream != AnalogStream {
		return nil, fmt.Errorf("unknown stream %q of a C3D file; legal streams are %s and %s", f.Stream, PointStream, AnalogStream)
	}
	notice := in.Notice
	if notice == nil {
		notice = func(string, string) {}
	}
	file, err := Read(r, Options{Name: in.Name, Size: sizeOf(in.Path), SkipPoints: !points, SkipAnalog: points, Notice: notice})
	if err != nil {
		return nil, err
	}
	var t *raw.Take
	if points {
		t, err = file.pointTake(in.Name, notice)
	} else {
		t, err = file.analogTake(in.Name, notice)
	}
	if err != nil {
		return nil, err
	}
	if t.Annotations = file.annotations(); len(t.Annotations) > 0 {
		first := t.Annotations[0]
		notice("marks events, which are kept as annotations of an instant and cut nothing", fmt.Sprintf("%d of them, the first is %s at %.4g s", len(t.Annotations), first.Label, first.Start))
	}
	return t, nil
}

// annotations returns the events in order of time, each an instant on the clock
// of the takes, which begins at the first frame. What context an event has,
// such as a side, stands before its label.
func (f *File) annotations() []raw.Annotation {
	var out []raw.Annotation
	for _, e := range f.Events {
		label := strings.TrimSpace(e.Context + " " + e.Label)
		out = append(out, raw.Annotation{Start: e.Time, End: e.Time, Label: label, Subject: e.Subject})
	}
	slices.SortStableFunc(out, func(a, b raw.Annotation) int { return cmp.Compare(a.Start, b.Start) })
	return out
}

func (f *File) pointTake(name string, notice func(text, evidence string)) (*raw.Take, error) {
	if len(f.Points.Labels) == 0 {
		return nil, &fault.Error{File: name, Offset: pointsAt, Problem: "holds no points", Remedy: "read its analog stream"}
	}
	if len(f.Analog.Labels) > 0 {
		notice("has analog channels beside its points, which are not part of the take", f.Analog.Labels[0])
	}
	t := &raw.Take{Layout: &raw.Layout{Columns: f.pointColumns(notice)}, Data: f.Points.Data}
	t.Clock, t.Time = clock(f.Frames, f.Points.Rate, 1)
	return t, nil
}

func (f *File) analogTake(name string, notice func(text, evidence string)) (*raw.Take, error) {
	if len(f.Analog.Labels) == 0 {
		return nil, &fault.Error{File: name, Offset: analogAt, Problem: "holds no analog channels", Remedy: "read its points"}
	}
	t := &raw.Take{Layout: &raw.Layout{Columns: f.analogColumns(notice)}, Data: f.Analog.Data}
	t.Clock, t.Time = clock(f.Frames*f.Analog.PerFrame, f.Analog.Rate, f.Analog.PerFrame)
	return t, nil
}

// clock returns n times from 0 on: in seconds, or without a rate in frames,
// which hold so many of them.
func clock(n int, rate float64, perFrame int) (raw.Clock, []float64) {
	unit := raw.Seconds
	if rate == 0 {
		unit, rate = raw.Frames, float64(perFrame)
	}
	out := make([]float64, n)
	for i := range out {
		out[i] = float64(i) / rate
	}
	return unit, out
}

// result is what points listed in a parameter are instead of places.
type result struct {
	list, unit string // parameters of the group POINT
	quantity   channels.Quantity
}

// resultLists returns the lists of points that are no places.
func resultLists() []result {
	return []result{
		{"ANGLES", "ANGLE_UNITS", channels.JointAngle},
		{"FORCES", "", channels.Misc},
		{"MOMENTS", "", channels.Misc},
		{"POWERS", "", channels.Misc},
		{"SCALARS", "", channels.Misc},
		{"REACTIONS", "", channels.Misc},
	}
}

// results returns, by their labels, the points that are no places.
func (f *File) results() map[string]result {
	out := map[string]result{}
	for _, r := range resultLists() {
		for _, label := range f.Parameters.texts("POINT", r.list) {
			out[label] = r
		}
	}
	return out
}

// pointColumns are the coordinates of every point: label.pos.x, .y and .z.
func (f *File) pointColumns(notice func(text, evidence string)) []raw.Column {
	var out []raw.Column
	results := f.results()
	for _, label := range f.Points.Labels {
		quantity, unit := channels.Position, f.Points.Unit
		if r, ok := results[label]; ok {
			quantity, unit = r.quantity, f.Parameters.firstText("POINT", r.unit)
			notice(fmt.Sprintf("lists points as POINT:%s; they are read as %s, not as positions", r.list, r.quantity), label)
		}
		for _, axis := range []string{"x", "y", "z"} {
			c := channels.Channel{
				Name:         label + "." + quantity.Word() + "." + axis,
				TrackedPoint: label, Quantity: quantity, Component: axis, Unit: quantity.SI(),
			}
			out = append(out, raw.Column{Channel: c, Unit: unit})
		}
	}
	return out
}

// analogColumns are the analog channels under their labels. What they measure
// is known by their unit alone, since labels are free text.
func (f *File) analogColumns(notice func(text, evidence string)) []raw.Column {
	var out []raw.Column
	for i, label := range f.Analog.Labels {
		named, _ := channels.ParseHeader(label)
		c := channels.Channel{Name: label, TrackedPoint: named.TrackedPoint, Quantity: channels.Misc, Component: named.Component}
		unit := f.Analog.Units[i]
		if _, err := channels.ParseUnit(unit); err != nil {
			if unit != "" {
				notice(fmt.Sprintf("has analog channels in %s, whose numbers stay as recorded", unit), label)
			}
			unit = ""
		}
		out = append(out, raw.Column{Channel: c, Unit: unit})
	}
	return out
}

// sizeOf returns the size of a file that is stored unpacked, or 0.
func sizeOf(path string) int64 {
	info, err := os.Stat(path)
	if err != nil || !info.Mode().IsRegular() {
		return 0
	}
	f, err := os.Open(path)
	if err != nil {
		return 0
	}
	defer f.Close()
	var head [keyAt + 1]byte
	if _, err := io.ReadFull(f, head[:]); err != nil || head[keyAt] != key {
		return 0
	}
	return info.Size()
}
