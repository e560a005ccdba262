package c3d_test

import (
	"bytes"
	"encoding/binary"
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"testing"

	"strandwise/ingest/c3d"
	"strandwise/testdata/opendata"
)

// fact is what independent readers found in an open recording (py-c3d, MIT,
// and a second one that reads the bytes as they stand).
type fact struct {
	File       string
	Processor  string
	Points     int
	First      int
	Last       int
	Scale      float64
	DataBlock  int `json:"data_block"`
	Rate       float64
	Frames     int `json:"frames_header"`
	Fit        int `json:"frames_that_fit_in_file"`
	Parameters struct {
		Units string
	} `json:"POINT"`
	Labels      int
	FirstLabels []string `json:"first_labels"`
	Format      string
	Size        int64
	FirstFrame  [][]*float64 `json:"first_frame_first3"`
	LastFrame   [][]*float64 `json:"last_frame_first3"`
	Other       struct {
		Invalid *int     `json:"invalid_points"`
		Min     *float64 `json:"coord_min"`
		Max     *float64 `json:"coord_max"`
	} `json:"pyc3d"`
}

func facts(t testing.TB, dir string) []fact {
	t.Helper()
	text, err := os.ReadFile(filepath.Join(dir, "info.jsonl"))
	if err != nil {
		t.Fatal(err)
	}
	dec := json.NewDecoder(bytes.NewReader(bytes.ReplaceAll(text, []byte("NaN"), []byte("null"))))
	var out []fact
	for dec.More() {
		var f fact
		if err := dec.Decode(&f); err != nil {
			t.Fatal(err)
		}
		out = append(out, f)
	}
	return out
}

func TestOpenRecordings(t *testing.T) {
	dir := opendata.Path(t, "c3d")
	for _, want := range facts(t, dir) {
		t.Run(want.File, func(t *testing.T) {
			data, err := os.ReadFile(filepath.Join(dir, want.File))
			if err != nil {
				t.Fatal(err)
			}
			got, err := c3d.Read(bytes.NewReader(data), c3d.Options{Size: int64(len(data))})
			if err != nil {
				t.Fatal(err)
			}
			checkFacts(t, got, want)
			checkFrame(t, got, 0, want.FirstFrame)
			checkFrame(t, got, got.Frames-1, want.LastFrame)
			checkPlain(t, got, want, data)
		})
	}
}

func checkFacts(t *testing.T, got *c3d.File, want fact) {
	t.Helper()
	order := map[string]c3d.Order{"intel": c3d.Intel, "dec": c3d.DEC}[want.Processor]
	if got.Order != order || got.Float != (want.Format == "float") {
		t.Errorf("order %v, float %v; want %s, %s", got.Order, got.Float, want.Processor, want.Format)
	}
	p := got.Points
	if got.Frames != want.Frames || got.Frames != want.Fit || got.First != want.First || p.Rate != want.Rate || p.Unit != want.Parameters.Units {
		t.Errorf("%d frames from %d at %v Hz in %q; want %+v", got.Frames, got.First, p.Rate, p.Unit, want)
	}
	if len(p.Labels) != want.Points || len(p.Labels) != want.Labels || len(p.Missing) != want.Points {
		t.Errorf("%d labels; want %d points, %d labels", len(p.Labels), want.Points, want.Labels)
	}
	for i, label := range want.FirstLabels {
		if p.Labels[i] != label {
			t.Errorf("label %d is %q, want %q", i, p.Labels[i], label)
		}
	}
	if len(got.Analog.Labels) != 0 || len(got.Events) != 0 {
		t.Errorf("%d analog channels and %d events, want none", len(got.Analog.Labels), len(got.Events))
	}
	checkOther(t, got, want)
}

// checkOther holds the counts of missing points and the range of the others
// against py-c3d's.
func checkOther(t *testing.T, got *c3d.File, want fact) {
	t.Helper()
	missing := 0
	for _, n := range got.Points.Missing {
		missing += n
	}
	if want.Other.Invalid != nil && missing != *want.Other.Invalid {
		t.Errorf("%d missing points, want %d", missing, *want.Other.Invalid)
	}
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, v := range got.Points.Data {
		if v == v {
			lo, hi = min(lo, v), max(hi, v)
		}
	}
	const tolerance = 1e-4 // it works in float32
	if want.Other.Min != nil && (math.Abs(lo-*want.Other.Min) > tolerance || math.Abs(hi-*want.Other.Max) > tolerance) {
		t.Errorf("coordinates from %v to %v, want %v to %v", lo, hi, *want.Other.Min, *want.Other.Max)
	}
}

// checkFrame compares the first points of a frame, given as x, y, z and
// residual to six decimals.
func checkFrame(t *testing.T, got *c3d.File, frame int, want [][]*float64) {
	t.Helper()
	const tolerance = 1e-6
	for i, p := range want {
		xyz := got.Points.Data[3*(frame*len(got.Points.Labels)+i):][:3]
		for axis, v := range xyz {
			gone := p[axis] == nil || *p[3] < 0
			if gone != math.IsNaN(v) || !gone && math.Abs(v-*p[axis]) > tolerance {
				t.Errorf("frame %d, point %d: %v", frame, i, xyz)
				break
			}
		}
	}
}

// checkPlain reads the data section again, plainly and by the facts alone, and
// compares every coordinate and the number of missing frames of every point.
func checkPlain(t *testing.T, got *c3d.File, want fact, data []byte) {
	t.Helper()
	at := 512 * (want.DataBlock - 1)
	next := func() float64 {
		if want.Format == "float" {
			at += 4
			return float64(math.Float32frombits(binary.LittleEndian.Uint32(data[at-4:])))
		}
		at += 2
		return float64(int16(binary.LittleEndian.Uint16(data[at-2:])))
	}
	scale := math.Max(want.Scale, 0)
	if scale == 0 {
		scale = 1
	}
	missing := make([]int, want.Points)
	for i := range want.Fit * want.Points {
		x, y, z, residual := next()*scale, next()*scale, next()*scale, next()
		xyz := got.Points.Data[3*i : 3*i+3]
		if residual < 0 || math.IsNaN(x+y+z) {
			missing[i%want.Points]++
			if !math.IsNaN(xyz[0]) || !math.IsNaN(xyz[1]) || !math.IsNaN(xyz[2]) {
				t.Fatalf("row %d is %v, want it missing", i, xyz)
			}
		} else if xyz[0] != x || xyz[1] != y || xyz[2] != z {
			t.Fatalf("row %d is %v, want %v %v %v", i, xyz, x, y, z)
		}
	}
	for i, n := range missing {
		if got.Points.Missing[i] != n {
			t.Errorf("point %d is missing in %d frames, want %d", i, got.Points.Missing[i], n)
		}
	}
	if at != len(data) {
		t.Errorf("%d bytes of %d", at, len(data))
	}
}
