package recording_test

import (
	"bytes"
	"encoding/csv"
	"flag"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/export/recording"
)

var update = flag.Bool("update", false, "rewrite the golden files in testdata")

func csvForm() form { return forms()[0] }

// TestCSVGolden keeps the form of CSV files.
func TestCSVGolden(t *testing.T) {
	split := puppets()
	split[1].Split = channels.Test
	for name, takes := range map[string][]*channels.Take{"puppets.csv": puppets(), "split.csv": split} {
		path := filepath.Join("testdata", name)
		got := csvForm().file(t, takes)
		if *update {
			if err := os.WriteFile(path, got, 0o666); err != nil {
				t.Fatal(err)
			}
		}
		want, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if diff := cmp.Diff(string(want), string(got)); diff != "" {
			t.Errorf("%s (-want +got):\n%s", name, diff)
		}
	}
}

// TestCSVReadsBack reads what was written with encoding/csv and strconv, and
// holds every number against its bits and every text.
func TestCSVReadsBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		takes := drawTakes(t)
		var file bytes.Buffer
		if err := csvForm().write(&file, takes); err != nil {
			t.Fatal(err)
		}
		rows, err := csv.NewReader(&file).ReadAll()
		if err != nil {
			t.Fatal(err)
		}
		rows = rows[1:]
		splits := false
		for _, take := range takes {
			splits = splits || take.Split != channels.None
		}
		for _, take := range takes {
			for i := range take.Time {
				if len(rows) == 0 {
					t.Fatalf("take %s ends before frame %d", take.ID, i)
				}
				checkRow(t, rows[0], take, i, splits)
				rows = rows[1:]
			}
		}
		if len(rows) > 0 {
			t.Fatalf("%d rows too many", len(rows))
		}
	})
}

// checkRow holds one row against a frame of a take.
func checkRow(t *rapid.T, row []string, take *channels.Take, frame int, splits bool) {
	want := []string{take.ID, take.Label, take.Subject, take.Session}
	if splits {
		want = append(want, string(take.Split))
	}
	want = append(want, strconv.Itoa(frame))
	if len(row) != len(want)+1+take.Width() {
		t.Fatalf("%d fields: %q", len(row), row)
	}
	if diff := cmp.Diff(want, row[:len(want)]); diff != "" {
		t.Fatal(diff)
	}
	for c, v := range append([]float64{take.Time[frame]}, take.Frame(frame)...) {
		text := row[len(want)+c]
		if math.IsNaN(v) {
			if text != "" {
				t.Fatalf("a missing value is %q", text)
			}
			continue
		}
		got, err := strconv.ParseFloat(text, 64)
		if err != nil || math.Float64bits(got) != math.Float64bits(v) {
			t.Fatalf("%v became %q", v, text)
		}
	}
}

func TestCSVColumns(t *testing.T) {
	bids := channels.Channel{Name: "sensor 1", TrackedPoint: "LeftFoot", Quantity: channels.AngularRate, Component: "z"}
	marker := channels.Channel{Name: "Ember:LASI.pos.x", TrackedPoint: "Ember:LASI", Quantity: channels.Position, Component: "x"}
	for _, c := range []struct {
		channel channels.Channel
		want    string
	}{
		{of("LeftHand.pos.x"), "LeftHand.pos.x"},
		{of("Left Hand pos x"), "Left Hand.pos.x"}, // the point as the file has it
		{of("left-wrist accel y"), "left-wrist.accel.y"},
		{of("left_wrist.acc.y"), "left_wrist.accel.y"},
		{of("left_gyroz"), "left.gyro.z"},
		{of("left.quat_w"), "left.ornt.quat_w"},
		{bids, "LeftFoot.gyro.z"},
		{marker, "Ember:LASI.pos.x"},

		// Not all of point, type and component are known.
		{of("ax"), "ax"},
		{of("c12"), "c12"},
		{of("knee angle"), "knee angle"},
		{of("left_hand_x"), "left_hand_x"},

		// A unit in the name is no longer true.
		{channels.Channel{Name: "EMG 1 [uV]"}, "EMG 1"},
		{channels.Channel{Name: "acc (m/s²) [g]"}, "acc"},

		// Names that other columns have, or that pass for a clock.
		{of("label"), "label_channel"},
		{of("Split"), "Split_channel"},
		{of("time_s"), "time_s_channel"},
		{of("Time"), "Time_channel"},
		{of("t"), "t_channel"},
		{of("index"), "index_channel"},
		{of("thyme"), "thyme"},
	} {
		if got := columns(t, c.channel); !cmp.Equal(got, []string{c.want}) {
			t.Errorf("%s is column %q, want %q", c.channel.Name, got, c.want)
		}
	}
}

