package main

import (
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"syscall"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/ingest"
)

// recorded reads recordings as convert does.
func recorded(t rapid.TB, o ingest.Options) []*channels.Take {
	t.Helper()
	o.Lenient = true
	r, err := ingest.Open(o)
	if err != nil {
		t.Fatal(err)
	}
	defer r.Close()
	var out []*channels.Take
	for take, err := range r.Takes() {
		if err != nil {
			t.Fatal(err)
		}
		out = append(out, take)
	}
	return out
}

// sameTakes checks that takes are the same to the last bit, but for where they
// stand and, if single, the digits that 32-bit floats do not hold.
func sameTakes(t rapid.TB, want, got []*channels.Take, single bool) {
	t.Helper()
	if single {
		for _, take := range want {
			start := take.Time[0]
			for i, at := range take.Time {
				take.Time[i] = start + float64(float32(at-start))
			}
			for i, v := range take.Data {
				take.Data[i] = float64(float32(v))
			}
		}
	}
	same := cmp.Options{cmpopts.EquateNaNs(), cmpopts.IgnoreFields(channels.Take{}, "Where"), cmpopts.EquateEmpty()}
	if diff := cmp.Diff(want, got, same); diff != "" {
		t.Fatalf("takes (-want +got):\n%s", diff)
	}
}

// drawCSV draws a recording in the long form: units, names of any style, values
// of any size with gaps, with or without labels and splits.
func drawCSV(t *rapid.T) string {
	names := rapid.SampledFrom([][]string{
		{"left_wrist.accel.x [g]", "left_wrist.gyro.x [deg/s]"}, {"ax", "ay", "az"}, {"Left Hand pos x [mm]"}, {"c0", "c1", "knee angle (deg)"}, {"LeftHand.ornt.quat_w", "label2"},
	}).Draw(t, "channels")
	splits := rapid.Bool().Draw(t, "splits")
	var b strings.Builder
	b.WriteString("take,label,subject,session,")
	if splits {
		b.WriteString("split,")
	}
	b.WriteString("time_s," + strings.Join(names, ",") + "\n")
	text := rapid.StringMatching(`[a-zäß€;#'.-]{0,5}`)
	for i := range rapid.IntRange(1, 4).Draw(t, "takes") {
		identity := []string{fmt.Sprintf("%d%s", i, text.Draw(t, "id")), text.Draw(t, "label"), text.Draw(t, "subject"), text.Draw(t, "session")}
		if splits {
			identity = append(identity, rapid.SampledFrom([]string{"", "train", "test"}).Draw(t, "split"))
		}
		at := rapid.Float64Range(-1e3, 1e3).Draw(t, "start")
		for range rapid.IntRange(1, 12).Draw(t, "frames") {
			for _, s := range identity {
				b.WriteString(`"` + s + `",`)
			}
			b.WriteString(strconv.FormatFloat(at, 'g', -1, 64))
			at += rapid.Float64Range(1e-2, 1e2).Draw(t, "step")
			for range names {
				b.WriteByte(',')
				if v := rapid.OneOf(rapid.Float64Range(-1e30, 1e30), rapid.Float64Range(-1, 1), rapid.Just(math.NaN())).Draw(t, "value"); v == v {
					b.WriteString(strconv.FormatFloat(v, 'g', -1, 64))
				}
			}
			b.WriteByte('\n')
		}
	}
	return b.String()
}

// TestConvertReadsBack converts drawn recordings and reads them again: as they
// were, and in the layout they had, to the last bit that the format holds.
func TestConvertReadsBack(t *testing.T) {
	root := t.TempDir()
	for name, single := range map[string]bool{"out.csv": false, "out.parquet": true, "out.arrow": true, "out.arrows": true} {
		t.Run(name, func(t *testing.T) {
			rapid.Check(t, func(rt *rapid.T) {
				in, out := write(t, root, "in.csv", drawCSV(rt)), filepath.Join(root, name)
				must(t, "convert", in, out, "--replace")
				sameTakes(rt, recorded(rt, ingest.Options{Paths: []string{in}}), againRecorded(rt, out, in), single)
			})
		})
	}
}

// againRecorded reads what was converted. The long form states quantities by
// names alone, so those that only a unit told are taken from the source.
func againRecorded(t rapid.TB, out, in string) []*channels.Take {
	t.Helper()
	got := recorded(t, ingest.Options{Paths: []string{out}})
	if filepath.Ext(out) != ".csv" {
		return got
	}
	want := recorded(t, ingest.Options{Paths: []string{in}})[0].Layout
	layout := *got[0].Layout
	layout.Channels = nil
	for i, c := range got[0].Layout.Channels {
		w := want.Channels[i]
		if c.Name != w.Name {
			// Named in full: a point, a type and a component that say the same.
			if c.TrackedPoint != w.TrackedPoint || c.Quantity != w.Quantity || c.Component != w.Component || c.Unit != w.Unit {
				t.Fatalf("channel %+v became %+v", w, c)
			}
			c.Name = w.Name
		}
		layout.Channels = append(layout.Channels, c)
	}
	for _, take := range got {
		take.Layout = &layout
	}
	return got
}

