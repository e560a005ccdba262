package columnar_test

import (
	"bytes"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/parquet-go/parquet-go"

	"strandwise/channels"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// setTake is a row of the table takes of a set, setFrame one of the table
// frames, as package export documents them.
type setTake struct {
	ID         string    `parquet:"id,dict"`
	Label      string    `parquet:"label,dict"`
	Subject    string    `parquet:"subject,dict"`
	Session    string    `parquet:"session,dict"`
	Origin     string    `parquet:"origin,dict"`
	Source     *string   `parquet:"source,optional,dict"`
	Draw       *int32    `parquet:"draw,optional"`
	Parameters *string   `parquet:"parameters,optional"`
	Frames     int32     `parquet:"frames"`
	RateHz     float64   `parquet:"rate_hz"`
	StartS     float64   `parquet:"start_s"`
	TimeS      []float32 `parquet:"time_s,list"`
	X          []float32 `parquet:"left.accel.x,list"`
	Rank       []float32 `parquet:"rank_channel,list"`
	W          []float32 `parquet:"hand q,list"`
}

type setFrame struct {
	Take  string  `parquet:"take,dict"`
	Frame int32   `parquet:"frame"`
	TimeS float64 `parquet:"time_s"`
	X     float32 `parquet:"left.accel.x"`
	Rank  float32 `parquet:"rank_channel"`
	W     float32 `parquet:"hand q"`
}

const setLayout = `{"format":"strandwise.layout/1","program_version":"0","table":"TABLE","rate_hz":null,"channels":[
	{"name":"left.accel.x","column":"left.accel.x","tracked_point":"left","quantity":"ACCEL","component":"x","unit":"m/s^2"},
	{"name":"rank","column":"rank_channel","tracked_point":"","quantity":"MISC","component":"","unit":""},
	{"name":"hand q","column":"hand q","tracked_point":"hand","quantity":"ORNT","component":"quat_w","unit":"1"}],"groups":[],"cautions":[]}`

// wantLayout is what setLayout stands for: not what the names of the columns
// would make of them.
var wantLayout = &raw.Layout{Columns: []raw.Column{
	{Channel: channels.Channel{Name: "left.accel.x", TrackedPoint: "left", Quantity: channels.Acceleration, Component: "x", Unit: "m/s^2"}, Unit: "m/s^2"},
	{Channel: channels.Channel{Name: "rank", Quantity: channels.Misc}},
	{Channel: channels.Channel{Name: "hand q", TrackedPoint: "hand", Quantity: channels.Orientation, Component: "quat_w", Unit: "1"}, Unit: "1"},
}}

// write writes rows as parquet-go does, in row groups of two rows.
func write[T any](t testing.TB, rows []T, options ...parquet.WriterOption) []byte {
	t.Helper()
	var out bytes.Buffer
	w := parquet.NewGenericWriter[T](&out, append([]parquet.WriterOption{parquet.MaxRowsPerRowGroup(2)}, options...)...)
	if _, err := w.Write(rows); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

func setTakes(t testing.TB) []byte {
	source, draw, parameters := "a", int32(3), `{"trim_start_s":0.1}`
	return write(t, []setTake{
		{ID: "a", Label: "wave", Subject: "ana", Session: "", Origin: "recorded", Frames: 3, StartS: 0.25,
			TimeS: []float32{0, 0.25, 0.5}, X: []float32{1, 2, 3}, Rank: []float32{0, 0, 1}, W: []float32{0.5, 0.5, 1}},
		{ID: "a/3", Label: "wave", Subject: "ana", Session: "", Origin: "synthetic", Source: &source, Draw: &draw, Parameters: &parameters, Frames: 2,
			TimeS: []float32{0, 0.5}, X: []float32{4, 5}, Rank: []float32{0, 2}, W: []float32{1, 1}},
		{ID: "b", Label: "nod", Subject: "bo", Session: "am", Origin: "recorded", Frames: 2,
			TimeS: []float32{0, 0.5}, X: []float32{6, 7}, Rank: []float32{0, 2}, W: []float32{1, 1}},
	}, parquet.KeyValueMetadata("strandwise.layout", strings.Replace(setLayout, "TABLE", "takes", 1)), parquet.Compression(&parquet.Snappy))
}

func setFrames(t testing.TB) []byte {
	return write(t, []setFrame{
		{Take: "a", Frame: 0, TimeS: 0.25, X: 1, Rank: 0, W: 0.5}, {Take: "a", Frame: 1, TimeS: 0.5, X: 2, Rank: 0, W: 0.5},
		{Take: "a", Frame: 2, TimeS: 0.75, X: 3, Rank: 1, W: 1}, {Take: "b", Frame: 0, TimeS: 0, X: 6, W: 1}, {Take: "b", Frame: 1, TimeS: 0.5, X: 7, Rank: 2, W: 1},
	}, parquet.KeyValueMetadata("strandwise.layout", strings.Replace(setLayout, "TABLE", "frames", 1)))
}

func put(t testing.TB, data []byte, path ...string) string {
	t.Helper()
	name := filepath.Join(path...)
	if err := os.MkdirAll(filepath.Dir(name), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(name, data, 0o666); err != nil {
		t.Fatal(err)
	}
	return name
}

// TestSet reads the tables of a set: its columns of making are kept out, its
// layout comes from the metadata, its split from the folder.
func TestSet(t *testing.T) {
	dir := t.TempDir()
	takes := put(t, setTakes(t), dir, "takes", "split=test", "part-00000.parquet")
	frames := put(t, setFrames(t), dir, "frames", "split=test", "part-00000.parquet")
	wantA := &raw.Take{
		Identity: raw.Identity{Take: "a", Label: "wave", Subject: "ana", Split: "test"}, Layout: wantLayout,
		Time: []float64{0.25, 0.5, 0.75}, Data: []float64{1, 0, 0.5, 2, 0, 0.5, 3, 1, 1},
	}
	wantMade := &raw.Take{
		Identity: raw.Identity{Take: "a/3", Label: "wave", Subject: "ana", Split: "test"}, Layout: wantLayout,
		Time: []float64{0, 0.5}, Data: []float64{4, 0, 1, 5, 2, 1}, Synthetic: true,
	}
	wantB := &raw.Take{
		Identity: raw.Identity{Take: "b", Label: "nod", Subject: "bo", Session: "am", Split: "test"}, Layout: wantLayout,
		Time: []float64{0, 0.5}, Data: []float64{6, 0, 1, 7, 2, 1},
	}
	got, told, err := readAll(open(t, takes), raw.Input{Name: takes, Path: takes})
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff([]*raw.Take{wantA, wantMade, wantB}, got, same...); diff != "" {
		t.Error(diff)
	}
	if len(told) != 0 {
		t.Errorf("told %q", told)
	}

	got, told, err = readAll(open(t, frames), raw.Input{Name: frames, Path: frames})
	if err != nil || len(got) != 0 || len(told) != 1 || !strings.Contains(told[0], "repeats the table takes") {
		t.Errorf("frames beside takes: %d takes, told %q, error %v", len(got), told, err)
	}

	// The table frames alone names no labels.
	alone := put(t, setFrames(t), dir, "alone", "part-00000.parquet")
	wantA.Identity, wantB.Identity = raw.Identity{Take: "a"}, raw.Identity{Take: "b"}
	got, _, err = readAll(open(t, alone), raw.Input{Name: alone, Path: alone})
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff([]*raw.Take{wantA, wantB}, got, same...); diff != "" {
		t.Error(diff)
	}
}

// TestGroups reads the channel groups of a set as its layout states them, which
// the names of its channels would not give.
func TestGroups(t *testing.T) {
	const channels = `"channels":[{"name":"c0","column":"c0","quantity":"MISC"},{"name":"c1","column":"c1","quantity":"MISC"},{"name":"c2","column":"c2","quantity":"MISC"}]`
	for groups, want := range map[string][]raw.Group{
		`[{"name":"left","limb":"arm","channels":["c0","c2"]},{"name":"right","limb":"","channels":["c1"]}]`: {
			{Name: "left", Limb: "arm", Channels: []string{"c0", "c2"}}, {Name: "right", Channels: []string{"c1"}},
		},
		`[]`:   {},
		`null`: nil,
	} {
		text := `{"format":"strandwise.layout/1","table":"frames",` + channels + `,"groups":` + groups + `}`
		rec := record(t, map[string]string{"strandwise.layout": text},
			col("take", str, `["a","a"]`), col("time_s", f64, `[0,1]`), col("c0", f32, `[1,2]`), col("c1", f32, `[3,4]`), col("c2", f32, `[5,6]`))
		for _, w := range containers() {
			got, _, err := readAll(bytes.NewReader(w.write(t, rec)), raw.Input{})
			if err != nil || len(got) != 1 {
				t.Fatalf("%s: %d takes, error %v", w.name, len(got), err)
			}
			if diff := cmp.Diff(want, got[0].Layout.Groups); diff != "" {
				t.Errorf("%s, %s: %s", w.name, groups, diff)
			}
		}
	}
	checkFault(t, arrowFile(t, record(t, map[string]string{"strandwise.layout": `{"format":"strandwise.layout/1","table":"frames",` + channels + `,"groups":["left"]}`},
		col("time_s", f64, `[0,1]`), col("c0", f32, `[1,2]`), col("c1", f32, `[3,4]`), col("c2", f32, `[5,6]`))), "f: its metadata strandwise.layout cannot be read")
}

func open(t testing.TB, path string) io.Reader {
	t.Helper()
	f, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { f.Close() })
	return f
}

// TestPacked reads a file whose path leads to something else than what is
// read, as it does when a file is packed.
func TestPacked(t *testing.T) {
	path := put(t, []byte("packed"), t.TempDir(), "p.parquet.zst")
	got, _, err := readAll(io.MultiReader(bytes.NewReader(setTakes(t))), raw.Input{Name: path, Path: path})
	if err != nil || len(got) != 3 {
		t.Errorf("%d takes, error %v", len(got), err)
	}
}

// TestHive reads identity from the folders right above a file.
func TestHive(t *testing.T) {
	data := write(t, []setFrame{{Take: "a", TimeS: 0, X: 1}, {Take: "a", TimeS: 1, X: 2}})
	cases := []struct {
		path string
		want raw.Identity
	}{
		{"label=nod/x.parquet", raw.Identity{Take: "a", Label: "nod"}},
		{"Label=a%20wave/year=2024/subject=bo/session=__HIVE_DEFAULT_PARTITION__/x.parquet", raw.Identity{Take: "a", Label: "a wave", Subject: "bo"}},
		{"label=nod/rest/split=test/x.parquet", raw.Identity{Take: "a", Split: "test"}},
		{"label=nod/rest/x.parquet", raw.Identity{Take: "a"}},
		{"take=a/x.parquet", raw.Identity{Take: "a"}},
	}
	for _, c := range cases {
		path := put(t, data, t.TempDir(), c.path)
		got, _, err := readAll(open(t, path), raw.Input{Name: path, Path: path})
		if err != nil {
			t.Fatal(err)
		}
		if diff := cmp.Diff(c.want, got[0].Identity); diff != "" {
			t.Errorf("%s: %s", c.path, diff)
		}
	}
	path := put(t, data, t.TempDir(), "take=b/x.parquet")
	if _, _, err := readAll(open(t, path), raw.Input{Name: path, Path: path}); err == nil || !strings.Contains(err.Error(), `has the take "a", but its folder says "b"`) {
		t.Errorf("a column against a folder: error %v", err)
	}
}

// TestLeaveOut leaves columns out, whatever they hold, and does not speak of
// them.
func TestLeaveOut(t *testing.T) {
	leaveOut := func(names ...string) func(string) bool {
		return func(column string) bool { return slices.Contains(names, column) }
	}
	rec := record(t, nil, col("t_ms", f64, `[0,10]`), col("ax [g]", f32, `[1,2]`), col("note", str, `["a","b"]`), col("deep", arrowLists, `[[1],[2]]`))
	for _, w := range containers() {
		got, told, err := readAll(bytes.NewReader(w.write(t, rec)), raw.Input{LeaveOut: leaveOut("note", "deep")})
		if err != nil || len(told) != 0 || len(got) != 1 || len(got[0].Data) != 2 {
			t.Errorf("%s: %d takes, told %q, error %v", w.name, len(got), told, err)
		}
		_, _, err = readAll(bytes.NewReader(w.write(t, rec)), raw.Input{LeaveOut: leaveOut("ax", "deep")})
		if err == nil || !strings.Contains(err.Error(), "has no channels") {
			t.Errorf("%s: error %v", w.name, err)
		}
	}
	got, _, err := readAll(bytes.NewReader(setTakes(t)), raw.Input{LeaveOut: leaveOut("rank")})
	if err != nil || len(got[0].Layout.Columns) != 2 || !slices.Equal(got[0].Data, []float64{1, 0.5, 2, 0.5, 3, 1}) {
		t.Errorf("%+v, error %v", got, err)
	}
}

// TestReadErrors passes on what r reports.
func TestReadErrors(t *testing.T) {
	rec := record(t, nil, col("t_ms", f64, `[0,10]`), col("ax", f32, `[1,2]`))
	broken := &fault.Error{File: "f", Problem: "its gzip data is damaged", Remedy: "copy it again"}
	for _, w := range containers() {
		data := w.write(t, rec)
		for _, n := range []int{0, 8, len(data) / 2} {
			_, _, err := readAll(io.MultiReader(bytes.NewReader(data[:n]), failing{broken}), raw.Input{})
			if err != broken {
				t.Errorf("%s, after %d bytes: error %v", w.name, n, err)
			}
		}
	}
}

type failing struct{ err error }

func (f failing) Read([]byte) (int, error) { return 0, f.err }
