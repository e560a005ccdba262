package export_test

import (
	"encoding/json"
	"fmt"
	"maps"
	"math"
	"path/filepath"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/export"
)

// takeRow is what the table takes must say of a take.
func takeRow(take *channels.Take) map[string]any {
	row := map[string]any{
		"id": take.ID, "label": take.Label, "subject": take.Subject, "session": take.Session, "origin": string(take.Origin()),
		"source": nil, "draw": nil, "rank": nil, "method": nil, "parameters": nil,
		"frames": int32(take.Frames()), "rate_hz": take.Rate(), "start_s": take.Time[0],
	}
	if m := take.Made; m != nil {
		row["source"], row["draw"], row["rank"], row["method"] = m.Source, int32(m.Draw), int32(m.Rank), m.Method
		row["parameters"] = maps.Clone(m.Parameters)
	}
	var clock []float32
	signals := make([][]float32, take.Width())
	for i, at := range take.Time {
		clock = append(clock, float32(at-take.Time[0]))
		for c, v := range take.Frame(i) {
			signals[c] = append(signals[c], float32(v))
		}
	}
	row["time_s"] = clock
	for c, ch := range take.Layout.Channels {
		row[ch.Name] = signals[c]
	}
	return row
}

// frameRows is what the table frames must say of a take.
func frameRows(take *channels.Take) []map[string]any {
	var out []map[string]any
	for i, at := range take.Time {
		row := map[string]any{"take": take.ID, "frame": int32(i), "time_s": at}
		for c, v := range take.Frame(i) {
			row[take.Layout.Channels[c].Name] = float32(v)
		}
		out = append(out, row)
	}
	return out
}

// expected returns the rows of both tables, in order, by split.
func expected(takes []*channels.Take) map[export.Table]map[string][]map[string]any {
	out := map[export.Table]map[string][]map[string]any{export.Takes: {}, export.Frames: {}}
	for _, take := range takes {
		split := "train"
		if take.Split == channels.Test {
			split = "test"
		}
		out[export.Takes][split] = append(out[export.Takes][split], takeRow(take))
		out[export.Frames][split] = append(out[export.Frames][split], frameRows(take)...)
	}
	return out
}

func compareTables(t testing.TB, dir string, takes []*channels.Take) {
	t.Helper()
	for table, splits := range expected(takes) {
		for split, want := range splits {
			got := readTable(t, dir, table, split).values
			for _, row := range got {
				parseParameters(t, row)
			}
			if diff := cmp.Diff(want, got); diff != "" {
				t.Errorf("table %s, split %s (-added +read):\n%s", table, split, diff)
			}
		}
	}
}

// parseParameters replaces the JSON of a row by what it says; its spelling has
// a test of its own.
func parseParameters(t testing.TB, row map[string]any) {
	t.Helper()
	text, ok := row["parameters"].(string)
	if !ok {
		return
	}
	parsed := map[string]float64{}
	if err := json.Unmarshal([]byte(text), &parsed); err != nil {
		t.Fatal(err)
	}
	row["parameters"] = parsed
}

func TestTablesReadBack(t *testing.T) {
	l := wristband(t)
	takes := troupe(l, 8)
	dir := t.TempDir()
	m := write(t, dir, l, both(), takes)
	compareTables(t, dir, takes)
	parts := map[string]int{}
	groups := 0
	for _, f := range m.Files {
		parts[filepath.Dir(f.Path)]++
		groups = max(groups, len(f.RowGroups))
	}
	if parts["takes/split=train"] < 2 || parts["frames/split=train"] < 2 || groups < 2 {
		t.Errorf("parts %v, at most %d row groups: the test means to see several of each", parts, groups)
	}
}