const cues = "testdata/cues.csv"

// TestConvertGolden converts a small recording with units, gaps and texts that
// need quotes.
func TestConvertGolden(t *testing.T) {
	o := strandwise(t, "", "convert", cues, "-", "--as", "csv", "--unit", "strings=mm", "--leave-out", "battery")
	if o.code != exitDone {
		t.Fatal(o.err)
	}
	checkGolden(t, o.out, "testdata/cues.long.csv")
}

func TestConvertSaysWhatItWrote(t *testing.T) {
	dir := t.TempDir()
	in, out := write(t, dir, "long.csv", longCSV(2)), filepath.Join(dir, "new", "out.csv")
	if said := must(t, "convert", in, out, "--rate", "50"); !strings.Contains(said, out+": 12 takes, 360 frames of 3 channels, in 1 file") {
		t.Errorf("convert says %q", said)
	}
	var done struct {
		Out, As                        string
		Takes, Frames, Channels, Files int
		Bytes                          int64
		Notices                        []string
		Repairs                        struct{ Recordings int }
	}
	said := must(t, "convert", in, out, "--rate", "50", "--to-rate", "25", "--replace", "--json")
	if err := json.Unmarshal([]byte(said), &done); err != nil {
		t.Fatal(err)
	}
	info, err := os.Stat(out)
	if err != nil {
		t.Fatal(err)
	}
	if done.Out != out || done.As != "csv" || done.Takes != 12 || done.Frames >= 360 || done.Channels != 3 || done.Files != 1 || done.Bytes != info.Size() || len(done.Notices) == 0 || done.Repairs.Recordings != 12 {
		t.Errorf("convert says %+v of a file of %d bytes", done, info.Size())
	}
}

// TestConvertHoldsOut: --hold-out states splits, which then have a column.
func TestConvertHoldsOut(t *testing.T) {
	dir := t.TempDir()
	in := write(t, dir, "long.csv", strings.Join([]string{"take,label,subject,frame,c0", "a,bow,ember,0,1", "a,bow,ember,1,2", "b,bow,pim,0,3", "b,bow,pim,1,4", ""}, "\n"))
	o := strandwise(t, "", "convert", in, "-", "--as", "csv", "--rate", "1", "--hold-out", "subject=pim")
	want := "take,label,subject,session,split,frame,time_s,c0\na,bow,ember,,train,0,0,1\na,bow,ember,,train,1,1,2\nb,bow,pim,,test,0,0,3\nb,bow,pim,,test,1,1,4\n"
	if o.code != exitDone || o.out != want {
		t.Errorf("exit code %d, %s\n%s", o.code, o.err, o.out)
	}
}

// TestConvertBetweenPipes reads standard input and writes standard output.
func TestConvertBetweenPipes(t *testing.T) {
	in := longCSV(1)
	arrow := strandwise(t, in, "convert", "-", "-", "--as", "arrow", "--rate", "50")
	if arrow.code != exitDone {
		t.Fatal(arrow.err)
	}
	back := strandwise(t, arrow.out, "convert", "-", "-", "--as", "csv")
	if back.code != exitDone {
		t.Fatal(back.err)
	}
	dir := t.TempDir()
	before := recorded(t, ingest.Options{Paths: []string{write(t, dir, "in.csv", in)}, Rate: 50})
	sameTakes(t, before, recorded(t, ingest.Options{Paths: []string{write(t, dir, "back.csv", back.out)}}), true)
}

func TestConvertReplacesOnlyIfAsked(t *testing.T) {
	dir := t.TempDir()
	in, out := write(t, dir, "in.csv", longCSV(1)), write(t, dir, "out.csv", "mine")
	checkFault(t, strandwise(t, "", "convert", in, out, "--rate", "50"), "out.csv", "--replace")
	if text := contents(t, dir)["out.csv"]; text != "mine" {
		t.Errorf("out.csv is now %q", text)
	}
	must(t, "convert", in, out, "--rate", "50", "--replace")
	must(t, "convert", out, out, "--replace") // over its own source
	sameTakes(t, recorded(t, ingest.Options{Paths: []string{in}, Rate: 50}), recorded(t, ingest.Options{Paths: []string{out}}), false)
	if names := contents(t, dir); len(names) != 2 {
		t.Errorf("besides the two there is something else: %d files", len(names))
	}
}

