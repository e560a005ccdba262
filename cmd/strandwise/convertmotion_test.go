package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"strandwise/channels"
	"strandwise/ingest"
	"strandwise/testdata/opendata"
)

const stilts = "../../ingest/bvh/testdata/stilts.bvh"

// linesOf decodes a file with one JSON document on each line, in which NaN
// stands for a number that is missing.
func linesOf[T any](t *testing.T, path string) []T {
	t.Helper()
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	var out []T
	for d := json.NewDecoder(bytes.NewReader(bytes.ReplaceAll(text, []byte("NaN"), []byte("null")))); d.More(); {
		var x T
		if err := d.Decode(&x); err != nil {
			t.Fatal(err)
		}
		out = append(out, x)
	}
	return out
}

// one reads the one take of a recording.
func one(t *testing.T, o ingest.Options, path string) *channels.Take {
	t.Helper()
	o.Paths = []string{path}
	takes := recorded(t, o)
	if len(takes) != 1 {
		t.Fatalf("%s holds %d takes", path, len(takes))
	}
	return takes[0]
}

// placeOf returns where a tracked point is in a frame, in metres.
func placeOf(t *testing.T, take *channels.Take, point string, frame int) [3]float64 {
	t.Helper()
	var out [3]float64
	for i, axis := range []string{"x", "y", "z"} {
		c := take.Layout.Index(point + ".pos." + axis)
		if c < 0 {
			t.Fatalf("no channel for the %s of %s", axis, point)
		}
		out[i] = take.Frame(frame)[c]
	}
	return out
}

func distance(a, b [3]float64) float64 {
	return math.Hypot(math.Hypot(a[0]-b[0], a[1]-b[1]), a[2]-b[2])
}

// TestConvertOpenBVH holds the CSV files of the open BVH recordings against the
// places of joints that the BVHLoader of three.js 0.187 found.
func TestConvertOpenBVH(t *testing.T) {
	const tolerance = 1e-4 // of the file's unit of length
	const unit = 0.01      // metres, by --length-unit cm
	for _, want := range linesOf[struct {
		File   string
		Frames int
		Joints []string
		At     map[string][][3]float64
	}](t, opendata.Path(t, "bvh", "world.jsonl")) {
		t.Run(want.File, func(t *testing.T) {
			out := filepath.Join(t.TempDir(), "out.csv")
			must(t, "convert", opendata.Path(t, "bvh", want.File), out, "--length-unit", "cm")
			take := one(t, ingest.Options{}, out)
			if take.Frames() != want.Frames {
				t.Errorf("%d frames, want %d", take.Frames(), want.Frames)
			}
			worst := 0.0
			for frame, places := range want.At {
				n, err := strconv.Atoi(frame)
				if err != nil {
					t.Fatal(err)
				}
				for k, joint := range want.Joints {
					at := placeOf(t, take, joint, n)
					for i := range at {
						at[i] /= unit
					}
					worst = max(worst, distance(at, places[k]))
				}
			}
			if !(worst <= tolerance) {
				t.Errorf("a joint is %g units from where it should be", worst)
			}
			t.Logf("%d places within %.2g units", len(want.At)*len(want.Joints), worst)
		})
	}
}

