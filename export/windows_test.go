package export_test

import (
	"encoding/json"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/apache/arrow/go/v15/parquet/file"
	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/export"
	"strandwise/export/pages"
)

// counting returns a take of one channel whose values are 1, 2, 3 …
func counting(l *channels.Layout, id string, frames int) *channels.Take {
	t := &channels.Take{ID: id, Label: "curtain", Subject: "ada", Session: "one", Layout: l}
	for i := range frames {
		t.Time = append(t.Time, 2+float64(i)/50)
		for c := range l.Channels {
			t.Data = append(t.Data, float64(1+i)*float64(1+c))
		}
	}
	return t
}

func TestWindows(t *testing.T) {
	l := &channels.Layout{Channels: []channels.Channel{{Name: "x"}}}
	take := counting(l, "a", 7)
	for _, tc := range []struct {
		name    string
		cut     export.Windowing
		take    *channels.Take
		want    [][]float32
		frames  []int32
		starts  []float64
		channel string
	}{
		{"whole", export.Windowing{Length: 3, Hop: 2}, take, [][]float32{{1, 2, 3}, {3, 4, 5}, {5, 6, 7}}, []int32{3, 3, 3}, []float64{2, 2.04, 2.08}, "x"},
		{"held", export.Windowing{Length: 4, Hop: 2}, take, [][]float32{{1, 2, 3, 4}, {3, 4, 5, 6}, {5, 6, 7, 7}}, []int32{4, 4, 3}, []float64{2, 2.04, 2.08}, "x"},
		{"zeros", export.Windowing{Length: 4, Hop: 2, Padding: export.PadZero}, take, [][]float32{{1, 2, 3, 4}, {3, 4, 5, 6}, {5, 6, 7, 0}}, []int32{4, 4, 3}, []float64{2, 2.04, 2.08}, "x"},
		{"none", export.Windowing{Length: 4, Hop: 2, Padding: export.PadNone}, take, [][]float32{{1, 2, 3, 4}, {3, 4, 5, 6}}, []int32{4, 4}, []float64{2, 2.04}, "x"},
		{"apart", export.Windowing{Length: 2, Hop: 5}, take, [][]float32{{1, 2}, {6, 7}}, []int32{2, 2}, []float64{2, 2.1}, "x"},
		{"beyond the end", export.Windowing{Length: 2, Hop: 7}, take, [][]float32{{1, 2}}, []int32{2}, []float64{2}, "x"},
		{"shorter than a window", export.Windowing{Length: 9, Hop: 1}, take, [][]float32{{1, 2, 3, 4, 5, 6, 7, 7, 7}}, []int32{7}, []float64{2}, "x"},
		{"half the length", export.Windowing{Length: 5}, take, [][]float32{{1, 2, 3, 4, 5}, {3, 4, 5, 6, 7}}, []int32{5, 5}, []float64{2, 2.04}, "x"},
	} {
		dir := t.TempDir()
		write(t, dir, l, export.Options{Tables: []export.Table{export.Windows}, Windowing: tc.cut}, []*channels.Take{tc.take})
		var values [][]float32
		var frames []int32
		var starts []float64
		for i, row := range readTable(t, dir, export.Windows, "train").values {
			values, frames, starts = append(values, row["x"].([]float32)), append(frames, row["frames"].(int32)), append(starts, row["start_s"].(float64))
			if row["window"] != int32(i) || row["take"] != "a" || row["label"] != "curtain" || row["subject"] != "ada" || row["source"] != nil || row["rank"] != nil {
				t.Errorf("%s: row %d is %v", tc.name, i, row)
			}
		}
		if diff := cmp.Diff(tc.want, values); diff != "" {
			t.Errorf("%s (-want +got):\n%s", tc.name, diff)
		}
		if !slices.Equal(frames, tc.frames) || !slices.EqualFunc(starts, tc.starts, func(a, b float64) bool { return math.Abs(a-b) < 1e-9 }) {
			t.Errorf("%s: frames %v from %v s, want %v from %v s", tc.name, frames, starts, tc.frames, tc.starts)
		}
	}
}

