package main

import (
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"testing"

	"github.com/apache/arrow/go/v15/arrow/array"
	"github.com/apache/arrow/go/v15/arrow/ipc"

	"strandwise/export"
)

// performances writes one file for each of a few invented takes, by people of
// these names, and returns their folder.
func performances(t *testing.T, dir string, people ...string) string {
	t.Helper()
	recordings := filepath.Join(dir, "recordings")
	for p, person := range people {
		for l, label := range []string{"raise", "lower"} {
			for n := range 2 {
				var b strings.Builder
				b.WriteString("time_s,left.accel.x,left.accel.y,left.accel.z\n")
				for i := range 40 {
					at := float64(i) / 50
					fmt.Fprintf(&b, "%.2f,%.4f,%.4f,%.4f\n", at, math.Sin(9*at+float64(p)+3*float64(l)), math.Cos(5*at*float64(1+l)+float64(n)/3), 9.81+0.1*math.Sin(20*at))
				}
				write(t, recordings, fmt.Sprintf("%s/%s_%s-monday_%d.csv", person, label, person, n), b.String())
			}
		}
	}
	return recordings
}

const performed = "{subject}/{label}_{session}_{take}.csv"

func saltFile(t *testing.T, dir string) string {
	return write(t, dir, "salt", "this is random enough for a test\n")
}

// TestHideSubjects: no name stands anywhere in the set, not in a path, an id, a
// session or a score, and the set is sound and the same again.
func TestHideSubjects(t *testing.T) {
	dir := t.TempDir()
	people := []string{"Ember", "pim", "wick"}
	in, salt := performances(t, dir, people...), saltFile(t, dir)
	grow := func(name string) map[string]string {
		set := filepath.Join(dir, name)
		must(t, "grow", in, "--pattern", performed, "--hide-subjects", "--subject-salt", salt, "--hold-out", "subject=pim",
			"--per-take", "2", "--tables", "takes,frames,windows", "--compression", "none", "--out", set)
		must(t, "verify", set)
		return contents(t, set)
	}
	files := grow("set")
	for name, text := range files {
		for _, secret := range append(people, "monday", "random enough") {
			if strings.Contains(strings.ToLower(name+text), strings.ToLower(secret)) {
				at := strings.Index(strings.ToLower(text), strings.ToLower(secret))
				t.Errorf("%s names %s: …%q…", name, secret, text[max(0, at-60):min(len(text), at+60)])
			}
		}
	}
	if !strings.Contains(files["CARD.md"], "| person-") || !strings.Contains(files["CARD.md"], "keyed hashes") {
		t.Errorf("the card does not say that names are hidden:\n%s", files["CARD.md"])
	}
	if again := grow("again"); again["manifest.json"] != files["manifest.json"] {
		t.Error("the same salt gives another set")
	}
}

func TestWrongUsageOfSets(t *testing.T) {
	dir := t.TempDir()
	in, salt := performances(t, dir, "pim", "wick"), saltFile(t, dir)
	short := write(t, dir, "short", "too short")
	set := filepath.Join(dir, "set")
	for _, tc := range []struct {
		name string
		args []string
		says []string
	}{
		{"compression", []string{"--compression", "gzip"}, []string{"--compression", "snappy, zstd, none"}},
		{"row groups", []string{"--row-group-bytes", "0"}, []string{"--row-group-bytes", "1 to"}},
		{"files", []string{"--file-bytes", "-1"}, []string{"--file-bytes", "1 and more"}},
		{"windows without their table", []string{"--window-length", "9"}, []string{"--window-length", "--tables takes,windows"}},
		{"window length", []string{"--tables", "takes,windows", "--window-length", "long"}, []string{"--window-length", "0.5s"}},
		{"window hop", []string{"--tables", "takes,windows", "--window-hop", "0"}, []string{"--window-hop", "0.5s"}},
		{"window padding", []string{"--tables", "takes,windows", "--window-padding", "mirror"}, []string{"--window-padding", "hold, zero and none"}},
		{"hidden without a salt", []string{"--hide-subjects"}, []string{"--hide-subjects", "--subject-salt"}},
		{"salt without hiding", []string{"--subject-salt", salt}, []string{"--subject-salt", "--hide-subjects"}},
		{"no salt there", []string{"--hide-subjects", "--subject-salt", salt + "y"}, []string{"--subject-salt", "salty"}},
		{"short salt", []string{"--hide-subjects", "--subject-salt", short}, []string{"--subject-salt", "16"}},
		{"licence", []string{"--licence", "CC0"}, []string{"--licence", "URL"}},
		{"url", []string{"--url", "here"}, []string{"--url", "URL"}},
		{"published", []string{"--published", "today"}, []string{"--published", "2026-12-31"}},
	} {
		t.Run(tc.name, func(t *testing.T) {
			o := strandwise(t, "", append([]string{"grow", in, "--pattern", performed, "--out", set}, tc.args...)...)
			if o.code != exitUsage {
				t.Errorf("exit code %d, want %d\n%s", o.code, exitUsage, o.err)
			}
			checkSays(t, o, tc.says...)
			checkAbsent(t, set)
		})
	}
}