// TestConvertOpenC3D holds the CSV files of the open C3D recordings against what
// independent readers found: the first and last frame of the first three points,
// and how many points are missing.
func TestConvertOpenC3D(t *testing.T) {
	const tolerance = 1e-6 // of the file's unit, which they state to six decimals
	for _, want := range linesOf[struct {
		File        string
		Points      int
		Frames      int      `json:"frames_header"`
		FirstLabels []string `json:"first_labels"`
		Rate        float64
		Parameters  struct{ Units string } `json:"POINT"`
		FirstFrame  [][]*float64           `json:"first_frame_first3"` // x, y, z, residual
		LastFrame   [][]*float64           `json:"last_frame_first3"`
		Other       struct {
			Invalid *int `json:"invalid_points"`
		} `json:"pyc3d"`
	}](t, opendata.Path(t, "c3d", "info.jsonl")) {
		t.Run(want.File, func(t *testing.T) {
			in, out := opendata.Path(t, "c3d", want.File), filepath.Join(t.TempDir(), "out.csv")
			must(t, "convert", in, out)
			unit := map[string]float64{"m": 1, "mm": 0.001}[want.Parameters.Units]
			take := one(t, ingest.Options{}, out)
			if take.Frames() != want.Frames || take.Width() != 3*want.Points || math.Abs(take.Rate()-want.Rate) > 1e-6*want.Rate {
				t.Errorf("%d frames of %d channels at %g Hz, want %+v", take.Frames(), take.Width(), take.Rate(), want)
			}
			for frame, points := range map[int][][]*float64{0: want.FirstFrame, take.Frames() - 1: want.LastFrame} {
				for k, p := range points {
					got := placeOf(t, take, want.FirstLabels[k], frame)
					for axis, v := range got {
						gone := p[axis] == nil || *p[3] < 0
						if gone != math.IsNaN(v) || !gone && !(math.Abs(v/unit-*p[axis]) <= tolerance) {
							t.Errorf("frame %d: %s is at %v", frame, want.FirstLabels[k], got)
						}
					}
				}
			}
			if n := want.Other.Invalid; n != nil && emptyFields(t, out) != 3**n {
				t.Errorf("%d empty fields, want 3 for each of %d missing points", emptyFields(t, out), *n)
			}
			sameTakes(t, []*channels.Take{named(one(t, ingest.Options{}, in), take)}, []*channels.Take{take}, false)
		})
	}
}

// named gives a take the name and layout of another. Their channels must be the
// same but for the spelling of points.
func named(take, like *channels.Take) *channels.Take {
	take.ID, take.Layout = like.ID, like.Layout
	return take
}

// emptyFields counts the missing values of a CSV file, which has no empty texts
// but label, subject and session.
func emptyFields(t *testing.T, path string) int {
	t.Helper()
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	n := 0
	for line := range strings.Lines(string(text)) {
		for _, field := range strings.Split(strings.TrimSpace(line), ",")[4:] {
			if field == "" {
				n++
			}
		}
	}
	return n
}

// TestConvertAnalog converts the analog channels of a C3D file, one of them in
// g, on their own clock of two samples a frame of 100 Hz.
func TestConvertAnalog(t *testing.T) {
	o := strandwise(t, "", "convert", "../../ingest/c3d/testdata/cue.c3d", "-", "--as", "csv", "--signals", "analog")
	want := "take,label,subject,session,frame,time_s,Fx1,ACC1\n"
	for i := range 6 {
		want += fmt.Sprintf("cue,,,,%d,%v,%d,%v\n", i, float64(i)/200, i, float64(2*(i+1))*channels.StandardGravity)
	}
	if o.code != exitDone || o.out != want {
		t.Errorf("exit code %d, %s\n%swant\n%s", o.code, o.err, o.out, want)
	}
	if !strings.Contains(o.err, "N, whose numbers stay as recorded") {
		t.Errorf("nothing is said of newtons:\n%s", o.err)
	}
}

// height returns the height in metres of the person a skeleton is of; see
// package bvh.
func height(take *channels.Take) float64 { return take.Skeleton.Span() / 1.5 }

// strayed returns how far any joint of a take is at most from where it is in
// another, in metres.
func strayed(t *testing.T, a, b *channels.Take) float64 {
	t.Helper()
	if a.Frames() != b.Frames() || !slices.Equal(a.Layout.Names(), b.Layout.Names()) {
		t.Fatalf("%d frames of %v became %d of %v", a.Frames(), a.Layout.Names(), b.Frames(), b.Layout.Names())
	}
	worst := 0.0
	for _, j := range a.Skeleton.Joints {
		for i := range a.Time {
			worst = max(worst, distance(placeOf(t, a, j.Name, i), placeOf(t, b, j.Name, i)))
		}
	}
	return worst
}

// TestConvertThereAndBack takes the open BVH recordings through each format that
// keeps a skeleton, and back to BVH.
func TestConvertThereAndBack(t *testing.T) {
	const tolerance = 1e-6 // of the skeleton's height
	files, err := filepath.Glob(filepath.Join(opendata.Path(t, "bvh"), "*.bvh"))
	if err != nil || len(files) == 0 {
		t.Fatal(err)
	}
	for _, in := range append(files, stilts) {
		for _, ending := range []string{".parquet", ".arrow", ".arrows", ".bvh"} {
			t.Run(filepath.Base(in)+ending, func(t *testing.T) {
				dir := t.TempDir()
				between, back := filepath.Join(dir, "between"+ending), filepath.Join(dir, "back.bvh")
				must(t, "convert", in, between, "--length-unit", "cm")
				must(t, "convert", between, back, "--length-unit", "cm")
				o := ingest.Options{LengthUnit: "cm"}
				before, after := one(t, o, in), one(t, o, back)
				far := strayed(t, before, after) / height(before)
				if !(far <= tolerance) {
					t.Errorf("a joint strays by %.2g of the height", far)
				}
				t.Logf("within %.2g of the height", far)
			})
		}
	}
}

