package columnar_test

import (
	"bytes"
	"io"
	"math"
	"strings"
	"testing"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"strandwise/channels"
	"strandwise/ingest/raw"
)

var same = []cmp.Option{cmpopts.EquateNaNs(), cmpopts.EquateEmpty()}

// header returns the column of a layout that a header stands for.
func header(text string) raw.Column {
	c, unit := channels.ParseHeader(text)
	return raw.Column{Channel: c, Unit: unit}
}

// TestLongForm reads a table of one row per frame, in batches that cut a take,
// from every container.
func TestLongForm(t *testing.T) {
	rec := record(t, nil,
		col("Take", category, `["a","a","a","b","b","c","c"]`),
		col("label", str, `["wave","wave","wave","nod","nod","nod","nod"]`),
		col("subject", arrow.PrimitiveTypes.Int64, `[1,1,1,2,2,null,null]`),
		col("session", arrow.BinaryTypes.LargeString, `[null,null,null,"am","am","pm","pm"]`),
		col("split", str, `["train","train","train","test","test","",""]`),
		col("time", arrow.FixedWidthTypes.Time32ms, `["00:00:00","00:00:00.02","00:00:00.045","00:00:01","00:00:01.02","00:00:00","00:00:00.02"]`),
		col("left.accel.x", f32, `[0.5,null,1.5,2,2.5,3,3.5]`).in("g"),
		col("count", arrow.PrimitiveTypes.Uint16, `[1,2,3,4,5,6,60000]`),
		col("worn", arrow.FixedWidthTypes.Boolean, `[true,true,true,true,true,true,null]`),
		col("pose", arrow.StructOf(arrow.Field{Name: "pos", Nullable: true, Type: arrow.StructOf(arrow.Field{Name: "y", Type: f64, Nullable: true})}),
			`[{"pos":{"y":1}},{"pos":{"y":2}},{"pos":null},{"pos":{"y":4}},{"pos":{"y":null}},null,{"pos":{"y":7}}]`),
	)
	layout := &raw.Layout{Columns: []raw.Column{header("left.accel.x [g]"), header("count"), header("pose.pos.y")}}
	nan := math.NaN()
	want := []*raw.Take{{
		Identity: raw.Identity{Take: "a", Label: "wave", Subject: "1", Split: "train"},
		Layout:   layout, Time: []float64{0, 0.02, 0.045},
		Data: []float64{0.5, 1, 1, nan, 2, 2, 1.5, 3, nan},
	}, {
		Identity: raw.Identity{Take: "b", Label: "nod", Subject: "2", Session: "am", Split: "test"},
		Layout:   layout, Time: []float64{1, 1.02},
		Data: []float64{2, 4, 4, 2.5, 5, nan},
	}, {
		Identity: raw.Identity{Take: "c", Label: "nod", Session: "pm"},
		Layout:   layout, Time: []float64{0, 0.02},
		Data: []float64{3, 6, nan, 3.5, 60000, 7},
	}}
	notices := []string{`column "worn" is no channel and is left out (it holds true and false)`}
	for _, c := range containers() {
		t.Run(c.name, func(t *testing.T) {
			batches := []arrow.Record{rec.NewSlice(0, 2), rec.NewSlice(2, 7)}
			if strings.HasPrefix(c.name, "parquet") {
				batches = []arrow.Record{rec} // arrow/go writes the wrong rows of a dictionary cut in two
			}
			data := c.write(t, batches...)
			got, told, err := readAll(bytes.NewReader(data), raw.Input{})
			if err != nil {
				t.Fatal(err)
			}
			if diff := cmp.Diff(want, got, same...); diff != "" {
				t.Error(diff)
			}
			if diff := cmp.Diff(notices, told); diff != "" {
				t.Error(diff)
			}
			for _, take := range got {
				if take.Layout != got[0].Layout {
					t.Error("takes of one file do not share their layout")
				}
			}
		})
	}
}

// TestPipe reads what can be read only once, a few bytes at a time.
func TestPipe(t *testing.T) {
	rec := record(t, nil, col("take", str, `["a","a","b","b"]`), col("t_ms", f64, `[0,10,0,10]`), col("ax", f32, `[1,2,3,4]`))
	for _, c := range containers() {
		want, _, err := readAll(bytes.NewReader(c.write(t, rec)), raw.Input{})
		if err != nil {
			t.Fatal(err)
		}
		r, w := io.Pipe()
		go func() {
			_, err := io.Copy(w, &slow{bytes.NewReader(c.write(t, rec))})
			w.CloseWithError(err)
		}()
		got, _, err := readAll(r, raw.Input{Name: "-"})
		if err != nil {
			t.Fatal(err)
		}
		if diff := cmp.Diff(want, got, same...); diff != "" {
			t.Errorf("%s: %s", c.name, diff)
		}
	}
}