// TestWindowsOfAPlan: lengths in seconds become frames at the recordings' rate.
func TestWindowsOfAPlan(t *testing.T) {
	dir := t.TempDir()
	set := filepath.Join(dir, "set")
	must(t, "grow", performances(t, dir, "pim", "wick"), "--pattern", performed, "--method", "path", "--gate", "all=off", "--per-take", "1", "--out", set,
		"--tables", "takes,windows", "--window-length", "0.3s", "--window-hop", "0.1s", "--window-padding", "zero", "--window-int16")
	card := contents(t, set)["CARD.md"]
	for _, want := range []string{"A window has 15 frames and the next begins 5 frames later", "16-bit numbers"} {
		if !strings.Contains(card, want) {
			t.Errorf("the card lacks %q:\n%s", want, card)
		}
	}
	must(t, "verify", set)
}

// TestGrowStream: the stream holds the takes of the set that the same plan makes.
func TestGrowStream(t *testing.T) {
	dir := t.TempDir()
	in := performances(t, dir, "pim", "wick")
	args := []string{"grow", in, "--pattern", performed, "--method", "path", "--gate", "all=off", "--per-take", "3", "--out"}
	set := filepath.Join(dir, "set")
	must(t, append(args, set)...)
	m, err := export.ReadManifest(set)
	if err != nil {
		t.Fatal(err)
	}
	o := strandwise(t, "", append(args, "-")...)
	if o.code != exitDone {
		t.Fatalf("exit code %d\n%s", o.code, o.err)
	}
	r, err := ipc.NewReader(strings.NewReader(o.out))
	if err != nil {
		t.Fatal(err)
	}
	defer r.Release()
	origins := map[string]int64{}
	for r.Next() {
		column := r.Record().Column(r.Schema().FieldIndices("origin")[0]).(*array.String)
		for i := range column.Len() {
			origins[column.Value(i)]++
		}
	}
	if r.Err() != nil || origins["recorded"] != m.Takes("recorded") || origins["synthetic"] != m.Takes("synthetic") || origins["synthetic"] != 24 {
		t.Errorf("%v, %v; the set has %d and %d", origins, r.Err(), m.Takes("recorded"), m.Takes("synthetic"))
	}
	text, _ := r.Schema().Metadata().GetValue(export.RunKey)
	var run export.Run
	var plan, want bytes.Buffer
	if err := json.Unmarshal([]byte(text), &run); err != nil {
		t.Fatal(err)
	}
	for to, from := range map[*bytes.Buffer][]byte{&plan: run.Plan, &want: m.Plan} {
		if err := json.Compact(to, from); err != nil {
			t.Fatal(err)
		}
	}
	if run.Seed != m.Seed || plan.String() != want.String() {
		t.Errorf("the stream states the plan %s, the set %s", &plan, &want)
	}
}

// leaving is a reader that goes away after so many bytes.
type leaving struct{ room int }

func (l *leaving) Write(p []byte) (int, error) {
	if l.room -= len(p); l.room < 0 {
		return 0, &os.PathError{Op: "write", Path: "/dev/stdout", Err: syscall.EPIPE}
	}
	return len(p), nil
}

// TestGrowStreamEndsWithItsReader: a reader that has enough is no fault, whether
// it leaves at once, at the head or later.
func TestGrowStreamEndsWithItsReader(t *testing.T) {
	in := performances(t, t.TempDir(), "pim", "wick")
	for _, room := range []int{0, 3000, 100_000} {
		var notes bytes.Buffer
		s := Streams{In: strings.NewReader(""), Out: &leaving{room}, Err: &notes}
		code := ExitCode(s, Run(context.Background(), s, []string{"grow", in, "--pattern", performed, "--method", "path", "--gate", "all=off", "--per-take", "40", "--out", "-"}))
		if code != exitDone || !strings.Contains(notes.String(), "note: the reader went away after ") {
			t.Errorf("a reader of %d bytes: exit code %d\n%s", room, code, &notes)
		}
	}
}

// TestGrowStreamFaults: other failures are faults.
func TestGrowStreamFaults(t *testing.T) {
	in := performances(t, t.TempDir(), "pim", "wick")
	s := Streams{In: strings.NewReader(""), Out: failing{}, Err: io.Discard}
	if code := ExitCode(s, Run(context.Background(), s, []string{"grow", in, "--pattern", performed, "--method", "path", "--gate", "all=off", "--out", "-"})); code != exitFault {
		t.Errorf("a full disk: exit code %d", code)
	}
	o := strandwise(t, "", "grow", in, "--pattern", performed, "--out", "-", "--json")
	if o.code != exitUsage || !strings.Contains(o.err, "--json") {
		t.Errorf("--json: exit code %d\n%s", o.code, o.err)
	}
}

type failing struct{}

func (failing) Write([]byte) (int, error) { return 0, syscall.ENOSPC }
