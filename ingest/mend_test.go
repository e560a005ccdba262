package ingest_test

import (
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"strandwise/ingest"
	"strandwise/ingest/fault"
)

// sine is an invented log of a 1 Hz sine at 50 Hz in milliseconds, jittered,
// and of a second sensor at 25 Hz. Frames are left out, doubled and swapped as
// told.
func sine(leaveOut map[int]bool, double, swap int) string {
	rows := []string{}
	for i := range 200 {
		if leaveOut[i] {
			continue
		}
		ms := 20*i + 3*(i*7%3-1)
		s := float64(ms) / 1000
		slow := ""
		if i%2 == 0 {
			slow = fmt.Sprintf("%.6f", math.Cos(2*math.Pi*s))
		}
		row := fmt.Sprintf("a,wave,%d,%.6f,%s", ms, math.Sin(2*math.Pi*s), slow)
		rows = append(rows, row)
		if i == double {
			rows = append(rows, row)
		}
	}
	if swap > 0 {
		rows[swap], rows[swap+1] = rows[swap+1], rows[swap]
	}
	return "take,label,time_ms,fast,slow\n" + strings.Join(rows, "\n") + "\n"
}

func TestRepairBringsAKnownSineOntoAUniformClock(t *testing.T) {
	path := filepath.Join(t.TempDir(), "log.csv")
	if err := os.WriteFile(path, []byte(sine(map[int]bool{50: true, 51: true, 120: true}, 30, 80)), 0o666); err != nil {
		t.Fatal(err)
	}
	r, err := ingest.Open(ingest.Options{Paths: []string{path}, Repair: ingest.Repair{Clock: true, Order: true, Merge: true, Cubic: true}})
	if err != nil {
		t.Fatal(err)
	}
	n := 0
	for take, err := range r.Takes() {
		if err != nil {
			t.Fatal(err)
		}
		n++
		sum := 0.0
		for i, s := range take.Time {
			fast, slow := take.Frame(i)[0]-math.Sin(2*math.Pi*s), take.Frame(i)[1]-math.Cos(2*math.Pi*s)
			sum += fast*fast + slow*slow
			if step := s - take.Time[0] - float64(i)/50; math.Abs(step) > 1e-3 {
				t.Fatalf("frame %d stands %g s off a clock of 50 Hz", i, step)
			}
		}
		if rms := math.Sqrt(sum / float64(2*take.Frames())); rms > 0.01 {
			t.Errorf("root mean square error %g of an amplitude of 1, want below 0.01", rms)
		}
	}
	// Each sensor has frames of its own: the fast one lacks 50, 51 and 120, the
	// slow one 50 and 120.
	got := r.Repairs()
	if n != 1 || got.Recordings != 1 || got.Sorted != 1 || got.Merged != 1 || got.Gaps != 4 || got.Made != 5 || got.Splits != 0 {
		t.Errorf("%d takes, %+v; want 1 take, 1 frame sorted, 1 merged, 4 gaps of 5 frames filled", n, got)
	}
}

func TestLongGapIsRefusedOrSplit(t *testing.T) {
	gap := map[int]bool{}
	for i := 100; i < 110; i++ {
		gap[i] = true
	}
	path := filepath.Join(t.TempDir(), "log.csv")
	if err := os.WriteFile(path, []byte(sine(gap, -1, 0)), 0o666); err != nil {
		t.Fatal(err)
	}
	for _, tc := range []struct {
		repair ingest.Repair
		takes  []string // ids
		says   string
	}{
		{ingest.Repair{}, nil, "no value"},
		{ingest.Repair{Clock: true}, nil, "--repair split"},
		{ingest.Repair{Split: true}, []string{"a#1", "a#2"}, ""},
		{ingest.Repair{Clock: true, LongestGap: 12}, []string{"a"}, ""},
	} {
		takes, _, err := read(t, ingest.Options{Paths: []string{path}, Repair: tc.repair})
		var f *fault.Error
		if tc.takes == nil {
			if !errors.As(err, &f) || !strings.Contains(err.Error(), tc.says) || f.Line == 0 {
				t.Errorf("%+v: error %v, want one with a line that says %q", tc.repair, err, tc.says)
			}
			continue
		}
		var ids []string
		for _, take := range takes {
			ids = append(ids, take.ID)
		}
		if err != nil || fmt.Sprint(ids) != fmt.Sprint(tc.takes) {
			t.Errorf("%+v: takes %v, error %v; want %v", tc.repair, ids, err, tc.takes)
		}
	}
}

func TestLeaveOutKeepsAColumnOut(t *testing.T) {
	path := filepath.Join(t.TempDir(), "log.csv")
	if err := os.WriteFile(path, []byte("take,label,time_s,ax,battery,remark\na,wave,0,1,90,\na,wave,0.02,2,90,late\na,wave,0.04,3,90,\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	takes, _, err := read(t, ingest.Options{Paths: []string{path}, LeaveOut: []string{"battery", "rem*"}})
	if err != nil || len(takes) != 1 || fmt.Sprint(takes[0].Layout.Names()) != "[ax]" {
		t.Errorf("error %v, takes %v", err, takes)
	}
	_, _, err = read(t, ingest.Options{Paths: []string{path}, LeaveOut: []string{"battery", "remark", "volts"}})
	var usage *ingest.UsageError
	if !errors.As(err, &usage) || !strings.Contains(err.Error(), "volts") {
		t.Errorf("leaving out a column that is not there: %v", err)
	}
}