// TestWindowsOfShortTakes: without padding a take shorter than a window has no
// row, and a table in which none has one has no file.
func TestWindowsOfShortTakes(t *testing.T) {
	l := wristband(t)
	dir := t.TempDir()
	o := export.Options{Tables: []export.Table{export.Windows}, Windowing: export.Windowing{Length: 24, Padding: export.PadNone}}
	write(t, dir, l, o, []*channels.Take{counting(l, "short", 23), counting(l, "long", 25)})
	rows := readTable(t, dir, export.Windows, "train").values
	if len(rows) != 1 || rows[0]["take"] != "long" {
		t.Errorf("rows %v", rows)
	}
	dir = t.TempDir()
	m := write(t, dir, l, o, []*channels.Take{counting(l, "short", 23)})
	for _, f := range m.Files {
		if strings.HasPrefix(f.Path, "windows/") {
			t.Errorf("file %s of no rows", f.Path)
		}
	}
	if v, err := export.Verify(dir); err != nil || !v.Sound() {
		t.Errorf("%v, %v", v, err)
	}
}

// windowCount counts windows one by one, as the documentation of Windowing tells.
func windowCount(w export.Windowing, frames int) int {
	n, covered := 0, 0
	for ; n*w.Hop+w.Length <= frames; n++ {
		covered = n*w.Hop + w.Length
	}
	if w.Padding != export.PadNone && covered < frames && n*w.Hop < frames {
		n++
	}
	return n
}

func TestWindowingCount(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		w := export.Windowing{Length: rapid.IntRange(1, 20).Draw(t, "length"), Hop: rapid.IntRange(1, 25).Draw(t, "hop")}
		w.Padding = rapid.SampledFrom([]export.Padding{export.PadHold, export.PadZero, export.PadNone}).Draw(t, "padding")
		frames := rapid.IntRange(1, 90).Draw(t, "frames")
		got := w.Count(frames)
		if want := windowCount(w, frames); got != want {
			t.Fatalf("%d windows, want %d", got, want)
		}
		if w.Padding == export.PadNone {
			return
		}
		// With padding, and a hop that skips nothing, every frame stands in one.
		if w.Hop <= w.Length && (got-1)*w.Hop+w.Length < frames {
			t.Fatalf("%d windows leave out the last of %d frames", got, frames)
		}
		if got < 1 || (got-1)*w.Hop >= frames {
			t.Fatalf("%d windows: the last begins beyond frame %d", got, frames)
		}
	})
}

// TestWholeWindows writes 16-bit windows and reads the values back through the
// scales of the metadata.
func TestWholeWindows(t *testing.T) {
	l := wristband(t)
	takes := troupe(l, 2)
	var ranges export.Ranges
	for _, take := range takes {
		if take.Made == nil {
			ranges.Note(take)
		}
	}
	scale := ranges.Scale(l)
	dir := t.TempDir()
	write(t, dir, l, export.Options{Tables: []export.Table{export.Windows}, Windowing: export.Windowing{Length: 10, Hop: 10, Scale: scale}}, takes)
	read := readTable(t, dir, export.Windows, "train")
	if want := "left_wrist.accel.x: list<int16>[10]"; !slices.Contains(read.fields, want) {
		t.Errorf("fields %v lack %q", read.fields, want)
	}
	w := windowsLayout(t, dir, "train")
	if w.Values != "int16" || len(w.Scales) != 6 || w.Scales[0].Scale != scale[0] || w.Scales[0].Saturated != 0 {
		t.Errorf("metadata %+v", w)
	}
	byID := map[string]*channels.Take{}
	for _, take := range takes {
		byID[take.ID] = take
	}
	for _, row := range read.values {
		take, start := byID[row["take"].(string)], 10*int(row["window"].(int32))
		for c, channel := range l.Channels {
			for i, n := range row[channel.Name].([]int16)[:row["frames"].(int32)] {
				want := take.Frame(start + i)[c]
				if got := float64(n) * w.Scales[c].Scale; math.Abs(got-want) > w.Scales[c].Scale/2*(1+1e-9) {
					t.Fatalf("take %s, channel %s: %g, want %g within half of %g", take.ID, channel.Name, got, want, w.Scales[c].Scale)
				}
			}
		}
	}
}

