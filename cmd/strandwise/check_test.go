package main

import (
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"strandwise/testdata/opendata"
)

// TestCheckGolden holds what check says of each hostile recording, which must
// be refused, and of each suspect one to golden files.
func TestCheckGolden(t *testing.T) {
	for _, folder := range []string{"hostile", "suspect"} {
		t.Run(folder, func(t *testing.T) {
			dir := filepath.Join("..", "..", "testdata", folder)
			entries, err := os.ReadDir(dir)
			if err != nil {
				t.Fatal(err)
			}
			var got strings.Builder
			for _, e := range entries {
				o := strandwise(t, "", "check", filepath.Join(dir, e.Name()), "--rate", "50")
				if folder == "hostile" && o.code != exitFault {
					t.Errorf("%s is not refused", e.Name())
				}
				fmt.Fprintf(&got, "== %s: exit code %d\n%s%s\n", e.Name(), o.code, o.out, o.err)
			}
			text := strings.ReplaceAll(got.String(), dir+string(filepath.Separator), "")
			checkGolden(t, text, dir+".check.golden")
		})
	}
}

func TestCheckOfSoundRecordings(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", longCSV(3))
	out := must(t, "check", csv, "--rate", "50")
	for _, part := range []string{"long.csv  18", "ember", "bow", "verdict: grow would take these recordings"} {
		if !strings.Contains(out, part) {
			t.Errorf("check does not say %q:\n%s", part, out)
		}
	}
}

// Check goes on after a fault, and its exit code is that of grow.
func TestCheckListsEveryFault(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "wrong.csv", head+"a,bow,ember,train,0,1,2\n"+"b,bow,ember,train,0,1,2\nb,bow,ember,train,1,,2\n"+strings.ReplaceAll(sound, "a,", "c,"))
	o := strandwise(t, "", "check", csv, "--rate", "50", "--json")
	var got struct {
		Faults   int
		Findings []struct{ Kind, Take string }
	}
	if err := json.Unmarshal([]byte(o.out), &got); err != nil {
		t.Fatal(err)
	}
	if o.code != exitFault || got.Faults != 2 {
		t.Errorf("exit code %d, %d faults; want 1 and 2\n%s", o.code, got.Faults, o.out)
	}
	if grown := strandwise(t, "", "grow", csv, "--rate", "50", "--out", filepath.Join(dir, "set")); grown.code != exitFault {
		t.Errorf("grow takes what check says it would refuse")
	}
}

func TestCheckFindsTheSameRecordingInBothSplits(t *testing.T) {
	dir := t.TempDir()
	text := longCSV(1)
	copied := strings.ReplaceAll(strings.ReplaceAll(text[strings.Index(text, "t00"):strings.Index(text, "t01")], "t00", "again"), "train", "test")
	csv := write(t, dir, "long.csv", text+copied)
	out := must(t, "check", csv, "--rate", "50")
	if !strings.Contains(out, "take again is the same recording as take t00") || !strings.Contains(out, "flattered") {
		t.Errorf("a take that trains and is tested is not found:\n%s", out)
	}
}

func TestCheckOfOpenRecordings(t *testing.T) {
	dir := opendata.Path(t, "sets", "UTD_MHAD_inertial")
	out := must(t, "check", filepath.Join(dir, "train.csv"), filepath.Join(dir, "test.csv"), "--rate", "50", "--unit", "c0-c2=g", "--unit", "c3-c5=deg/s", "--json")
	var got struct {
		Labels   []struct{ Label, Subject string }
		Findings []struct{ Kind, Channel, Text string }
	}
	if err := json.Unmarshal([]byte(out), &got); err != nil {
		t.Fatal(err)
	}
	if len(got.Labels) != 8*27 {
		t.Errorf("%d pairs of label and subject, want 8 subjects × 27 labels", len(got.Labels))
	}
	clipped := false
	for _, f := range got.Findings {
		clipped = clipped || f.Kind == "clipping" && f.Channel == "c0" && strings.Contains(f.Text, "8 g")
	}
	if !clipped {
		t.Error("clipping of the accelerometer at 8 g is not reported (SOURCES.md of the open data)")
	}
}