// TestConvertToSeveralFiles writes each take of a skeleton into a file of its
// own, named by what is known of it, and reads it back by the same pattern.
func TestConvertToSeveralFiles(t *testing.T) {
	text, err := os.ReadFile(stilts)
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	const pattern = "{subject}/{label}_{take}.bvh"
	for _, name := range []string{"ember/bow_1", "ember/bow_2", "pim/wave_1"} {
		write(t, dir, "in/"+name+".bvh", string(text))
	}
	in, out := filepath.Join(dir, "in"), filepath.Join(dir, "out")
	o := strandwise(t, "", "convert", in, filepath.Join(dir, "all.bvh"), "--pattern", pattern)
	if o.code != exitUsage {
		t.Errorf("three takes into one BVH file: exit code %d", o.code)
	}
	checkSays(t, o, "all.bvh", "more than one take", "--as bvh", "{take}", "{subject}")

	must(t, "convert", in, out+"/", "--as", "bvh", "--pattern", pattern)
	if got := contents(t, out); len(got) != 3 || got["ember/bow_2.bvh"] == "" {
		t.Errorf("a folder now holds %d files, not one for each take by its name", len(got))
	}
	checkFault(t, strandwise(t, "", "convert", in, out, "--as", "bvh", "--pattern", pattern), "bow_1.bvh", "--replace")
	must(t, "convert", in, out, "--as", "bvh", "--pattern", pattern, "--replace")

	again := filepath.Join(dir, "again")
	said := must(t, "convert", in, filepath.Join(again, "{label}", "{subject}-{take}.bvh"), "--pattern", "{subject}/*_{take}.bvh", "--label", "bow")
	if !strings.Contains(said, "in 3 files") {
		t.Errorf("convert says %q", said)
	}
	checkFault(t, strandwise(t, "", "convert", in, filepath.Join(again, "{label}.bvh"), "--pattern", pattern), "bow.bvh", "written twice")
	checkFault(t, strandwise(t, "", "convert", in, filepath.Join(again, "{session}.bvh"), "--pattern", pattern), "session", "cannot be part of a file name")
	for name := range contents(t, again) {
		if strings.HasPrefix(filepath.Base(name), ".") || name == "bow.bvh" {
			t.Errorf("%s is left behind", name)
		}
	}
}

// TestConvertLeadsNowhereElse: a name in a recording cannot lead out of the
// folder.
func TestConvertLeadsNowhereElse(t *testing.T) {
	text, err := os.ReadFile(stilts)
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	in := write(t, dir, "in.bvh", string(text))
	for _, label := range []string{"..", "../up", "/etc/bow", `a\b`, "a/b", "a\nb", "."} {
		o := strandwise(t, "", "convert", in, filepath.Join(dir, "out", "{label}", "x.bvh"), "--label", label)
		checkFault(t, o, "label", "cannot be part of a file name")
		checkAbsent(t, filepath.Join(dir, "out"))
	}
}

// TestConvertGrownSkeletons grows a set from BVH recordings and writes all its
// takes, synthetic ones too, as BVH.
func TestConvertGrownSkeletons(t *testing.T) {
	text, err := os.ReadFile(stilts)
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	for _, name := range []string{"bow_1", "wave_1"} {
		write(t, dir, "in/"+name+".bvh", string(text))
	}
	set, out := filepath.Join(dir, "set"), filepath.Join(dir, "out")
	must(t, "grow", filepath.Join(dir, "in"), "--pattern", "{label}_{take}.bvh", "--per-take", "3", "--out", set)
	must(t, "convert", filepath.Join(set, "takes"), out+"/", "--as", "bvh")
	if got := contents(t, out); len(got) != 8 {
		t.Errorf("2 recorded takes and 3 synthetic ones of each became %d files", len(got))
	}
}