func TestSaturation(t *testing.T) {
	l := &channels.Layout{Channels: []channels.Channel{{Name: "x"}, {Name: "y"}}}
	take := &channels.Take{ID: "a", Layout: l, Time: []float64{0, 1, 2, 3}, Data: []float64{32767, 1, 32768, 0, -40000, 2.5, -32767.4, 3.5}}
	dir := t.TempDir()
	write(t, dir, l, export.Options{Tables: []export.Table{export.Windows}, Windowing: export.Windowing{Length: 4, Scale: []float64{1, 1}}}, []*channels.Take{take})
	row := readTable(t, dir, export.Windows, "train").values[0]
	if diff := cmp.Diff([]int16{32767, 32767, -32767, -32767}, row["x"]); diff != "" {
		t.Error(diff)
	}
	if diff := cmp.Diff([]int16{1, 0, 2, 4}, row["y"]); diff != "" {
		t.Error(diff)
	}
	want := []export.WindowScale{{Channel: "x", Scale: 1, Saturated: 2}, {Channel: "y", Scale: 1}}
	if diff := cmp.Diff(want, windowsLayout(t, dir, "train").Scales); diff != "" {
		t.Error(diff)
	}
}

// windowsLayout reads what the first file of the table windows says of itself.
func windowsLayout(t testing.TB, dir, split string) export.WindowsLayout {
	t.Helper()
	f, err := file.OpenParquetFile(firstPart(t, dir, export.Windows, split), false)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	var out export.WindowsLayout
	if err := json.Unmarshal([]byte(*f.MetaData().KeyValueMetadata().FindValue(export.WindowsKey)), &out); err != nil {
		t.Fatal(err)
	}
	return out
}

func TestWindowingIsChecked(t *testing.T) {
	l := wristband(t)
	for _, tc := range []struct {
		w    export.Windowing
		says string
	}{
		{export.Windowing{Length: -1}, "windows of -1 frames"},
		{export.Windowing{Length: 1 << 21}, "legal are 1 to 1048576 frames"},
		{export.Windowing{Hop: -2}, "every -2"},
		{export.Windowing{Padding: "mirror"}, "legal ones are hold, zero and none"},
		{export.Windowing{Scale: []float64{1}}, "1 scales of windows for 6 channels"},
		{export.Windowing{Scale: []float64{1, 1, 1, 0, 1, 1}}, "no number above 0"},
	} {
		if _, err := export.Create(t.TempDir()+"/set", l, export.Options{Windowing: tc.w}); err == nil || !strings.Contains(err.Error(), tc.says) {
			t.Errorf("%+v: error %v, want one with %q", tc.w, err, tc.says)
		}
	}
}

func TestRangesFrames(t *testing.T) {
	l := wristband(t)
	at := func(rates ...float64) *export.Ranges {
		r := new(export.Ranges)
		for _, hz := range rates {
			r.Note(&channels.Take{Layout: l, Time: []float64{0, 1 / hz}, Data: make([]float64, 12)})
		}
		return r
	}
	for _, tc := range []struct {
		text  string
		rates []float64
		want  int
		says  string
	}{
		{"50", nil, 50, ""},
		{" 7 ", []float64{10, 1000}, 7, ""},
		{"0.5s", []float64{50}, 25, ""},
		{"0.5 s", []float64{49.9, 50.1}, 25, ""},
		{"0.001s", []float64{50}, 1, ""},
		{"0.5s", []float64{50, 100}, 0, "one rate"},
		{"0.5s", nil, 0, "no frame rate"},
		{"0", nil, 0, "no length of a window"},
		{"-3", nil, 0, "no length of a window"},
		{"half", nil, 0, "no length of a window"},
		{"0s", nil, 0, "no length of a window"},
		{"NaNs", nil, 0, "no length of a window"},
		{"0.5ms", nil, 0, "no length of a window"},
	} {
		got, err := at(tc.rates...).Frames(tc.text)
		if got != tc.want || (err == nil) != (tc.says == "") || err != nil && !strings.Contains(err.Error(), tc.says) {
			t.Errorf("%q at %v Hz: %d, %v; want %d, %q", tc.text, tc.rates, got, err, tc.want, tc.says)
		}
	}
}