// TestTablesReadBackAlways draws layouts, takes and sizes.
func TestTablesReadBackAlways(t *testing.T) {
	root, sets := t.TempDir(), 0
	rapid.Check(t, func(rt *rapid.T) {
		l := &channels.Layout{}
		for c := range rapid.IntRange(1, 4).Draw(rt, "channels") {
			l.Channels = append(l.Channels, channels.Channel{Name: fmt.Sprintf("c%d", c), Quantity: channels.Misc})
		}
		takes := rapid.SliceOfN(rapid.Custom(func(rt *rapid.T) *channels.Take { return drawTake(rt, l) }), 1, 12).Draw(rt, "takes")
		o := export.Options{
			Tables:        export.AllTables(),
			RowGroupBytes: rapid.Int64Range(1, 2000).Draw(rt, "row group"),
			FileBytes:     rapid.Int64Range(1, 20000).Draw(rt, "file"),
		}
		sets++
		dir := filepath.Join(root, fmt.Sprint(sets))
		w, err := export.CreateOn(&export.Disk{}, dir, l, o)
		writeTo(t, w, err, takes)
		compareTables(t, dir, takes)
	})
}

func drawTake(t *rapid.T, l *channels.Layout) *channels.Take {
	take := &channels.Take{
		ID: rapid.StringN(1, 8, -1).Draw(t, "id"), Label: rapid.String().Draw(t, "label"), Subject: rapid.SampledFrom([]string{"", "ada", "bo"}).Draw(t, "subject"),
		Session: rapid.String().Draw(t, "session"), Split: rapid.SampledFrom([]channels.Split{channels.None, channels.Train, channels.Test}).Draw(t, "split"), Layout: l,
	}
	at := rapid.Float64Range(-1e6, 1e6).Draw(t, "start")
	for range rapid.IntRange(1, 30).Draw(t, "frames") {
		take.Time = append(take.Time, at)
		at += rapid.Float64Range(1e-3, 10).Draw(t, "step")
		for range l.Channels {
			take.Data = append(take.Data, rapid.Float64Range(-math.MaxFloat32, math.MaxFloat32).Draw(t, "value"))
		}
	}
	if take.Split != channels.Test && rapid.Bool().Draw(t, "synthetic") {
		take.Made = &channels.Making{
			Source: rapid.StringN(1, 8, -1).Draw(t, "source"), Draw: int(rapid.Int32().Draw(t, "draw")), Rank: int(rapid.Int32().Draw(t, "rank")),
			Method: rapid.String().Draw(t, "method"), Parameters: drawParameters(t),
		}
	}
	return take
}

func drawParameters(t *rapid.T) map[string]float64 {
	return rapid.MapOfN(rapid.String(), rapid.Float64Range(-1e20, 1e20), 0, 4).Draw(t, "parameters")
}

func TestColumnsOfTakes(t *testing.T) {
	l := wristband(t)
	dir := t.TempDir()
	write(t, dir, l, export.Options{}, troupe(l, 1))
	const list = "list<float32>"
	want := []string{
		"id: utf8", "label: utf8", "subject: utf8", "session: utf8", "origin: utf8", "source: utf8", "draw: int32", "rank: int32",
		"method: utf8", "parameters: utf8", "frames: int32", "rate_hz: float64", "start_s: float64", "time_s: " + list,
		"left_wrist.accel.x: " + list, "left_wrist.accel.y: " + list, "left_wrist.accel.z: " + list,
		"left_wrist.gyro.x: " + list, "left_wrist.gyro.y: " + list, "left_wrist.gyro.z: " + list,
	}
	if diff := cmp.Diff(want, readTable(t, dir, export.Takes, "train").fields); diff != "" {
		t.Errorf("columns (-want +got):\n%s", diff)
	}
	if got := readTable(t, dir, export.Frames, "train"); len(got.fields) > 0 {
		t.Error("the table frames was written unasked")
	}
}