type slow struct{ r io.Reader }

func (s *slow) Read(p []byte) (int, error) { return s.r.Read(p[:min(len(p), 7)]) }

// TestClocks reads one clock after another.
func TestClocks(t *testing.T) {
	const epoch = "counts from a distant epoch, so each take's clock is set to begin at 0"
	cases := []struct {
		name   string
		column column
		unit   string // stated by the user
		want   []float64
		origin float64 // seconds since 1970
		clock  raw.Clock
		told   string // part of the notice
	}{
		{name: "seconds", column: col("time_s", f64, `[0.5,0.51,0.52]`), want: []float64{0.5, 0.51, 0.52}},
		{name: "unit by metadata", column: col("t", f32, `[0,10,20]`).in("milliseconds"), want: []float64{0, 0.01, 0.02}},
		{name: "unit by the user", column: col("t", f32, `[0,1000,3000]`), unit: "us", want: []float64{0, 0.001, 0.003}},
		{name: "unit by the rate", column: col("elapsed", arrow.PrimitiveTypes.Int32, `[0,20,40]`), want: []float64{0, 0.02, 0.04},
			told: `time column "elapsed" states no unit and is read as ms (its median step of 20 makes that 50 frames per second)`},
		{name: "nanoseconds of an epoch", column: col("timestamp", arrow.PrimitiveTypes.Int64, `[1700000000000000001,1700000000020000001,1700000000040000003]`),
			want: []float64{0, 0.02, 0.040000002}, origin: 1700000000, told: epoch},
		{name: "nanoseconds since the device started", column: col("t_ns", arrow.PrimitiveTypes.Int64, `[86400000000001,86400010000001,86400020000001]`),
			want: []float64{86400.000000001, 86400.010000001, 86400.020000001}},
		{name: "time stamps", column: col("recorded", arrow.FixedWidthTypes.Timestamp_us, `["2024-01-02T03:04:05.000001Z","2024-01-02T03:04:05.020001Z","2024-01-02T03:04:05.040002Z"]`),
			want: []float64{0, 0.02, 0.040001}, origin: 1704164645.000001, told: epoch},
		{name: "seconds as time stamps", column: col("time", arrow.FixedWidthTypes.Timestamp_s, `["2024-01-02T03:04:05Z","2024-01-02T03:04:06Z","2024-01-02T03:04:08Z"]`),
			want: []float64{0, 1, 3}, origin: 1704164645, told: epoch},
		{name: "durations", column: col("since", arrow.FixedWidthTypes.Duration_ns, `[0,1000,5000]`), want: []float64{0, 1e-6, 5e-6}},
		{name: "times of day", column: col("time", arrow.FixedWidthTypes.Time64us, `["10:00:00.5","10:00:00.52","10:00:01"]`), want: []float64{36000.5, 36000.52, 36001}},
		{name: "dates as text", column: col("time", str, `["2024-01-02 03:04:05.5","2024-01-02 03:04:05.75","2024-01-02 03:04:06"]`),
			want: []float64{0, 0.25, 0.5}, origin: 1704164645.5, told: epoch},
		{name: "frames", column: col("frame", arrow.PrimitiveTypes.Int64, `[4,5,7]`), want: []float64{4, 5, 7}, clock: raw.Frames},
		{name: "nothing", column: col("ay", f64, `[4,5,7]`), want: []float64{0, 1, 2}, clock: raw.Frames},
	}
	for _, c := range cases {
		for _, w := range containers() {
			if c.column.field.Type.ID() == arrow.DURATION && strings.HasPrefix(w.name, "parquet") {
				continue // which arrow/go does not write; see TestDurationInParquet
			}
			t.Run(c.name+"/"+w.name, func(t *testing.T) {
				data := w.write(t, record(t, nil, c.column, col("ax", f64, `[1,2,4]`)))
				got, told, err := readAll(bytes.NewReader(data), raw.Input{TimeUnit: c.unit})
				if err != nil || len(got) != 1 {
					t.Fatal(len(got), err)
				}
				if diff := cmp.Diff(c.want, got[0].Time, cmpopts.EquateApprox(0, 1e-12)); diff != "" || got[0].Clock != c.clock {
					t.Errorf("clock %v: %s", got[0].Clock, diff)
				}
				if got[0].Origin != c.origin {
					t.Errorf("origin %v, want %v", got[0].Origin, c.origin)
				}
				if len(told) > 0 != (c.told != "") || len(told) > 0 && !strings.Contains(told[len(told)-1], c.told) {
					t.Errorf("told %q, want %q", told, c.told)
				}
			})
		}
	}
}
