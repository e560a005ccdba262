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

// longLog is an invented log at 50 Hz of movements of 2 s with rests of 2 s
// between them, beginning and ending at rest. Its clock counts from start.
func longLog(movements int, start float64) string {
	var b strings.Builder
	b.WriteString("time_s,ax,ay,az\n")
	for i := range (4*movements + 2) * 50 {
		s := float64(i) / 50
		x := 0.002 * math.Sin(float64(i)*1.7)
		if phase := math.Mod(s, 4); phase >= 2 {
			x += 3 * math.Sin(math.Pi*(phase-2)/2) * math.Sin(2*math.Pi*1.5*s)
		}
		fmt.Fprintf(&b, "%.2f,%.5f,%.5f,%.5f\n", start+s, x, 0.5*x, 9.8-0.2*x)
	}
	return b.String()
}

func files(t *testing.T, texts map[string]string) string {
	t.Helper()
	dir := t.TempDir()
	for name, text := range texts {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

func TestAnnotationsCutALongLog(t *testing.T) {
	for name, notes := range map[string]string{
		"seconds": "start,end,label,subject\n2,4,bow,ember\n6,8,wave,pim\n",
		"dates":   "label,subject,start,end\nbow,ember,2023-11-14T22:13:22Z,2023-11-14T22:13:24Z\nwave,pim,2023-11-14T22:13:26Z,2023-11-14T22:13:28Z\n",
	} {
		t.Run(name, func(t *testing.T) {
			start := 0.0
			if name == "dates" {
				start = 1700000000 // 2023-11-14 22:13:20 UTC
			}
			dir := files(t, map[string]string{"log.csv": longLog(3, start), "notes.csv": notes})
			takes, r, err := read(t, ingest.Options{Paths: []string{filepath.Join(dir, "log.csv")}, Annotations: filepath.Join(dir, "notes.csv")})
			if err != nil {
				t.Fatal(err)
			}
			var got []string
			for _, take := range takes {
				got = append(got, fmt.Sprintf("%s %s %s %d", take.ID, take.Label, take.Subject, take.Frames()))
			}
			if want := "[log#1 bow ember 101 log#2 wave pim 101]"; fmt.Sprint(got) != want {
				t.Errorf("takes %v, want %v", got, want)
			}
			if r.Repairs().Cuts != 2 || len(r.Files()) != 2 {
				t.Errorf("%d cuts, %d files; want 2 and 2", r.Repairs().Cuts, len(r.Files()))
			}
		})
	}
}

func TestAnnotationsThatDoNotFitAreFaults(t *testing.T) {
	for name, tc := range map[string]struct{ notes, says string }{
		"overlap":      {"start,end,label\n2,4,bow\n3,5,wave\n", "notes.csv:3"},
		"out of range": {"start,end,label\n2,400,bow\n", "notes.csv:2"},
		"reversed":     {"start,end,label\n4,2,bow\n", "notes.csv:2"},
	} {
		dir := files(t, map[string]string{"log.csv": longLog(3, 0), "notes.csv": tc.notes})
		_, _, err := read(t, ingest.Options{Paths: []string{filepath.Join(dir, "log.csv")}, Annotations: filepath.Join(dir, "notes.csv")})
		var f *fault.Error
		if !errors.As(err, &f) || !strings.Contains(err.Error(), tc.says) {
			t.Errorf("%s: error %v, want a fault at %s", name, err, tc.says)
		}
	}
}

func TestAnnotationsOfSeveralRecordingsAreRefused(t *testing.T) {
	dir := files(t, map[string]string{"a.csv": longLog(3, 0), "b.csv": longLog(3, 0), "notes.txt": "start,end,label\n2,4,bow\n"})
	_, _, err := read(t, ingest.Options{Paths: []string{filepath.Join(dir, "a.csv"), filepath.Join(dir, "b.csv")}, Annotations: filepath.Join(dir, "notes.txt")})
	var usage *ingest.UsageError
	if !errors.As(err, &usage) || usage.Key != "annotations" {
		t.Errorf("error %v, want wrong usage of annotations", err)
	}
}

func TestCutAtRest(t *testing.T) {
	dir := files(t, map[string]string{"log.csv": longLog(3, 0)})
	takes, r, err := read(t, ingest.Options{Paths: []string{filepath.Join(dir, "log.csv")}, Cut: ingest.ByRest, Label: "wave"})
	if err != nil || len(takes) != 3 {
		t.Fatalf("%d takes of 3 movements, error %v", len(takes), err)
	}
	for i, take := range takes {
		if begin := float64(4*i + 2); math.Abs(take.Time[0]-begin) > 0.3 || math.Abs(take.Time[take.Frames()-1]-begin-2) > 0.3 {
			t.Errorf("take %d lasts from %.2f to %.2f s, the movement from %g to %g s", i, take.Time[0], take.Time[take.Frames()-1], begin, begin+2)
		}
	}
	if !strings.Contains(strings.Join(r.Notices(), "\n"), "comes to rest") {
		t.Errorf("the cuts are not reported: %v", r.Notices())
	}
}
