package ingest_test

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/klauspost/compress/gzip"
	"github.com/klauspost/compress/zstd"

	"strandwise/channels"
	"strandwise/channels/group"
	"strandwise/ingest"
	"strandwise/ingest/fault"
)

// write makes a folder of files and returns it.
func write(t *testing.T, files map[string]string) string {
	t.Helper()
	dir := t.TempDir()
	for name, text := range files {
		path := filepath.Join(dir, name)
		if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

// pass reads all takes once.
func pass(r *ingest.Recordings) ([]*channels.Take, error) {
	var out []*channels.Take
	for t, err := range r.Takes() {
		if err != nil {
			return out, err
		}
		out = append(out, t)
	}
	return out, nil
}

// read opens and reads once.
func read(t *testing.T, o ingest.Options) ([]*channels.Take, *ingest.Recordings, error) {
	t.Helper()
	r, err := ingest.Open(o)
	if err != nil {
		return nil, nil, err
	}
	t.Cleanup(func() {
		if err := r.Close(); err != nil {
			t.Error(err)
		}
	})
	takes, err := pass(r)
	return takes, r, err
}

const twoTakes = `take,label,subject,split,time_s,left.acc.x [g],left.acc.y [g]
t1,wave,ana,train,0,1,0
t1,wave,ana,train,0.5,2,0
t2,bow,ben,test,0,1,1
t2,bow,ben,test,0.25,1,3
t2,bow,ben,test,0.75,1,4
`

func TestTakesOfOneFile(t *testing.T) {
	dir := write(t, map[string]string{"rec.csv": twoTakes})
	takes, r, err := read(t, ingest.Options{Paths: []string{dir}})
	if err != nil {
		t.Fatal(err)
	}
	if len(takes) != 2 {
		t.Fatalf("%d takes, want 2", len(takes))
	}
	got := *takes[1]
	layout := got.Layout
	if layout != takes[0].Layout {
		t.Error("takes do not share their layout")
	}
	got.Layout = nil
	const g = channels.StandardGravity
	want := channels.Take{
		ID: "t2", Label: "bow", Subject: "ben", Split: channels.Test,
		Where: filepath.Join(dir, "rec.csv") + ":4",
		Time:  []float64{0, 0.25, 0.75}, Data: []float64{g, g, g, 3 * g, g, 4 * g},
	}
	if d := cmp.Diff(want, got); d != "" {
		t.Error(d)
	}
	if d := cmp.Diff([]string{"left.acc.x", "left.acc.y"}, layout.Names()); d != "" {
		t.Error(d)
	}
	again, err := pass(r)
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(takes, again); d != "" {
		t.Error("second pass differs:", d)
	}
	files := r.Files()
	if len(files) != 1 || files[0].Bytes != int64(len(twoTakes)) || len(files[0].SHA256) != 64 {
		t.Errorf("files %+v", files)
	}
	if n := r.Notices(); len(n) != 0 {
		t.Errorf("notices %q", n)
	}
}

func TestIdentityFromThePath(t *testing.T) {
	const rows = "frame,c0\n0,1\n1,2\n"
	const taken = "take,frame,c0\na,0,1\na,1,2\nb,0,1\nb,1,2\n"
	dir := write(t, map[string]string{
		"ana/wave_hi_s1_1.csv": rows, "ana/note.csv": "x", "ben/bow_s2_7.csv": taken, "ben/info.pdf": "x",
	})
	takes, r, err := read(t, ingest.Options{
		Paths: []string{dir}, Pattern: "{subject}/{label}_{session}_{take}.csv", Rate: 50,
	})
	if err != nil {
		t.Fatal(err)
	}
	type id struct{ ID, Label, Subject, Session string }
	var got []id
	for _, x := range takes {
		got = append(got, id{x.ID, x.Label, x.Subject, x.Session})
	}
	want := []id{
		{"ana/wave_hi_s1_1", "wave_hi", "ana", "s1"},
		{"ben/bow_s2_7/a", "bow", "ben", "s2"},
		{"ben/bow_s2_7/b", "bow", "ben", "s2"},
	}
	if d := cmp.Diff(want, got); d != "" {
		t.Error(d)
	}
	if n := strings.Join(r.Notices(), "\n"); !strings.Contains(n, "note.csv") || !strings.Contains(n, "info.pdf") || len(r.Notices()) != 2 {
		t.Errorf("notices: %s", n)
	}
}

func TestStandardInputIsReadTwice(t *testing.T) {
	takes, r, err := read(t, ingest.Options{Paths: []string{"-"}, Stdin: strings.NewReader(twoTakes)})
	if err != nil {
		t.Fatal(err)
	}
	again, err := pass(r)
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(takes, again); d != "" {
		t.Error(d)
	}
	if w := takes[0].Where; w != "-:2" {
		t.Errorf("where %q", w)
	}
}

func TestUnitsAndLayoutOfSeveralFiles(t *testing.T) {
	dir := write(t, map[string]string{
		"1.csv": "time_ms,acc.x [g],acc.y [g],h\n0,1,2,5\n10,2,2,5\n",
		"2.csv": "h,time_us,acc.y [mg],acc.x [m/s^2]\n5,0,1000,1\n6,10000,2000,2\n",
	})
	takes, _, err := read(t, ingest.Options{
		Paths: []string{dir}, Label: "wave",
		Units: []ingest.UnitRule{{Pattern: "h", Unit: channels.Unit{Symbol: "mm", Quantity: channels.Position, Factor: 0.001}}},
	})
	if err != nil {
		t.Fatal(err)
	}
	const g = channels.StandardGravity
	if d := cmp.Diff([]float64{g, 2 * g, 0.005, 2 * g, 2 * g, 0.005}, takes[0].Data); d != "" {
		t.Error(d)
	}
	if d := cmp.Diff([]float64{1, g, 0.005, 2, 2 * g, 0.006}, takes[1].Data); d != "" {
		t.Error(d)
	}
	if d := cmp.Diff([]float64{0, 0.01}, takes[1].Time); d != "" {
		t.Error(d)
	}
	if q := takes[0].Layout.Channels[2].Quantity; q != channels.Position {
		t.Errorf("h is %s", q)
	}
}

func TestGroupRules(t *testing.T) {
	dir := write(t, map[string]string{"a.csv": "c0,c1,c2\n0,1,2\n1,2,3\n"})
	takes, _, err := read(t, ingest.Options{
		Paths: []string{dir}, Label: "wave", Rate: 10,
		Groups: []group.Rule{{Name: "b", Limb: "arm", Channels: []string{"c1-c2"}}, {Name: "a", Channels: []string{"c0"}}},
	})
	if err != nil {
		t.Fatal(err)
	}
	want := []channels.Group{{Name: "b", Limb: "arm", Channels: []int{1, 2}}, {Name: "a", Limb: "a", Channels: []int{0}}}
	if d := cmp.Diff(want, takes[0].Layout.Groups); d != "" {
		t.Error(d)
	}
}

func TestUsageErrors(t *testing.T) {
	dir := write(t, map[string]string{"a.csv": "c0,c1\n0,1\n1,2\n", "e/x": ""})
	a := filepath.Join(dir, "a.csv")
	for name, c := range map[string]struct {
		o    ingest.Options
		want string
	}{
		"no paths":          {ingest.Options{}, "no recordings"},
		"glob":              {ingest.Options{Paths: []string{dir + "/*.tsv"}}, "*.tsv"},
		"bad glob":          {ingest.Options{Paths: []string{dir + "/[a.tsv"}}, "[a.tsv"},
		"empty folder":      {ingest.Options{Paths: []string{dir + "/e"}}, "no recording in folder"},
		"bad field":         {ingest.Options{Paths: []string{a}, Pattern: "{person}.csv"}, "legal fields are {take}"},
		"twice":             {ingest.Options{Paths: []string{a}, Pattern: "{take}{take}.csv"}, "twice"},
		"brace":             {ingest.Options{Paths: []string{a}, Pattern: "{take.csv"}, "brace"},
		"no field":          {ingest.Options{Paths: []string{a}, Pattern: "a.csv"}, "no field"},
		"pattern":           {ingest.Options{Paths: []string{a}, Pattern: "{label}_{take}.csv"}, "does not match"},
		"folder pattern":    {ingest.Options{Paths: []string{dir}, Pattern: "{label}_{take}.csv"}, "no recording in folder"},
		"time unit":         {ingest.Options{Paths: []string{a}, TimeUnit: "h"}, "ms"},
		"rate":              {ingest.Options{Paths: []string{a}, Rate: -1}, "-1"},
		"missing rate":      {ingest.Options{Paths: []string{a}, Label: "x"}, "--rate"},
		"unit matches none": {ingest.Options{Paths: []string{a}, Label: "x", Rate: 1, Units: []ingest.UnitRule{{Pattern: "d*", Unit: channels.Unit{Symbol: "g"}}}}, "channels are c0, c1"},
		"group":             {ingest.Options{Paths: []string{a}, Label: "x", Rate: 1, Groups: []group.Rule{{Name: "g", Channels: []string{"c0"}}}}, "no group holds c1"},
	} {
		t.Run(name, func(t *testing.T) {
			_, _, err := read(t, c.o)
			var usage *ingest.UsageError
			if !errors.As(err, &usage) || !strings.Contains(err.Error(), c.want) {
				t.Errorf("error %v (%T), want a usage error with %q", err, err, c.want)
			}
		})
	}
}

func TestFaults(t *testing.T) {
	for name, c := range map[string]struct {
		files map[string]string
		want  []string
	}{
		"no label":         {map[string]string{"a.csv": "c0\n0\n1\n"}, []string{"a.csv:2", "no label", "--label"}},
		"two labels":       {map[string]string{"a.csv": "take,label,c0\nt,x,0\nt,x,1\nt,y,1\n"}, []string{"a.csv:4", `"y"`, "line 2"}},
		"take comes again": {map[string]string{"a.csv": "take,label,c0\nt,x,0\nt,x,1\nu,x,0\nu,x,1\nt,x,1\nt,x,2\n"}, []string{"a.csv:6", "a.csv:2", "comes again"}},
		"in two files":     {map[string]string{"a.csv": "take,label,c0\nt,x,0\nt,x,1\n", "b.csv": "take,label,c0\nt,x,0\nt,x,1\n"}, []string{"a.csv:2", "b.csv:2", "--pattern"}},
		"bad split":        {map[string]string{"a.csv": "label,split,c0\nx,dev,0\nx,dev,1\n"}, []string{"a.csv:2", "dev", "train and test"}},
		"one frame":        {map[string]string{"a.csv": "label,c0\nx,0\n"}, []string{"a.csv:2", "1 frame"}},
		"constant":         {map[string]string{"a.csv": "label,c0\nx,0\nx,0\n"}, []string{"a.csv:2", "constant"}},
		"unknown unit":     {map[string]string{"a.csv": "label,c0 [furlong]\nx,0\nx,1\n"}, []string{"a.csv", "c0", "furlong", "m/s^2"}},
		"missing channel":  {map[string]string{"a.csv": "label,c0,c1\nx,0,1\nx,1,1\n", "b.csv": "label,c1\nx,0\nx,1\n"}, []string{"b.csv", "channel c0", "missing"}},
		"extra channel":    {map[string]string{"a.csv": "label,c0\nx,0\nx,1\n", "b.csv": "label,c0,c1\nx,0,1\nx,1,1\n"}, []string{"b.csv", "channel c1", "extra"}},
		"unit once":        {map[string]string{"a.csv": "label,c0 [g]\nx,0\nx,1\n", "b.csv": "label,c0\nx,0\nx,1\n"}, []string{"b.csv", "channel c0", "no unit"}},
		"png":              {map[string]string{"a.csv": "\x89PNG\r\n\x1a\n"}, []string{"a.csv", "PNG"}},
		"nul":              {map[string]string{"a.csv": "ab\x00c"}, []string{"a.csv", "binary"}},
		"parquet":          {map[string]string{"a.csv": "PAR1 text only"}, []string{"a.csv", "Parquet"}},
		"empty":            {map[string]string{"a.csv": ""}, []string{"a.csv", "empty"}},
		"cut gzip":         {map[string]string{"a.csv.gz": "\x1f\x8b\x08\x00"}, []string{"a.csv.gz", "gzip"}},
	} {
		t.Run(name, func(t *testing.T) {
			_, _, err := read(t, ingest.Options{Paths: []string{write(t, c.files)}, Rate: 10})
			var f *fault.Error
			if !errors.As(err, &f) {
				t.Fatalf("error %v (%T), want a fault", err, err)
			}
			for _, w := range c.want {
				if !strings.Contains(err.Error(), w) {
					t.Errorf("%q does not say %q", err, w)
				}
			}
		})
	}
	t.Run("no such file", func(t *testing.T) {
		var f *fault.Error
		if _, err := ingest.Open(ingest.Options{Paths: []string{"nowhere.csv"}}); !errors.As(err, &f) {
			t.Errorf("error %v", err)
		}
	})
}

func TestPackedFilesReadLikePlainOnes(t *testing.T) {
	var gz, zst bytes.Buffer
	w := gzip.NewWriter(&gz)
	if _, err := w.Write([]byte(twoTakes)); err != nil || w.Close() != nil {
		t.Fatal(err)
	}
	z, err := zstd.NewWriter(&zst)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := z.Write([]byte(twoTakes)); err != nil || z.Close() != nil {
		t.Fatal(err)
	}
	var want []*channels.Take
	for _, c := range []struct{ name, text string }{
		{"a.csv", twoTakes}, {"a.csv.gz", gz.String()}, {"a.csv.zst", zst.String()},
		{"named-plain.csv", gz.String()},        // the content tells, not the name
		{"two.csv.gz", gz.String() + emptyGzip}, // members are joined, as RFC 1952 says
	} {
		dir := write(t, map[string]string{c.name: c.text})
		takes, r, err := read(t, ingest.Options{Paths: []string{filepath.Join(dir, c.name)}})
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		for _, x := range takes {
			x.Where = ""
		}
		if want == nil {
			want = takes
		}
		if d := cmp.Diff(want, takes); d != "" {
			t.Errorf("%s: %s", c.name, d)
		}
		sum := sha256.Sum256([]byte(c.text))
		file := ingest.File{Path: filepath.Join(dir, c.name), Bytes: int64(len(c.text)), SHA256: hex.EncodeToString(sum[:])}
		if d := cmp.Diff([]ingest.File{file}, r.Files()); d != "" {
			t.Errorf("%s: %s", c.name, d)
		}
	}
}

// emptyGzip is a gzip member of no bytes.
const emptyGzip = "\x1f\x8b\x08\x00\x00\x00\x00\x00\x00\xff\x01\x00\x00\xff\xff\x00\x00\x00\x00\x00\x00\x00\x00"

func TestPathNamesTakesWithoutTheExtensionOfPacking(t *testing.T) {
	var gz bytes.Buffer
	w := gzip.NewWriter(&gz)
	if _, err := w.Write([]byte("time_s,x\n0,1\n1,2\n")); err != nil || w.Close() != nil {
		t.Fatal(err)
	}
	dir := write(t, map[string]string{"wave_1.csv.gz": gz.String()})
	for pattern, id := range map[string]string{"": "wave_1", "{label}_{take}.csv": "wave_1", "{label}_{take}.csv.gz": "wave_1", "{label}_*.csv": "wave_1"} {
		takes, _, err := read(t, ingest.Options{Paths: []string{dir}, Pattern: pattern, Label: "wave"})
		if err != nil {
			t.Fatal(err)
		}
		if takes[0].ID != id || takes[0].Label != "wave" {
			t.Errorf("pattern %q: take %s, label %s", pattern, takes[0].ID, takes[0].Label)
		}
	}
}

func TestAChangedFileIsNoticed(t *testing.T) {
	dir := write(t, map[string]string{"a.csv": twoTakes})
	_, r, err := read(t, ingest.Options{Paths: []string{dir}})
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(dir, "a.csv"), []byte(twoTakes+"t2,bow,ben,test,0.8,1,4\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	var f *fault.Error
	if _, err := pass(r); !errors.As(err, &f) || !strings.Contains(err.Error(), "changed") {
		t.Errorf("error %v", err)
	}
}

func TestCloseRemovesWhatWasKeptOfStandardInput(t *testing.T) {
	dir := t.TempDir()
	t.Setenv("TMPDIR", dir)
	r, err := ingest.Open(ingest.Options{Paths: []string{"-"}, Stdin: strings.NewReader(twoTakes)})
	if err != nil {
		t.Fatal(err)
	}
	if _, err := pass(r); err != nil {
		t.Fatal(err)
	}
	if kept, _ := os.ReadDir(dir); len(kept) != 1 {
		t.Errorf("%d files kept, want 1", len(kept))
	}
	if err := r.Close(); err != nil {
		t.Fatal(err)
	}
	if kept, _ := os.ReadDir(dir); len(kept) != 0 {
		t.Errorf("%d files kept after Close", len(kept))
	}
}

func TestAReceiverMayStopAndStartAgain(t *testing.T) {
	dir := write(t, map[string]string{"a.csv": twoTakes})
	r, err := ingest.Open(ingest.Options{Paths: []string{dir}})
	if err != nil {
		t.Fatal(err)
	}
	for range r.Takes() {
		break
	}
	if len(r.Files()) != 0 {
		t.Error("files are reported after an incomplete pass")
	}
	takes, err := pass(r)
	if err != nil || len(takes) != 2 || len(r.Files()) != 1 {
		t.Errorf("%d takes, %v", len(takes), err)
	}
	takes[0].Data[0] = 99 // a take belongs to its receiver
	again, err := pass(r)
	if err != nil || again[0].Data[0] == 99 {
		t.Errorf("%v, %v", again[0].Data, err)
	}
}

func TestPathAndRecordingMustAgree(t *testing.T) {
	dir := write(t, map[string]string{"bow_1.csv": "label,time_s,x\nwave,0,1\nwave,1,2\n"})
	_, _, err := read(t, ingest.Options{Paths: []string{dir}, Pattern: "{label}_{take}.csv"})
	if err == nil || !strings.Contains(err.Error(), `label "wave", its path "bow"`) {
		t.Errorf("error %v", err)
	}
}

func TestNotices(t *testing.T) {
	const rows = "label,time_s,left.acc.x,left.gyro.x [deg/s],note\nwave,0,1,2,fine\nwave,1,2,3,fine\n"
	dir := write(t, map[string]string{"a.csv": rows, "b.csv": rows, "c/readme.md": "", "c/d.csv": rows, ".hidden/e.csv": rows, ".f.csv": rows})
	_, r, err := read(t, ingest.Options{Paths: []string{dir, filepath.Join(dir, "b.csv")}, Rate: 50})
	if err != nil {
		t.Fatal(err)
	}
	want := []string{
		"c/readme.md: is no recording by its extension and is left out",
		"b.csv: is named twice and read once",
		`a.csv and 2 more: column "note" is no channel and is left out (it begins with "fine")`,
		"a.csv: no unit is stated for left.acc.x; the values are taken to be in SI units",
		"a.csv and 2 more: has a time column, so the frame rate stated is not used",
	}
	for range 2 {
		var got []string
		for _, n := range r.Notices() {
			got = append(got, strings.TrimPrefix(filepath.ToSlash(n), filepath.ToSlash(dir)+"/"))
		}
		if d := cmp.Diff(want, got); d != "" {
			t.Error(d)
		}
		if _, err := pass(r); err != nil {
			t.Fatal(err)
		}
	}
}

// BenchmarkTakes measures whole passes over a file of 32 MB, in MB of file per
// second; the first pass of each opening also hashes the file:
//
//	go test -run '^$' -bench Takes ./ingest
func BenchmarkTakes(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 1))
	var text bytes.Buffer
	text.WriteString("take,label,time_s,acc.x [g],acc.y [g],acc.z [g]\n")
	for i := 0; text.Len() < 32<<20; i++ {
		fmt.Fprintf(&text, "t%05d,wave,%.2f,%.6f,%.6f,%.6f\n", i/128, float64(i)*0.02, rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64())
	}
	name := filepath.Join(b.TempDir(), "a.csv")
	if err := os.WriteFile(name, text.Bytes(), 0o644); err != nil {
		b.Fatal(err)
	}
	for _, passes := range []int{1, 2} {
		b.Run(fmt.Sprintf("passes=%d", passes), func(b *testing.B) {
			b.SetBytes(int64(passes * text.Len()))
			for b.Loop() {
				r, err := ingest.Open(ingest.Options{Paths: []string{name}})
				if err != nil {
					b.Fatal(err)
				}
				for range passes {
					for _, err := range r.Takes() {
						if err != nil {
							b.Fatal(err)
						}
					}
				}
			}
		})
	}
}

func ExampleOpen() {
	text := "take,label,subject,time_ms,wrist.accel.x [g]\nt1,wave,ana,0,1\nt1,wave,ana,20,1.5\n"
	r, err := ingest.Open(ingest.Options{Paths: []string{"-"}, Stdin: strings.NewReader(text)})
	if err != nil {
		fmt.Println(err)
		return
	}
	defer r.Close()
	for t, err := range r.Takes() {
		if err != nil {
			fmt.Println(err)
			return
		}
		c := t.Layout.Channels[0]
		fmt.Printf("%s: %s of %s, %d frames at %.0f Hz, %s %.3f %s\n", t.ID, t.Label, t.Subject, t.Frames(), t.Rate(), c.Name, t.Data, c.Unit)
	}
	// Output: t1: wave of ana, 2 frames at 50 Hz, wrist.accel.x [9.807 14.710] m/s^2
}
