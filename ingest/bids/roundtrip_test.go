package bids_test

import (
	"encoding/json"
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/ingest/raw"
)

// invented is a recording to be written as BIDS.
type invented struct {
	columns     []raw.Column
	times       []float64 // nil for none
	rate        float64
	data        []float64 // frames × columns, NaN for missing
	annotations []raw.Annotation
}

// write gives the files of a recording. The order of the columns in its table
// is that of the recording, after the times.
func (v *invented) write() set {
	var rows, table, events strings.Builder
	rows.WriteString("component\tname\tunits\ttype\ttracked_point\tdescription\n")
	if v.times != nil {
		rows.WriteString("n/a\tt\ts\tLATENCY\tn/a\t\"when\"\n")
	}
	for i, c := range v.columns {
		component, unit := c.Channel.Component, c.Unit
		if component == "" {
			component = "n/a"
		}
		if unit == "" {
			unit = "n/a"
		}
		fmt.Fprintf(&rows, "%s\tcolumn %d\t%s\t%s\t%s\t5\" long\n", component, i, unit, c.Channel.Quantity, c.Channel.TrackedPoint)
	}
	width := len(v.columns)
	for i := range len(v.data) / width {
		var fields []string
		if v.times != nil {
			fields = append(fields, strconv.FormatFloat(v.times[i], 'f', -1, 64))
		}
		for _, x := range v.data[i*width : (i+1)*width] {
			field := strconv.FormatFloat(x, 'g', -1, 64)
			if math.IsNaN(x) {
				field = "n/a"
			}
			fields = append(fields, field)
		}
		table.WriteString(strings.Join(fields, "\t") + "\n")
	}
	s := set{motionFile: table.String(), channelsFile: rows.String()}
	keys := map[string]any{"MotionChannelCount": width}
	if v.rate > 0 {
		keys["SamplingFrequency"] = v.rate
	}
	b, err := json.Marshal(keys)
	if err != nil {
		panic(err)
	}
	s[jsonFile] = string(b)
	if len(v.annotations) > 0 {
		events.WriteString("onset\tduration\ttrial_type\n")
		for _, a := range v.annotations {
			fmt.Fprintf(&events, "%v\t%v\t%s\n", a.Start, a.End-a.Start, a.Label)
		}
		s[eventsFile] = events.String()
	}
	return s
}

// drawn invents a recording.
func drawn(t *rapid.T) *invented {
	v := &invented{}
	seen := map[string]bool{}
	for range rapid.IntRange(1, 6).Draw(t, "columns") {
		kind := rapid.SampledFrom([]struct {
			quantity    channels.Quantity
			component   []string
			units, held string
		}{
			{channels.Acceleration, []string{"x", "y", "z"}, "g", "m/s^2"},
			{channels.AngularRate, []string{"x", "y", "z"}, "deg/s", "rad/s"},
			{channels.Position, []string{"x", "y", "z"}, "mm", "m"},
			{channels.Orientation, []string{"quat_w", "quat_x"}, "", "1"},
			{channels.JointAngle, []string{""}, "rad", "rad"},
			{channels.Velocity, []string{"x"}, "", "m/s"},
		}).Draw(t, "kind")
		c := channels.Channel{
			TrackedPoint: rapid.SampledFrom([]string{"left_hand", "Jaw", "hat feather", "ö"}).Draw(t, "point"),
			Quantity:     kind.quantity, Component: rapid.SampledFrom(kind.component).Draw(t, "component"), Unit: kind.held,
		}
		c.Name = strings.TrimSuffix(c.TrackedPoint+"."+c.Quantity.Word()+"."+c.Component, ".")
		if !seen[c.Name] {
			v.columns = append(v.columns, raw.Column{Channel: c, Unit: kind.units})
		}
		seen[c.Name] = true
	}
	frames := rapid.IntRange(1, 40).Draw(t, "frames")
	if rapid.Bool().Draw(t, "timed") {
		now := 0.0
		for range frames {
			now += rapid.Float64Range(1e-3, 2).Draw(t, "step")
			v.times = append(v.times, now)
		}
	}
	if v.times == nil || rapid.Bool().Draw(t, "rate stated") {
		v.rate = rapid.Float64Range(0.5, 2000).Draw(t, "rate")
	}
	value := rapid.OneOf(rapid.Float64(), rapid.Just(math.NaN()), rapid.Float64Range(-1000, 1000))
	for range frames * len(v.columns) {
		v.data = append(v.data, value.Draw(t, "value"))
	}
	for i := range rapid.IntRange(0, 4).Draw(t, "events") {
		begin := float64(i + rapid.IntRange(0, 1).Draw(t, "onset"))
		v.annotations = append(v.annotations, raw.Annotation{Start: begin, End: begin + 0.5, Label: rapid.SampledFrom([]string{"wave", "bow low"}).Draw(t, "label"), Line: i + 2})
	}
	return v
}

// TestRoundTrip writes invented recordings and reads them again, to the bit.
func TestRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		v := drawn(t)
		takes, notices, err := v.write().read(motionFile)
		if err != nil || len(takes) != 1 || len(notices) > 0 {
			t.Fatalf("%d takes, notices %q, error %v", len(takes), notices, err)
		}
		want := &raw.Take{
			Identity: raw.Identity{Take: strings.TrimSuffix(motionFile, "_motion.tsv"), Label: "wave", Subject: "gretel"},
			Line:     1, Layout: &raw.Layout{Columns: v.columns}, Time: v.times, Data: v.data, Annotations: v.annotations,
		}
		if len(v.annotations) > 0 {
			want.Label = ""
		}
		if v.times == nil {
			for i := range len(v.data) / len(v.columns) {
				want.Time = append(want.Time, float64(i)/v.rate)
			}
		}
		if d := cmp.Diff(want, takes[0], cmpopts.EquateNaNs()); d != "" {
			t.Fatal(d)
		}
		for i := range want.Time {
			if line := takes[0].LineOf(i); line != i+1 {
				t.Fatalf("frame %d is in line %d", i, line)
			}
		}
	})
}