func TestReservedChannelNames(t *testing.T) {
	l := &channels.Layout{Channels: []channels.Channel{{Name: "Label"}, {Name: "split"}, {Name: "frame"}, {Name: "x"}}}
	take := &channels.Take{ID: "a", Layout: l, Time: []float64{0}, Data: []float64{1, 2, 3, 4}}
	dir := t.TempDir()
	m := write(t, dir, l, both(), []*channels.Take{take})
	row := readTable(t, dir, export.Frames, "train").values[0]
	want := map[string]any{
		"take": "a", "frame": int32(0), "time_s": 0.0,
		"Label_channel": float32(1), "split_channel": float32(2), "frame_channel": float32(3), "x": float32(4),
	}
	if diff := cmp.Diff(want, row); diff != "" {
		t.Errorf("row (-want +got):\n%s", diff)
	}
	if c := m.Layout.Channels[0]; c.Name != "Label" || c.Column != "Label_channel" {
		t.Errorf("the manifest says channel %s stands in column %s", c.Name, c.Column)
	}
}

func TestFileMetadata(t *testing.T) {
	l := wristband(t)
	dir := t.TempDir()
	m := write(t, dir, l, both(), troupe(l, 1))
	for _, table := range export.AllTables() {
		for _, text := range readTable(t, dir, table, "train").layout {
			var got export.FileLayout
			if err := json.Unmarshal([]byte(text), &got); err != nil {
				t.Fatal(err)
			}
			rate := 50.0
			want := export.FileLayout{
				Format: "strandwise.layout/1", ProgramVersion: "0.1.0", Table: table, RateHz: &rate, Layout: m.Layout, Cautions: export.Cautions(),
			}
			if diff := cmp.Diff(want, got); diff != "" {
				t.Errorf("table %s (-want +got):\n%s", table, diff)
			}
		}
	}
	group := m.Layout.Groups[1]
	if diff := cmp.Diff(export.Group{Name: "left_wrist.gyro", Limb: "left_wrist", Channels: []string{"left_wrist.gyro.x", "left_wrist.gyro.y", "left_wrist.gyro.z"}}, group); diff != "" {
		t.Errorf("group (-want +got):\n%s", diff)
	}
}

// TestDifferentRates: a file whose takes differ in rate states none.
func TestDifferentRates(t *testing.T) {
	l := &channels.Layout{Channels: []channels.Channel{{Name: "x"}}}
	slow := &channels.Take{ID: "slow", Layout: l, Time: []float64{0, 0.02}, Data: []float64{1, 2}}
	fast := &channels.Take{ID: "fast", Layout: l, Time: []float64{0, 0.01}, Data: []float64{1, 2}}
	for _, tc := range []struct {
		name  string
		takes []*channels.Take
		known bool
	}{
		{"same", []*channels.Take{slow, slow}, true},
		{"different", []*channels.Take{slow, fast}, false},
		{"a single frame", []*channels.Take{{ID: "one", Layout: l, Time: []float64{3}, Data: []float64{1}}}, false},
	} {
		dir := t.TempDir()
		write(t, dir, l, export.Options{}, tc.takes)
		var got export.FileLayout
		if err := json.Unmarshal([]byte(readTable(t, dir, export.Takes, "train").layout[0]), &got); err != nil {
			t.Fatal(err)
		}
		if known := got.RateHz != nil; known != tc.known {
			t.Errorf("%s: rate known: %v, want %v", tc.name, known, tc.known)
		}
	}
}

// TestLongTake writes a take that is longer than a block of frames, in row
// groups smaller than it.
func TestLongTake(t *testing.T) {
	l := &channels.Layout{Channels: []channels.Channel{{Name: "x"}}}
	take := &channels.Take{ID: "long", Layout: l}
	for i := range 40_000 {
		take.Time = append(take.Time, 1e6+float64(i)/1000)
		take.Data = append(take.Data, float64(i))
	}
	dir := t.TempDir()
	o := both()
	o.FileBytes = 100 << 10
	write(t, dir, l, o, []*channels.Take{take})
	got := readTable(t, dir, export.Frames, "train").values
	if len(got) != take.Frames() {
		t.Fatalf("%d rows, want %d", len(got), take.Frames())
	}
	for i, row := range got {
		if row["frame"] != int32(i) || row["time_s"] != take.Time[i] || row["x"] != float32(i) {
			t.Fatalf("row %d: %v", i, row)
		}
	}
}