// TestCSVColumnsThatWouldBeOne: channels keep their own names where the full
// ones would clash.
func TestCSVColumnsThatWouldBeOne(t *testing.T) {
	if got, want := columns(t, of("left_accel_x"), of("left.accel.x"), of("left.accel.y")), []string{"left_accel_x", "left.accel.x", "left.accel.y"}; !cmp.Equal(got, want) {
		t.Errorf("columns %q, want %q", got, want)
	}
	l := &channels.Layout{Channels: []channels.Channel{{Name: "force [N]"}, {Name: "force [lb]"}}}
	take := &channels.Take{ID: "a", Layout: l, Time: []float64{0}, Data: []float64{1, 2}}
	err := csvForm().write(&bytes.Buffer{}, []*channels.Take{take})
	if err == nil || !strings.Contains(err.Error(), "force [N] and force [lb] would share the column force") {
		t.Errorf("error %v", err)
	}
}

func of(header string) channels.Channel {
	c, _ := channels.ParseHeader(header)
	return c
}

// columns returns the columns of channels in a CSV file.
func columns(t testing.TB, list ...channels.Channel) []string {
	t.Helper()
	l := &channels.Layout{Channels: list}
	take := &channels.Take{ID: "a", Layout: l, Time: []float64{0}, Data: make([]float64, len(list))}
	rows, err := csv.NewReader(bytes.NewReader(csvForm().file(t, []*channels.Take{take}))).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	fixed := []string{"take", "label", "subject", "session", "frame", "time_s"}
	if !cmp.Equal(rows[0][:len(fixed)], fixed) {
		t.Errorf("the columns begin with %q", rows[0])
	}
	return rows[0][len(fixed):]
}

// TestFaultsOfTakes: what no file can hold is refused when it is noted, or when
// it is added unnoted, and what only 64-bit floats hold is refused by the
// formats of 32-bit ones.
func TestFaultsOfTakes(t *testing.T) {
	l := layout("x", "y")
	sound := func() *channels.Take {
		return &channels.Take{ID: "a", Label: "bow", Layout: l, Time: []float64{0, 1}, Data: []float64{1, 2, 3, 4}}
	}
	for _, c := range []struct {
		name   string
		change func(t *channels.Take)
		says   string
		single bool // only 32-bit floats cannot hold it
	}{
		{"no id", func(t *channels.Take) { t.ID = "" }, "no id", false},
		{"not UTF-8", func(t *channels.Take) { t.Subject = "\xff" }, "not UTF-8", false},
		{"no frames", func(t *channels.Take) { t.Time, t.Data = nil, nil }, "no frames", false},
		{"values lost", func(t *channels.Take) { t.Data = t.Data[:3] }, "3 values for 2 frames of 2 channels", false},
		{"another layout", func(t *channels.Take) { t.Layout = layout("x", "z") }, "other channels", false},
		{"no layout", func(t *channels.Take) { t.Layout = nil }, "other channels", false},
		{"no time", func(t *channels.Take) { t.Time[1] = math.NaN() }, "frame 1", false},
		{"endless", func(t *channels.Take) { t.Time[0] = math.Inf(-1) }, "frame 0", false},
		{"too large", func(t *channels.Take) { t.Data[3] = 1e39 }, "1e+39 in frame 1 of channel y", true},
		{"infinite", func(t *channels.Take) { t.Data[0] = math.Inf(1) }, "+Inf in frame 0 of channel x", true},
		{"hours", func(t *channels.Take) { t.Time, t.Data = []float64{0, 20000, 20000.0001}, make([]float64, 6) }, "frame 2 coming", true},
	} {
		for _, f := range forms() {
			contents := recording.Contents{Single: f.name != "csv"}
			if err := contents.Note(sound()); err != nil {
				t.Fatal(err)
			}
			take := sound()
			c.change(take)
			noted := contents.Note(take)
			w, err := f.begin(&bytes.Buffer{}, &contents)
			if err != nil {
				t.Fatal(err)
			}
			added := w.Add(take)
			for step, err := range map[string]error{"noted": noted, "added": added} {
				if refused := err != nil; refused != (!c.single || f.name != "csv") {
					t.Errorf("%s: %s: %s: error %v", f.name, c.name, step, err)
				} else if refused && (!strings.Contains(err.Error(), c.says) || !strings.HasPrefix(err.Error(), "take "+take.ID)) {
					t.Errorf("%s: %s: %s: %q does not say %q of the take", f.name, c.name, step, err, c.says)
				}
			}
		}
	}
}