// TestRangesScale: a group shares a scale, the largest of its values stands at
// four fifths, and a group at rest does not divide by zero.
func TestRangesScale(t *testing.T) {
	l := wristband(t)
	var r export.Ranges
	r.Note(&channels.Take{Layout: l, Time: []float64{0, 1}, Data: []float64{1, -8, 2, 0, 0, 0, 4, 1, 1, 0, 0, 0}})
	scale := r.Scale(l)
	want := []float64{10.0 / 32767, 10.0 / 32767, 10.0 / 32767, 1.0 / 32767, 1.0 / 32767, 1.0 / 32767}
	for c := range want {
		if math.Abs(scale[c]-want[c]) > 1e-15 {
			t.Errorf("scales %v, want %v", scale, want)
		}
	}
}

// TestCompressions: every compression holds the same rows, in files that
// arrow/go reads.
func TestCompressions(t *testing.T) {
	l := wristband(t)
	o := both()
	o.Tables = export.AllTables()
	tables := map[export.Table]rows{}
	for _, by := range pages.Compressions() {
		o.Compression = by
		dir := t.TempDir()
		write(t, dir, l, o, troupe(l, 3))
		for _, table := range export.AllTables() {
			got := readTable(t, dir, table, "train")
			got.layout = nil
			if by == pages.Snappy {
				tables[table] = got
			} else if diff := cmp.Diff(tables[table].values, got.values); diff != "" || len(got.values) == 0 {
				t.Errorf("%s, table %s (-snappy +got):\n%s", by, table, diff)
			}
		}
	}
}

// TestVerifyWindows: a set whose table windows lacks rows, or was cut otherwise,
// is not sound.
func TestVerifyWindows(t *testing.T) {
	l := wristband(t)
	set := func(w export.Windowing) (dir string) {
		dir = t.TempDir()
		write(t, dir, l, export.Options{Tables: export.AllTables(), Windowing: w}, troupe(l, 2))
		return dir
	}
	want := func(dir, problem string) {
		t.Helper()
		if got := verify(t, dir); !slices.ContainsFunc(got, func(p string) bool { return strings.Contains(p, problem) }) {
			t.Errorf("%q, want one with %q", got, problem)
		}
	}
	sound := set(export.Windowing{Length: 10, Hop: 5})
	if got := verify(t, sound); len(got) > 0 {
		t.Fatalf("problems of a sound set: %q", got)
	}
	// Another set's windows, in the place of this one's.
	const part = "windows/split=test/part-00000.parquet"
	swap := func(w export.Windowing) (dir string) {
		dir = set(export.Windowing{Length: 10, Hop: 5})
		other := tree(t, set(w))[part]
		put(t, dir+"/"+part, other)
		if err := export.Reseal(dir, func(m *export.Manifest) {
			o, err := export.ReadManifest(set(w))
			if err != nil {
				t.Fatal(err)
			}
			for i := range m.Files {
				if m.Files[i].Path == part {
					m.Files[i] = o.Files[slices.IndexFunc(o.Files, func(f export.File) bool { return f.Path == part })]
				}
			}
		}); err != nil {
			t.Fatal(err)
		}
		return dir
	}
	want(swap(export.Windowing{Length: 10, Hop: 4}), "are not those of other files")
	dir := set(export.Windowing{Length: 10, Hop: 5})
	if err := export.Reseal(dir, func(m *export.Manifest) {
		m.Files = slices.DeleteFunc(m.Files, func(f export.File) bool { return f.Path == part })
	}); err != nil {
		t.Fatal(err)
	}
	want(dir, "split test has takes of 11 windows and 0 rows in the table windows")
}