func TestConvertLeavesNothingBehind(t *testing.T) {
	for _, tc := range []struct {
		name, text, out string
		says            []string
	}{
		{"fault on the way", head + sound + "b,wave,pim,train,0,1,two\n", "new/out.csv", []string{"in.csv:5", "two"}},
		{"beyond 32 bits", head + strings.Replace(sound, "2,4,3", "2,4e300,3", 1), "new/out.parquet", []string{"in.csv:2", "take a", "c0", "CSV"}},
		{"beyond 32 bits", head + strings.Replace(sound, "2,4,3", "2,4e300,3", 1), "out.arrow", []string{"4e+300"}},
		{"no skeleton", head + sound, "new/out.bvh", []string{"in.csv", "take a", "skeleton"}},
		{"not there", "", "out.csv", []string{"in.csv", "empty"}},
	} {
		dir := t.TempDir()
		in := write(t, dir, "in.csv", tc.text)
		checkFault(t, strandwise(t, "", "convert", in, filepath.Join(dir, tc.out), "--rate", "1"), tc.says...)
		if left := contents(t, dir); len(left) != 1 {
			t.Errorf("%s: %d files are left", tc.name, len(left))
		}
		checkAbsent(t, filepath.Join(dir, "new"))
	}
}

// TestConvertStops: an interrupt before the end leaves nothing behind.
func TestConvertStops(t *testing.T) {
	dir := t.TempDir()
	in := write(t, dir, "in.csv", longCSV(1))
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	var said bytes.Buffer
	s := Streams{In: strings.NewReader(""), Out: &said, Err: &said}
	if code := ExitCode(s, Run(ctx, s, []string{"convert", in, filepath.Join(dir, "out.csv"), "--rate", "50"})); code != exitFault || !strings.Contains(said.String(), "interrupted") {
		t.Errorf("exit code %d\n%s", code, said.String())
	}
	if left := contents(t, dir); len(left) != 1 {
		t.Errorf("%d files are left", len(left))
	}
}

func TestConvertFullDisk(t *testing.T) {
	dir := t.TempDir()
	in := write(t, dir, "in.csv", longCSV(40))
	small := filepath.Join(dir, "small")
	if err := os.Mkdir(small, 0o777); err != nil {
		t.Fatal(err)
	}
	if err := syscall.Mount("tmpfs", small, "tmpfs", 0, "size=64k"); err != nil {
		t.Skipf("skipped: no small disk can be mounted here: %v", err)
	}
	defer syscall.Unmount(small, 0)
	for _, name := range []string{"out.csv", "new/out.arrow"} {
		checkFault(t, strandwise(t, "", "convert", in, filepath.Join(small, name), "--rate", "50"), "no space left", filepath.Base(name))
		if left := contents(t, small); len(left) != 0 {
			t.Errorf("%s: %d files are left", name, len(left))
		}
		checkAbsent(t, filepath.Join(small, "new"))
	}
}

// TestConvertByPlan reads what a plan names and writes the one argument.
func TestConvertByPlan(t *testing.T) {
	dir := t.TempDir()
	write(t, dir, "in.csv", longCSV(1))
	plan := write(t, dir, "plan.toml", "recordings = [\"in.csv\"]\nrate = 50\nleave_out = [\"right.*\"]\nout = \"set\"\n")
	if said := must(t, "convert", "--plan", plan, filepath.Join(dir, "out.csv")); !strings.Contains(said, "6 takes, 180 frames of 2 channels") {
		t.Errorf("convert says %q", said)
	}
	checkAbsent(t, filepath.Join(dir, "set"))
}

func TestConvertUsage(t *testing.T) {
	dir := t.TempDir()
	in := write(t, dir, "in.csv", longCSV(1))
	for _, tc := range []struct {
		args []string
		says []string
	}{
		{nil, []string{"name the recordings", "file to write"}},
		{[]string{"out.csv"}, []string{"no recordings"}},
		{[]string{in, ""}, []string{"no file"}},
		{[]string{in, "out.xlsx"}, []string{"out.xlsx", ".parquet", "--as"}},
		{[]string{in, "out"}, []string{"out", "csv, parquet, arrow and bvh"}},
		{[]string{in, "-"}, []string{"--as", "csv, parquet, arrow and bvh"}},
		{[]string{in, "out.csv", "--as", "excel"}, []string{"--as", "excel", "csv, parquet, arrow and bvh"}},
		{[]string{in, "-", "--as", "csv", "--json"}, []string{"--json", "standard output"}},
		{[]string{in, "{who}.bvh"}, []string{"{who}", "{take}, {label}"}},
		{[]string{in, "{take.bvh"}, []string{`"{"`, "{take}, {label}"}},
		{[]string{in, filepath.Join(dir, "out.csv")}, []string{"--rate"}},
		{[]string{in, filepath.Join(dir, "out.csv"), "--rate", "50", "--unit", "left.*=furlong"}, []string{"--unit", "m/s^2"}},
	} {
		o := strandwise(t, "", append([]string{"convert"}, tc.args...)...)
		if o.code != exitUsage {
			t.Errorf("%q: exit code %d, want %d\n%s", tc.args, o.code, exitUsage, o.err)
		}
		checkSays(t, o, tc.says...)
	}
	if left := contents(t, dir); len(left) != 1 {
		t.Errorf("%d files are left", len(left))
	}
	if out := must(t, "convert", "-h"); !strings.Contains(out, "strandwise convert recordings --pattern") {
		t.Error("the help shows no example")
	}
}
